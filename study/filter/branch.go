// Package filter designs passive filters and capacitor banks from their rating
// and tells what they bear, and models the active filter.
//
// A Branch is one phase of a balanced three-phase shunt in its star
// equivalent. A rating in kvar is the output of the whole branch at order 1
// and the stated line-to-line voltage; the capacitor's own voltage and kvar
// are derived from it, since a series reactor raises the capacitor's voltage.
//
// Formulas: Arrillaga and Watson, Power System Harmonics, 2nd ed., 2003;
// Dugan, McGranaghan, Santoso, Beaty, Electrical Power Systems Quality, 2nd
// ed., 2003; IEEE 1531-2003.
package filter

import (
	"fmt"
	"math"
	"math/cmplx"
)

// Branch is one phase of a passive filter. Reactances are in ohm at order 1;
// zero means that the part is absent.
type Branch struct {
	Kind string  // "bank", "detuned", "single-tuned", "high-pass"
	F1   float64 // fundamental, Hz
	Xc   float64 // main capacitor
	Rc   float64 // loss resistance in series with it
	Xl   float64 // reactor
	Rl   float64 // reactor's series resistance, constant with order
	Rp   float64 // damping resistor across the reactor; 0 for none
}

// Error says which rating cannot be built and why.
type Error struct{ Field, Problem string }

func (e *Error) Error() string { return e.Field + " " + e.Problem }

func need(field string, v float64) error {
	if !(v > 0) || math.IsInf(v, 0) {
		return &Error{field, fmt.Sprintf("is %v; it must be above zero", v)}
	}
	return nil
}

func rating(kvar, v, f1 float64) error {
	for _, c := range []struct {
		field string
		v     float64
	}{{"output", kvar}, {"voltage", v}, {"frequency", f1}} {
		if err := need(c.field, c.v); err != nil {
			return err
		}
	}
	return nil
}

// Bank returns a plain capacitor bank of the given output (var) at v volts
// line to line, with a capacitor loss in W per var.
func Bank(output, v, f1, lossPerVar float64) (*Branch, error) {
	if err := rating(output, v, f1); err != nil {
		return nil, err
	}
	xc := v * v / output
	return &Branch{Kind: "bank", F1: f1, Xc: xc, Rc: lossPerVar * xc}, nil
}

// Detuned returns a bank behind a reactor of share p of the capacitor's
// reactance (0.07 for 7 %), with reactor quality q = X/R at order 1. It
// resonates at order 1/sqrt(p).
func Detuned(output, v, f1, p, q, lossPerVar float64) (*Branch, error) {
	if err := rating(output, v, f1); err != nil {
		return nil, err
	}
	if !(p > 0 && p < 1) {
		return nil, &Error{"detuning", fmt.Sprintf("is %.3g %%; it must lie between 0 and 100 %%", 100*p)}
	}
	if err := need("reactor X/R", q); err != nil {
		return nil, err
	}
	xc := v * v / output / (1 - p)
	return &Branch{Kind: "detuned", F1: f1, Xc: xc, Rc: lossPerVar * xc, Xl: p * xc, Rl: p * xc / q}, nil
}

// SingleTuned returns a filter tuned to order n: XL = XC/n^2, R = n XL/Q, with
// the quality factor Q at the tuned order.
func SingleTuned(output, v, f1, n, q float64) (*Branch, error) {
	if err := tuned(output, v, f1, n, q); err != nil {
		return nil, err
	}
	xc := v * v / output * n * n / (n*n - 1)
	xl := xc / (n * n)
	return &Branch{Kind: "single-tuned", F1: f1, Xc: xc, Xl: xl, Rl: n * xl / q}, nil
}

// HighPass returns a second-order high-pass: the same L and C, with R = Q n XL
// in parallel with the reactor.
func HighPass(output, v, f1, n, q float64) (*Branch, error) {
	if err := tuned(output, v, f1, n, q); err != nil {
		return nil, err
	}
	xc := v * v / output * n * n / (n*n - 1)
	xl := xc / (n * n)
	return &Branch{Kind: "high-pass", F1: f1, Xc: xc, Xl: xl, Rp: q * n * xl}, nil
}

func tuned(output, v, f1, n, q float64) error {
	if err := rating(output, v, f1); err != nil {
		return err
	}
	if !(n > 1) {
		return &Error{"tuned order", fmt.Sprintf("is %v; it must be above 1, or the branch is tuned to nothing", n)}
	}
	return need("quality factor", q)
}

// coil returns the impedance of the reactor and its resistors at order h.
func (b *Branch) coil(h float64) complex128 {
	z := complex(b.Rl, h*b.Xl)
	if b.Rp > 0 && z != 0 {
		z = z * complex(b.Rp, 0) / (z + complex(b.Rp, 0))
	}
	return z
}

// Impedance returns the branch's impedance at order h, ohm.
func (b *Branch) Impedance(h float64) complex128 {
	return complex(b.Rc, -b.Xc/h) + b.coil(h)
}

// Admittance returns 1/Impedance, siemens.
func (b *Branch) Admittance(h float64) complex128 { return 1 / b.Impedance(h) }

// TunedOrder returns the order at which reactor and capacitor cancel, 0
// without a reactor.
func (b *Branch) TunedOrder() float64 {
	if b.Xl == 0 {
		return 0
	}
	return math.Sqrt(b.Xc / b.Xl)
}

// Quality returns X/R of the reactor at the tuned order, or R/X for a
// high-pass.
func (b *Branch) Quality() float64 {
	n := b.TunedOrder()
	if b.Rp > 0 {
		return b.Rp / (n * b.Xl)
	}
	if b.Rl == 0 {
		return 0
	}
	return n * b.Xl / b.Rl
}

// Part is one component of a branch, per phase of the star equivalent.
type Part struct {
	Name, Symbol string
	Value        float64 // F, H or ohm
}

// Parts returns the branch's components.
func (b *Branch) Parts() []Part {
	w := 2 * math.Pi * b.F1
	parts := []Part{{"capacitor", "C", 1 / (w * b.Xc)}}
	if b.Xl > 0 {
		parts = append(parts, Part{"reactor", "L", b.Xl / w})
	}
	if b.Rl > 0 {
		parts = append(parts, Part{"reactor resistance", "R", b.Rl})
	}
	if b.Rp > 0 {
		parts = append(parts, Part{"damping resistor", "R", b.Rp})
	}
	return parts
}

// CapacitorVoltage returns the voltage across the capacitor for a current
// through the branch at order h.
func (b *Branch) CapacitorVoltage(h float64, current complex128) complex128 {
	return current * complex(0, -b.Xc/h)
}

// Loss returns the loss of one phase in W for a current of the given order.
func (b *Branch) Loss(h float64, current complex128) float64 {
	i := cmplx.Abs(current)
	return i * i * real(b.Impedance(h))
}
