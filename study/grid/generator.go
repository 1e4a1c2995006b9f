package grid

import (
	"math"

	"quietbus/study/phasor"
)

// Generator is a synchronous machine that runs in parallel with a supply: at
// order 1 it delivers fixed power in the positive sequence; at other orders it
// is its subtransient reactance, in the negative sequence its negative-sequence
// reactance, both rising with the order, the resistance with its square root.
// An earthed star point passes the zero sequence (IEEE 399; CIGRE WG 36-05:
// from memory).
type Generator struct {
	Name       string
	Bus        BusID
	P, Q       float64    // delivered, W and var
	R          float64    // armature resistance, ohm a phase at order 1
	X, X2, X0  float64    // subtransient, negative and zero sequence, ohm at order 1
	Earthed    bool       // star point earthed
	NeutralOhm complex128 // between star point and earth, ohm at order 1
}

func (e *Generator) label() string { return e.Name }
func (e *Generator) ends() []BusID { return []BusID{e.Bus} }
func (e *Generator) series() bool  { return false }
func (e *Generator) check() *ElementError {
	if err := positive(e.Name, "subtransientPercent", e.X); err != nil {
		return err
	}
	return positive(e.Name, "negativePercent", e.X2)
}

func (e *Generator) admit(_, h float64, q phasor.Sequence) primitive {
	r := e.R * math.Sqrt(h)
	switch q {
	case phasor.Zero:
		if !e.Earthed {
			return primitive{}
		}
		return primitive{y00: 1 / (complex(r, e.X0*h) + 3*at(e.NeutralOhm, h))}
	case phasor.Negative:
		return primitive{y00: reciprocal(complex(r, e.X2*h))}
	}
	if h == 1 {
		return primitive{}
	}
	return primitive{y00: reciprocal(complex(r, e.X*h))}
}

func (e *Generator) draw(v [3]complex128) [3]complex128 {
	return (&PowerLoad{P: -e.P, Q: -e.Q}).draw(v)
}
