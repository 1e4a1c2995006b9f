package duty

import (
	"math"

	"quietbus/study/phasor"
)

// Capacitor is the rating of one capacitor unit or phase: the voltage across
// it and its var at that voltage, at F1 as rated.
type Capacitor struct {
	RatedV   float64 // rms across the unit
	RatedVar float64
}

// CapacitorStress is what a capacitor bears.
type CapacitorStress struct {
	Voltage float64 // V rms
	Peak    float64 // crest voltage, V
	Current float64 // A rms
	VarSum  float64 // sum of h V_h^2/XC, var
	VarVI   float64 // product of rms voltage and rms current, var: the larger, on the safe side
}

// Stress returns what the capacitor bears under a voltage across it. Its
// current at order h is h V_h/XC (derived).
func (c Capacitor) Stress(voltage phasor.Spectrum) CapacitorStress {
	xc := c.RatedV * c.RatedV / c.RatedVar
	var s CapacitorStress
	var i2 float64
	for h := 1; h < len(voltage); h++ {
		v2 := square(voltage[h])
		i2 += float64(h*h) * v2
		s.VarSum += float64(h) * v2 / xc
	}
	s.Voltage, s.Peak = phasor.RMS(voltage), phasor.Peak(voltage)
	s.Current = math.Sqrt(i2) / xc
	s.VarVI = s.Voltage * s.Current
	return s
}

func (c Capacitor) valid() error {
	if !(c.RatedV > 0) || !(c.RatedVar > 0) {
		return &InputError{"capacitor rating", "is not known (voltage and kvar); the duty cannot be compared with it"}
	}
	return nil
}

// IEEE18 checks a stress against the contingency limits of IEEE 18-2012 clause
// 5.3: rms voltage 110 %, crest 120 % of the crest of the rating, rms current
// 135 % and var 135 % of the rating (found). The var is rms voltage times rms
// current.
func (c Capacitor) IEEE18(s CapacitorStress) ([]Check, error) {
	if err := c.valid(); err != nil {
		return nil, err
	}
	const rule = "IEEE 18-2012 clause 5.3"
	return []Check{
		check("rms voltage, of rated", s.Voltage/c.RatedV, 1.10, rule, Found),
		check("crest voltage, of rated", s.Peak/(math.Sqrt2*c.RatedV), 1.20, rule, Found),
		check("rms current, of rated", s.Current*c.RatedV/c.RatedVar, 1.35, rule, Found),
		check("kvar, of rated", s.VarVI/c.RatedVar, 1.35, rule, Found),
	}, nil
}

// IEC60831 checks a stress against IEC 60831-1:2014 clauses 20 and 21 for
// capacitors up to 1 kV in continuous service: voltage 1.0 and current 1.3 of
// the rating (memory, high).
func (c Capacitor) IEC60831(s CapacitorStress) ([]Check, error) {
	if err := c.valid(); err != nil {
		return nil, err
	}
	return []Check{
		check("rms voltage, of rated, continuous", s.Voltage/c.RatedV, 1, "IEC 60831-1:2014 clause 20", Memory),
		check("rms current, of rated", s.Current*c.RatedV/c.RatedVar, 1.3, "IEC 60831-1:2014 clause 21", Memory),
	}, nil
}

// IEC60871 checks a stress against IEC 60871-1:2014 for capacitors above 1 kV:
// voltage 1.1 of the rating for 12 h a day (memory, medium) and current 1.3
// (memory, high).
func (c Capacitor) IEC60871(s CapacitorStress) ([]Check, error) {
	if err := c.valid(); err != nil {
		return nil, err
	}
	return []Check{
		check("rms voltage, of rated, 12 h a day", s.Voltage/c.RatedV, 1.1, "IEC 60871-1:2014", Memory),
		check("rms current, of rated", s.Current*c.RatedV/c.RatedVar, 1.3, "IEC 60871-1:2014", Memory),
	}, nil
}

// Tolerance says for how long a voltage may stand.
type Tolerance struct {
	Ratio    float64 // voltage over the rating, up to and including
	Duration string
}

// voltages60831 are the voltages of IEC 60831-1:2014 clause 20 (memory, high).
var voltages60831 = [...]Tolerance{
	{1.00, "continuous"}, {1.10, "8 h in every 24 h"}, {1.15, "30 min in every 24 h"},
	{1.20, "5 min, not above 200 times in life"}, {1.30, "1 min, not above 200 times in life"},
}

// VoltageDuration60831 says for how long a low-voltage capacitor may bear a
// voltage, given over its rating; false above 1.3, which it may not.
func VoltageDuration60831(ratio float64) (Tolerance, bool) {
	return allowed(voltages60831[:], ratio)
}

// overvoltages18 are short-time overvoltages without harmonics, about 300
// times in life (IEEE 18-1992, IEEE 1036-1992, found).
var overvoltages18 = [...]Tolerance{{1.25, "30 min"}, {1.3, "1 min"}, {1.4, "15 s"}, {1.7, "1 s"}, {2.0, "0.25 s"}, {2.2, "0.1 s"}}

// Overvoltage18 says for how long a capacitor may bear a short-time power
// frequency overvoltage, given over its rating: up to 1.1 continuously; false
// above 2.2, which it may not.
func Overvoltage18(ratio float64) (Tolerance, bool) {
	if ratio <= 1.1 {
		return Tolerance{1.1, "continuous"}, true
	}
	return allowed(overvoltages18[:], ratio)
}

func allowed(table []Tolerance, ratio float64) (Tolerance, bool) {
	for _, t := range table {
		if ratio <= t.Ratio {
			return t, true
		}
	}
	return Tolerance{}, false
}
