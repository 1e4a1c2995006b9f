package converter

import "fmt"

// power writes a power with its unit.
func power(w float64) string {
	switch {
	case w >= 1e6:
		return fmt.Sprintf("%.3g MW", w/1e6)
	case w >= 1e3:
		return fmt.Sprintf("%.3g kW", w/1e3)
	}
	return fmt.Sprintf("%.3g W", w)
}
