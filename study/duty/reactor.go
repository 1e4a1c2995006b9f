package duty

import "quietbus/study/phasor"

// ReactorStress is what one phase of a linear reactor bears.
type ReactorStress struct {
	Current float64 // A rms
	Peak    float64 // crest current, A
	Flux    float64 // crest flux linkage L times the crest current, V s
	Loss    float64 // W, with the resistance as given at each order
}

// Reactor returns what a reactor of the given inductance (H) bears. resistance
// gives its ohm at order h; nil leaves the loss out. The core sees the crest
// flux, the winding the rms current (derived).
func Reactor(current phasor.Spectrum, inductance float64, resistance func(h int) float64) ReactorStress {
	s := ReactorStress{Current: phasor.RMS(current), Peak: phasor.Peak(current)}
	s.Flux = inductance * s.Peak
	if resistance != nil {
		for h := 1; h < len(current); h++ {
			s.Loss += resistance(h) * square(current[h])
		}
	}
	return s
}

// Check compares the rms current with the reactor's rating (A), and its crest
// with that of a sine of the rated current times the linearity that the maker
// states (1.2 means linear to 1.2 times; 0 leaves the check out). The factors
// come from the reactor's data sheet (common practice, no source).
func (s ReactorStress) Check(ratedA, linearity float64) ([]Check, error) {
	if !(ratedA > 0) {
		return nil, &InputError{"reactor's rated current", "is not known; the duty cannot be compared with it"}
	}
	const rule = "rated current of the reactor (common practice, no source)"
	checks := []Check{check("rms current, of rated", s.Current/ratedA, 1, rule, Derived)}
	if linearity > 0 {
		const sqrt2 = 1.4142135623730951
		checks = append(checks, check("crest current, of a rated sine's", s.Peak/(sqrt2*ratedA), linearity, rule, Derived))
	}
	return checks, nil
}
