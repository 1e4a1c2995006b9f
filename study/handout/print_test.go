package handout

import (
	"time"
)

var testDate = time.Date(2031, 2, 3, 4, 5, 6, 0, time.UTC)
