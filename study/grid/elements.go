package grid

import (
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// Supply is an EMF behind an impedance.
type Supply struct {
	Name       string
	Bus        BusID
	EMF        complex128 // line to neutral, V rms, positive sequence, order 1
	R, X       float64    // ohm at order 1
	R0, X0     float64    // zero sequence; both zero: no path
	Exponent   float64    // R(h) = R h^Exponent
	Ratio      float64    // of the system frequency to nominal, 0 for one: see Network.Deviate
	Background []Background
}

// Background is the open-circuit voltage of a supply at one order (V rms).
type Background struct {
	Order    int
	Voltage  complex128
	Sequence phasor.Sequence
}

func (e *Supply) label() string { return e.Name }
func (e *Supply) ends() []BusID { return []BusID{e.Bus} }
func (e *Supply) series() bool  { return false }
func (e *Supply) check() *ElementError {
	if e.R < 0 || e.X < 0 {
		return &ElementError{e.Name, "impedance", "is negative"}
	}
	return positive(e.Name, "impedance", math.Hypot(e.R, e.X))
}
func (e *Supply) admittance(h float64, q phasor.Sequence) complex128 {
	if e.Ratio != 0 {
		h *= e.Ratio
	}
	r, x := e.R, e.X
	if q == phasor.Zero {
		r, x = e.R0, e.X0
	}
	if r == 0 && x == 0 {
		return 0
	}
	return reciprocal(complex(r*power(h, e.Exponent), x*h))
}
func (e *Supply) admit(_, h float64, q phasor.Sequence) primitive {
	return primitive{y00: e.admittance(h, q)}
}
func (e *Supply) emf(h int, q phasor.Sequence) complex128 {
	if h == 1 {
		if q == phasor.Positive {
			return e.EMF
		}
		return 0
	}
	var v complex128
	for _, b := range e.Background {
		if b.Order == h && b.Sequence == q {
			v += b.Voltage
		}
	}
	return v
}

// Transformer is a two-winding transformer. Impedances are referred to the
// low-voltage side.
type Transformer struct {
	Name      string
	HV, LV    BusID
	Ratio     float64 // line-to-line voltage ratio HV/LV, tap included
	R, X      float64 // short circuit, ohm at order 1, LV side
	Exponent  float64 // R(h) = R h^Exponent
	ZeroRatio float64 // Z0/Z1, 0 means 1
	Group     VectorGroup
	Shift     float64    // rad by which the LV positive sequence lags beyond the clock number (phase-shifting types)
	NoLoad    [2]float64 // no-load conductance and susceptance at order 1 on the LV side, siemens a phase; not in the zero sequence
	HVN, LVN  complex128 // neutral impedance at order 1, ohm
}

func (e *Transformer) label() string { return e.Name }
func (e *Transformer) ends() []BusID { return []BusID{e.HV, e.LV} }
func (e *Transformer) series() bool  { return true }
func (e *Transformer) check() *ElementError {
	if err := positive(e.Name, "ratio", e.Ratio); err != nil {
		return err
	}
	if e.R < 0 || e.X < 0 {
		return &ElementError{e.Name, "impedance", "is negative"}
	}
	return positive(e.Name, "impedance", math.Hypot(e.R, e.X))
}
func at(z complex128, h float64) complex128 { return complex(real(z), imag(z)*h) }
func (e *Transformer) admit(_, h float64, q phasor.Sequence) primitive {
	z := complex(e.R*power(h, e.Exponent), e.X*h)
	n := complex(e.Ratio, 0)
	through := func(z complex128) primitive {
		y := reciprocal(z)
		return primitive{y / (n * n), -y / n, y}
	}
	if q != phasor.Zero {
		p := through(z)
		p.y11 += complex(e.NoLoad[0], -e.NoLoad[1]/h)
		return p
	}
	if e.ZeroRatio > 0 {
		z *= complex(e.ZeroRatio, 0)
	}
	g := e.Group
	hvEarthed, lvEarthed := g.HVN && g.HV != 'D', g.LVN && g.LV != 'D'
	hvN, lvN := 3*at(e.HVN, h), 3*at(e.LVN, h)
	var p primitive
	switch {
	case g.HV == 'Y' && g.LV == 'Y' && hvEarthed && lvEarthed:
		return through(z + lvN + hvN/(n*n))
	case g.HV == 'Y' && hvEarthed && g.LV == 'D':
		p.y00 = 1 / (z*n*n + hvN)
	case g.LV == 'Y' && lvEarthed && g.HV == 'D':
		p.y11 = 1 / (z + lvN)
	}
	if g.HV == 'Z' && hvEarthed { // the halves of a zig-zag winding balance each other
		p.y00 = 1 / (z*n*n + hvN)
	}
	if g.LV == 'Z' && lvEarthed {
		p.y11 = 1 / (z + lvN)
	}
	return p
}

// power is h to the exponent, without the cost of math.Pow for a constant.
func power(h, exponent float64) float64 {
	if exponent == 0 {
		return 1
	}
	return math.Pow(h, exponent)
}

// Cable is a cable or line as a nominal pi or in its exact form.
type Cable struct {
	Name       string
	From, To   BusID
	R, X, C    float64                 // total, ohm and farad
	R0, X0, C0 float64                 // zero sequence; R0 and X0 both zero: no way through
	Skin       func(h float64) float64 // R(h)/R(1), nil for none
	Exact      bool                    // hyperbolic form of the evenly spread line instead of the nominal pi
}

func (e *Cable) label() string { return e.Name }
func (e *Cable) ends() []BusID { return []BusID{e.From, e.To} }
func (e *Cable) series() bool  { return true }
func (e *Cable) check() *ElementError {
	return positive(e.Name, "impedance", math.Hypot(e.R, e.X))
}
func (e *Cable) admit(f1, h float64, q phasor.Sequence) primitive {
	r, x, c := e.R, e.X, e.C
	if q == phasor.Zero {
		r, x, c = e.R0, e.X0, e.C0
	}
	k := 1.0
	if e.Skin != nil {
		k = e.Skin(h)
	}
	half := complex(0, math.Pi*f1*h*c)
	if r == 0 && x == 0 { // no zero-sequence way through is stated
		return primitive{y00: half, y11: half}
	}
	z := complex(r*k, x*h)
	if e.Exact && half != 0 {
		// y11 = coth(gl)/Zc, y12 = -1/(Zc sinh gl), with gl and Zc from the whole
		// series impedance and shunt admittance (Arrillaga and Watson)
		shunt := 2 * half
		gl, zc := cmplx.Sqrt(z*shunt), cmplx.Sqrt(z/shunt)
		own := 1 / (zc * cmplx.Tanh(gl))
		return primitive{own, -1 / (zc * cmplx.Sinh(gl)), own}
	}
	y := reciprocal(z)
	return primitive{y + half, -y, y + half}
}

// Shunt is a balanced three-phase shunt branch in star equivalent.
type Shunt struct {
	Name   string
	Bus    BusID
	Branch interface{ Admittance(h float64) complex128 }
	Zero   bool // passes the zero sequence
}

func (e *Shunt) label() string        { return e.Name }
func (e *Shunt) ends() []BusID        { return []BusID{e.Bus} }
func (e *Shunt) series() bool         { return false }
func (e *Shunt) check() *ElementError { return nil }
func (e *Shunt) admit(_, h float64, q phasor.Sequence) primitive {
	if q != phasor.Zero || e.Zero {
		return primitive{y00: e.Branch.Admittance(h)}
	}
	return primitive{}
}
