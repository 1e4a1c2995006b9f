package filter

import "math"

// preferred are usual rated line-to-line voltages of power capacitors, V
// (common practice, no source).
var preferred = []float64{
	230, 400, 415, 440, 480, 525, 600, 690, 760, 800, 900, 1000, 1200,
	2400, 3300, 3600, 4160, 4800, 6600, 7200, 7620, 8320, 11000, 12000, 12470, 13200, 13800, 14400,
	15000, 17500, 20000, 22000, 24000, 24900, 27600, 33000, 34500, 36000,
}

// PreferredVoltage returns the smallest usual capacitor rating that is at
// least v volts line to line; above the list v rounded up to whole kilovolts.
func PreferredVoltage(v float64) float64 {
	for _, p := range preferred {
		if p >= v*(1-1e-9) {
			return p
		}
	}
	return 1000 * math.Ceil(v/1000*(1-1e-9))
}

// steps are usual sizes of capacitor steps within a decade (common practice,
// no source).
var steps = []float64{1, 1.25, 1.5, 2, 2.5, 3, 4, 5, 6, 7.5, 10}

// StandardStep returns the usual sizes next below and next above an output in
// var, the same twice when it is one of them. Both are 0 for an output that is
// not above zero.
func StandardStep(output float64) (below, above float64) {
	if !(output > 0) || math.IsInf(output, 0) {
		return 0, 0
	}
	decade := math.Pow(10, math.Floor(math.Log10(output)*(1+1e-12)))
	m := output / decade
	for i, s := range steps {
		if math.Abs(s-m) < 1e-9*m {
			return s * decade, s * decade
		}
		if s > m {
			return steps[max(i-1, 0)] * decade, s * decade
		}
	}
	return 10 * decade, 10 * decade
}

// NeededVoltage returns the rated line-to-line voltage that a branch's
// capacitors need for a duty in the star equivalent: the arithmetic sum of the
// voltages by order (IEEE 1531-2003, procedure from memory, medium), which
// also keeps rms and crest within the rating.
func NeededVoltage(d Duty) float64 { return math.Sqrt(3) * d.Sum }

// RatedVar returns the nameplate var of the three phases' main capacitors at a
// rated line-to-line voltage in V.
func (b *Branch) RatedVar(v float64) float64 { return v * v / b.Xc }

// RatedCurrent returns the line current of the capacitors at order 1 and their
// rated line-to-line voltage in V, A.
func (b *Branch) RatedCurrent(v float64) float64 { return v / math.Sqrt(3) / b.Xc }
