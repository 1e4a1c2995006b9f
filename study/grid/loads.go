package grid

import (
	"math"

	"quietbus/study/phasor"
)

// Load is a balanced linear load.
type Load struct {
	Name     string
	Bus      BusID
	P, Q     float64 // W, var, three-phase, at NominalV
	NominalV float64 // line to line
	AtOrder1 string  // "impedance", "power", "current"
	Model    string  // "series", "parallel", "cigre", "open"
}

func (e *Load) label() string        { return e.Name }
func (e *Load) ends() []BusID        { return []BusID{e.Bus} }
func (e *Load) series() bool         { return false }
func (e *Load) check() *ElementError { return positive(e.Name, "voltage", e.NominalV) }
func (e *Load) admit(_, h float64, q phasor.Sequence) primitive {
	if q == phasor.Zero || (h == 1 && q == phasor.Positive && e.AtOrder1 != "impedance") {
		return primitive{}
	}
	return primitive{y00: LoadAdmittance(e.Model, e.P, e.Q, e.NominalV, h)}
}

// LoadAdmittance returns the per-phase admittance of a linear load of p W and
// q var at v V line to line, at order h, by the named model. At order 1 every
// model but "open" gives p + jq exactly, save the CIGRE form.
func LoadAdmittance(model string, p, q, v, h float64) complex128 {
	v2 := v * v
	if h == 1 {
		return complex(p, -q) / complex(v2, 0)
	}
	switch model {
	case "series":
		s2 := p*p + q*q
		if s2 == 0 {
			return 0
		}
		return reciprocal(complex(v2*p/s2, h*v2*q/s2))
	case "cigre":
		if p == 0 {
			return 0
		}
		r := v2 / p
		y := reciprocal(complex(r, h*0.073*r))
		if k := 6.7*q/p - 0.74; k > 0 {
			y += reciprocal(complex(0, h*r/k))
		}
		return y
	case "open":
		return 0
	}
	y := complex(p/v2, 0)
	if q > 0 {
		y += complex(0, -q/v2/h)
	} else {
		y += complex(0, -q*h/v2)
	}
	return y
}

func (e *Load) draw(v [3]complex128) [3]complex128 {
	switch e.AtOrder1 {
	case "power":
		return (&PowerLoad{P: e.P, Q: e.Q}).draw(v)
	case "current":
		return (&PowerLoad{P: e.P, Q: e.Q, Current: math.Hypot(e.P, e.Q) / math.Sqrt(3) / e.NominalV}).draw(v)
	}
	return [3]complex128{}
}

// Motor draws P and Q at order 1, positive sequence; elsewhere it is its
// locked-rotor impedance. It passes no zero sequence.
type Motor struct {
	Name     string
	Bus      BusID
	P, Q     float64
	R, X     float64 // locked rotor, ohm a phase
	Exponent float64
}

func (e *Motor) label() string { return e.Name }
func (e *Motor) ends() []BusID { return []BusID{e.Bus} }
func (e *Motor) series() bool  { return false }
func (e *Motor) check() *ElementError {
	return positive(e.Name, "locked-rotor impedance", math.Hypot(e.R, e.X))
}
func (e *Motor) admit(_, h float64, q phasor.Sequence) primitive {
	if q == phasor.Zero || (h == 1 && q == phasor.Positive) {
		return primitive{}
	}
	return primitive{y00: reciprocal(complex(e.R*power(h, e.Exponent), e.X*h))}
}
func (e *Motor) draw(v [3]complex128) [3]complex128 { return (&PowerLoad{P: e.P, Q: e.Q}).draw(v) }
