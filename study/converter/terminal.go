package converter

import (
	"math"

	"quietbus/study/phasor"
)

// Terminal is the supply as the converter sees it: three phase-to-neutral
// EMFs behind a resistance and inductance in each line (zero: the voltage is
// that of the bus itself) and in the neutral.
type Terminal struct {
	FrequencyHz        float64
	Voltage            [3]phasor.Spectrum // V rms, cosine reference, orders 1 and up
	SourceR, SourceL   float64            // ohm, H per line
	NeutralR, NeutralL float64            // ohm, H
}

// Balanced returns a terminal with sinusoidal balanced EMFs of the given
// line-to-line voltage (V rms), phase a at angle zero, behind R and L.
func Balanced(lineV, frequencyHz, sourceR, sourceL float64) Terminal {
	v := phasor.New(1)
	v[1] = complex(lineV/sqrt3, 0)
	return Terminal{FrequencyHz: frequencyHz, Voltage: phasor.Balanced(v), SourceR: sourceR, SourceL: sourceL}
}

// omega is the angular frequency, rad/s.
func (t Terminal) omega() float64 { return 2 * math.Pi * t.FrequencyHz }

// check refuses what no converter can be solved for.
func (t Terminal) check() error {
	if !(t.FrequencyHz > 0) || math.IsInf(t.FrequencyHz, 0) {
		return condition(BadValue, "FrequencyHz", "state the system frequency", "the frequency is %g Hz", t.FrequencyHz)
	}
	for _, f := range []struct {
		name string
		v    float64
	}{{"SourceR", t.SourceR}, {"SourceL", t.SourceL}, {"NeutralR", t.NeutralR}, {"NeutralL", t.NeutralL}} {
		if !(f.v >= 0) || math.IsInf(f.v, 0) {
			return condition(BadValue, f.name, "use zero or a positive value", "the source's value is %g", f.v)
		}
	}
	var first float64
	for _, s := range t.Voltage {
		first = math.Max(first, absolute(s.At(1)))
	}
	for q, s := range t.Voltage {
		for h, v := range s {
			if x := absolute(v); math.IsNaN(x) || math.IsInf(x, 0) {
				return condition(BadSupply, "Voltage", "check the network solution", "order %d of phase %c is not a number", h, 'a'+q)
			}
		}
		if d := absolute(s.At(0)); d > 1e-6*first {
			return condition(BadSupply, "Voltage", "remove the direct voltage from the supply", "phase %c carries a direct voltage of %.3g V, which this model does not pass on", 'a'+q, d)
		}
	}
	if !(first > 0) {
		return condition(BadSupply, "Voltage", "connect the converter to a live bus", "no phase has a fundamental voltage")
	}
	return nil
}

func absolute(z complex128) float64 { return math.Hypot(real(z), imag(z)) }
