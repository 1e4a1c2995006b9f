package filter

import (
	"math"
	"math/cmplx"
)

// LowPass is a series element, R or L, with a capacitor across the outlet
// behind it, per phase to neutral, and the load that stands there. An L-C
// low-pass amplifies near its own resonance unless R or the load damps it.
type LowPass struct {
	R, Xl float64                    // series part: ohm, and ohm at order 1; R with Xl is the choke's resistance
	Xc    float64                    // outlet capacitor, ohm at order 1
	Load  func(h float64) complex128 // admittance of the load behind it, siemens; nil for none
}

// LowPassRC returns an R-C low-pass from ohm and farad at f1 Hz.
func LowPassRC(r, c, f1 float64) (*LowPass, error) {
	if err := need("series resistance", r); err != nil {
		return nil, err
	}
	return outlet(&LowPass{R: r}, c, f1)
}

// LowPassLC returns an L-C low-pass from henry and farad at f1 Hz.
func LowPassLC(l, c, f1 float64) (*LowPass, error) {
	if err := need("series inductance", l); err != nil {
		return nil, err
	}
	return outlet(&LowPass{Xl: 2 * math.Pi * f1 * l}, c, f1)
}

func outlet(p *LowPass, c, f1 float64) (*LowPass, error) {
	if err := need("shunt capacitance", c); err != nil {
		return nil, err
	}
	if err := need("frequency", f1); err != nil {
		return nil, err
	}
	p.Xc = 1 / (2 * math.Pi * f1 * c)
	return p, nil
}

func (p *LowPass) shunt(h float64) complex128 {
	y := complex(0, h/p.Xc)
	if p.Load != nil {
		y += p.Load(h)
	}
	return y
}

// Admittance returns what the bus sees at order h, siemens.
func (p *LowPass) Admittance(h float64) complex128 {
	y := p.shunt(h)
	return y / (1 + complex(p.R, h*p.Xl)*y)
}

// Impedance returns 1/Admittance, ohm.
func (p *LowPass) Impedance(h float64) complex128 { return 1 / p.Admittance(h) }

// Ratio returns outlet voltage over bus voltage at order h: its magnitude is
// the gain and minus its angle the phase lag.
func (p *LowPass) Ratio(h float64) complex128 {
	return 1 / (1 + complex(p.R, h*p.Xl)*p.shunt(h))
}

// Lag returns the phase lag at order h in degrees.
func (p *LowPass) Lag(h float64) float64 { return -cmplx.Phase(p.Ratio(h)) * 180 / math.Pi }

// Corner returns the order of the low-pass without its load: where an R-C one
// has 1/sqrt(2) of the bus voltage, or where an L-C one resonates.
func (p *LowPass) Corner() float64 {
	if p.Xl > 0 {
		return math.Sqrt(p.Xc / p.Xl)
	}
	return p.Xc / p.R
}
