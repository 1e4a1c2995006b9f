package converter

import (
	"fmt"
	"math"
)

// noReactor is the total reactance, per cent, that stands for a bridge with no
// reactor of its own behind an ordinary supply.
const noReactor = 0.5

// reactanceOrders are the orders that the table holds. It says nothing of
// higher ones, which are left out.
var reactanceOrders = [...]int{5, 7, 11, 13, 17, 19}

// reactanceRow is the input current of a capacitor-smoothed six-pulse bridge
// behind one total reactance.
type reactanceRow struct {
	reactance float64    // source and line, per cent of the load's rating
	percent   [6]float64 // by reactanceOrders, of order 1
	angle     [6]float64 // degrees, unwrapped from row to row
}

// byReactance: magnitudes are a trade table of input current against total
// reactance, its origin a drive application handbook (memory, medium). Angles
// are derived: steady state of a diode bridge that feeds a stiff direct voltage
// at rated power behind the same reactance, against the voltage behind it.
var byReactance = []reactanceRow{
	{0.5, [6]float64{80, 60, 18, 10, 7, 6}, [6]float64{118, 90, 194, 124, 186, 136}},
	{1, [6]float64{60, 37, 12, 7.5, 5, 4}, [6]float64{105, 69, 120, 40, 99, 8}},
	{1.5, [6]float64{51, 28, 11, 6.5, 4, 3}, [6]float64{104, 56, 99, 9, 66, -44}},
	{2, [6]float64{46, 22, 9, 6, 4, 3}, [6]float64{104, 45, 85, -18, 41, -86}},
	{3, [6]float64{40, 17, 7.3, 4.9, 3, 2.2}, [6]float64{101, 22, 62, -68, 1, -150}},
	{4, [6]float64{34, 13, 6.3, 4.2, 2.4, 2}, [6]float64{97, -1, 42, -107, -33, -195}},
	{5, [6]float64{32, 12, 5.8, 3.9, 2.2, 0.8}, [6]float64{92, -23, 24, -136, -66, -231}},
	{6, [6]float64{30, 11, 5.2, 3.6, 1.8, 0.7}, [6]float64{88, -42, 8, -160, -99, -264}},
}

// WithReactance returns the typical spectrum of a capacitor-smoothed six-pulse
// bridge behind a total reactance, source and line together, in per cent of
// the load's rating: magnitudes and angles interpolated linearly in the trade
// table. Outside 0.5 to 6 % the nearest row is used and the source says so.
func WithReactance(total float64) Model {
	first, last := byReactance[0].reactance, byReactance[len(byReactance)-1].reactance
	m := Model{ThreePhase: true, Mark: "memory",
		Title:  fmt.Sprintf("Six-pulse drive, %.3g %% reactance", total),
		Source: "trade table of drive input current against total reactance, from memory, orders to 19" + stiff}
	if !(total >= first && total <= last) { // also when it is not a number
		at := last
		if !(total > last) {
			at = first
		}
		m.Source += fmt.Sprintf("; the table holds %g to %g %%: its row of %g %% is used for %.3g %%", first, last, at, total)
		total = at
	}
	i := 1
	for i < len(byReactance)-1 && total > byReactance[i].reactance {
		i++
	}
	lo, hi := &byReactance[i-1], &byReactance[i]
	t := (total - lo.reactance) / (hi.reactance - lo.reactance)
	between := func(a, b float64) float64 { return a + t*(b-a) }
	for k, h := range reactanceOrders {
		m.Lines = append(m.Lines, Line{Order: h, Percent: between(lo.percent[k], hi.percent[k]), AngleDeg: wrapped(between(lo.angle[k], hi.angle[k]))})
	}
	return m
}

// wrapped returns an angle in degrees in the range -180 (not included) to 180.
func wrapped(deg float64) float64 { return 180 - math.Mod(math.Mod(180-deg, 360)+360, 360) }

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
