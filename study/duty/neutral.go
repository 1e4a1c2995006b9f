package duty

import (
	"math"

	"quietbus/study/phasor"
)

// NeutralNeed is what a four- or five-core cable needs on account of the
// third-harmonic current in its neutral.
type NeutralNeed struct {
	LineA     float64 // rms line current
	NeutralA  float64 // three times the line's triplen current
	Triplen   float64 // triplen current over the line current
	Factor    float64 // reduction factor of the ampacity
	ByNeutral bool    // the neutral current decides the size, not the line's
	RequiredA float64 // ampacity, before other factors, that the cable needs
	Rule      string
	Mark      Mark
}

// Neutral applies IEC 60364-5-52:2009 Table E.52.1 (BS 7671 Table 4Aa) to a
// rms line current in A and its triplen share, both as the design load states
// them: to 15 % nothing, to 33 % the line current over 0.86, to 45 % the
// neutral current over 0.86, above the neutral current itself. The neutral
// conductor is of the same material and size as the lines (found).
func Neutral(lineA, triplenShare float64) NeutralNeed {
	n := NeutralNeed{LineA: lineA, Triplen: triplenShare, NeutralA: 3 * triplenShare * lineA, Factor: 1,
		Rule: "IEC 60364-5-52:2009 Table E.52.1", Mark: Found}
	if triplenShare > 0.15 && triplenShare <= 0.45 {
		n.Factor = 0.86
	}
	n.ByNeutral = triplenShare > 0.33
	n.RequiredA = lineA / n.Factor
	if n.ByNeutral {
		n.RequiredA = n.NeutralA / n.Factor
	}
	return n
}

// NeutralOf applies Neutral to the spectrum of a line current in a balanced
// four-wire circuit: the line current is its rms value and the triplen share
// that of all odd multiples of three together, which add in the neutral.
func NeutralOf(line phasor.Spectrum) NeutralNeed {
	var triplen float64
	for h := 3; h < len(line); h += 6 {
		triplen += square(line[h])
	}
	rms := phasor.RMS(line)
	if rms == 0 {
		return Neutral(0, 0)
	}
	return Neutral(rms, math.Sqrt(triplen)/rms)
}

// NECFactor is the ampacity factor where the neutral of a four-wire wye circuit
// with mostly non-linear load counts as a fourth current-carrying conductor
// (NFPA 70 table 310.15(C)(1), 2020 and 2023 numbering, memory, high).
const NECFactor = 0.80
