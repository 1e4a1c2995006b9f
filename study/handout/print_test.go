package handout

import (
	"context"
	"os"
	"path/filepath"
	"testing"
	"time"
)

var testDate = time.Date(2031, 2, 3, 4, 5, 6, 0, time.UTC)

// TestLook writes the sample's handout on both papers to the folder named in
// HANDOUT_LOOK, for the eye.
func TestLook(t *testing.T) {
	dir := os.Getenv("HANDOUT_LOOK")
	if dir == "" {
		t.Skip("HANDOUT_LOOK names no folder")
	}
	for _, paper := range []Paper{A4, Letter} {
		if _, err := Write(context.Background(), filepath.Join(dir, paper.String()), sample(), Options{Paper: paper, Date: testDate}); err != nil {
			t.Fatal(err)
		}
	}
}
