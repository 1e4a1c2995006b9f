package converter

import (
	"fmt"
	"math"
)

// noReactor is the total reactance, per cent, that stands for a bridge with no
// reactor of its own behind an ordinary supply.
const noReactor = 0.5

// byReactance is six-pulse input current against total source and line
// reactance, per cent of the load's rating: reactance, then orders 5, 7, 11,
// 13, 17, 19. Source: trade table of a drive application handbook, from
// memory (medium confidence).
var byReactance = [][7]float64{
	{0.5, 80, 60, 18, 10, 7, 6},
	{1, 60, 37, 12, 7.5, 5, 4},
	{1.5, 51, 28, 11, 6.5, 4, 3},
	{2, 46, 22, 9, 6, 4, 3},
	{3, 40, 17, 7.3, 4.9, 3, 2.2},
	{4, 34, 13, 6.3, 4.2, 2.4, 2},
	{5, 32, 12, 5.8, 3.9, 2.2, 0.8},
	{6, 30, 11, 5.2, 3.6, 1.8, 0.7},
}

// WithReactance returns the typical spectrum of a capacitor-smoothed six-pulse
// bridge behind the given total reactance in per cent of its rating, by linear
// interpolation; outside the table the nearest row is used.
func WithReactance(total float64) Model {
	last := len(byReactance) - 1
	total = math.Max(byReactance[0][0], math.Min(total, byReactance[last][0]))
	i := 1
	for i < last && total > byReactance[i][0] {
		i++
	}
	lo, hi := byReactance[i-1], byReactance[i]
	t := (total - lo[0]) / (hi[0] - lo[0])
	percent := map[int]float64{}
	for k, h := range [...]int{5, 7, 11, 13, 17, 19} {
		percent[h] = lo[k+1] + t*(hi[k+1]-lo[k+1])
	}
	return Model{Title: fmt.Sprintf("Six-pulse bridge, %.3g %% reactance", total), Lines: bridge(percent), ThreePhase: true, Source: reactance, Mark: "memory"}
}

// ReactanceOf returns the total reactance, per cent, that a typical six-pulse
// spectrum stands for; false for any other name.
func ReactanceOf(name string) (float64, bool) {
	switch name {
	case "six-pulse":
		return noReactor, true
	case "six-pulse-3pct":
		return 3, true
	case "six-pulse-5pct":
		return 5, true
	}
	return 0, false
}
