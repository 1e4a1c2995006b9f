// Package filter designs passive filters and capacitor banks from their rating
// and tells what they bear, and models the active filter and the low-pass in
// front of an outlet.
//
// A Branch is one phase of a balanced three-phase shunt in its star
// equivalent. A rating in var is the output of the whole branch at order 1
// and the stated line-to-line voltage; the capacitor's own voltage and var
// are derived from it, since a series reactor raises the capacitor's voltage
// by n^2/(n^2 - 1).
//
// Formulas: Arrillaga and Watson, Power System Harmonics, 2nd ed., 2003;
// Dugan, McGranaghan, Santoso, Beaty, Electrical Power Systems Quality, 2nd
// ed., 2003; IEEE 1531-2003 (procedure from memory, medium). All impedances
// can be recomputed by hand (derived).
package filter

import (
	"math"
	"math/cmplx"
)

// The kinds of branch.
const (
	KindBank        = "bank"
	KindDetuned     = "detuned"
	KindSingleTuned = "single-tuned"
	KindDoubleTuned = "double-tuned"
	KindFirstOrder  = "first-order"
	KindHighPass    = "high-pass"
	KindThirdOrder  = "third-order"
	KindCType       = "c-type"
)

// Branch is one phase of a passive filter: the main capacitor in series with
// an arm and, in a double-tuned filter, a tank.
//
//	capacitor (Xc, Rc) -- arm -- tank
//	arm:  reactor (Xl, Rl) and tuning capacitor (Xc2) in series, across them
//	      the damping resistor (Rp), with a capacitor (Xc3) in series with it
//	tank: capacitor (XcT) across a reactor (XlT, RlT)
//
// Reactances are in ohm at order 1, resistances in ohm and constant with
// order; zero means that the part is absent. Use the constructors.
type Branch struct {
	Kind string  // one of the Kind constants
	F1   float64 // fundamental, Hz

	Xc, Rc float64 // main capacitor and its loss resistance
	Xl, Rl float64 // reactor and its resistance; in a first-order filter Rl is the resistor
	Xc2    float64 // in series with the reactor: C-type
	Rp     float64 // damping resistor across the arm
	Xc3    float64 // in series with the damping resistor: third-order

	XcT, XlT, RlT float64 // tank of a double-tuned filter
}

// arm returns the impedance of the arm at order h, and the current through its
// reactor for 1 A through the branch.
func (b *Branch) arm(h float64) (z, reactorShare complex128) {
	z = complex(b.Rl, h*b.Xl-b.Xc2/h)
	if b.Rp == 0 {
		return z, 1
	}
	damper := complex(b.Rp, -b.Xc3/h)
	if b.Xl == 0 && b.Rl == 0 {
		return damper, 0
	}
	reactorShare = damper / (z + damper)
	return z * reactorShare, reactorShare
}

// tank returns the impedance of the tank at order h.
func (b *Branch) tank(h float64) complex128 {
	if b.XcT == 0 {
		return 0
	}
	zl, zc := complex(b.RlT, h*b.XlT), complex(0, -b.XcT/h)
	return zl * zc / (zl + zc)
}

// Impedance returns the branch's impedance at order h, ohm.
func (b *Branch) Impedance(h float64) complex128 {
	z, _ := b.arm(h)
	return complex(b.Rc, -b.Xc/h) + z + b.tank(h)
}

// Admittance returns 1/Impedance, siemens.
func (b *Branch) Admittance(h float64) complex128 { return 1 / b.Impedance(h) }

// Output returns what the three phases give at order 1 and a line-to-line
// voltage of v volts, var. It differs from the rating by what the resistors
// change, which the rating formulas leave out.
func (b *Branch) Output(v float64) float64 { return v * v * imag(b.Admittance(1)) }

// TunedOrder returns the order at which reactor and capacitors cancel: the
// lower of the two of a double-tuned filter, 0 without a reactor.
func (b *Branch) TunedOrder() float64 {
	if orders := b.TunedOrders(); len(orders) > 0 {
		return orders[0]
	}
	return 0
}

// TunedOrders returns every order at which the reactances of the branch
// cancel, rising; nil without a reactor.
func (b *Branch) TunedOrders() []float64 {
	if b.Xl == 0 {
		return nil
	}
	if b.XcT == 0 {
		return []float64{math.Sqrt((b.Xc + b.Xc2) / b.Xl)}
	}
	// The numerator of the lossless impedance is quadratic in h^2.
	a, m, c := b.Xl*b.XlT, b.Xl*b.XcT+b.Xc*b.XlT+b.XlT*b.XcT, b.Xc*b.XcT
	root := math.Sqrt(m*m - 4*a*c)
	return []float64{math.Sqrt(2 * c / (m + root)), math.Sqrt((m + root) / (2 * a))}
}

// Quality returns the quality factor at the tuned order: X/R of the reactor,
// or R over the reactance of the arm where a resistor damps it. It is 0 where
// there is no reactor or no resistance.
func (b *Branch) Quality() float64 {
	n := b.TunedOrder()
	switch {
	case n == 0:
		return 0
	case b.Rp > 0:
		return b.Rp / (n*b.Xl - b.Xc2/n)
	case b.Rl == 0:
		return 0
	case b.XcT > 0:
		orders := b.TunedOrders()
		n = math.Sqrt(orders[0] * orders[1])
	}
	return n * b.Xl / b.Rl
}

// ParallelOrder returns the order of the parallel resonance with a source that
// is a reactance of xs ohm at order 1, resistances left out: where the branch
// with the source in series would be tuned. It holds for a plain bank, and for
// detuned and single-tuned branches.
func (b *Branch) ParallelOrder(xs float64) float64 { return math.Sqrt(b.Xc / (b.Xl + xs)) }

// Part is one component of a branch, per phase of the star equivalent.
type Part struct {
	Name, Symbol string
	Value        float64 // F, H or ohm
}

// Parts returns the branch's components.
func (b *Branch) Parts() []Part {
	var parts []Part
	for _, p := range b.parts() {
		if p.ohm > 0 {
			parts = append(parts, p.Part(2*math.Pi*b.F1))
		}
	}
	return parts
}

// component is a part by its ohm at order 1.
type component struct {
	name, symbol string
	ohm          float64
}

func (c component) Part(w float64) Part {
	switch c.symbol {
	case "C":
		return Part{c.name, "C", 1 / (w * c.ohm)}
	case "L":
		return Part{c.name, "L", c.ohm / w}
	}
	return Part{c.name, "R", c.ohm}
}

func (b *Branch) parts() [9]component {
	resistor := "reactor resistance"
	if b.Kind == KindFirstOrder {
		resistor = "damping resistor"
	}
	return [9]component{
		{"capacitor", "C", b.Xc}, {"reactor", "L", b.Xl}, {resistor, "R", b.Rl},
		{"tuning capacitor", "C", b.Xc2}, {"damping resistor", "R", b.Rp}, {"damping capacitor", "C", b.Xc3},
		{"tank capacitor", "C", b.XcT}, {"tank reactor", "L", b.XlT}, {"tank reactor resistance", "R", b.RlT},
	}
}

// CapacitorVoltage returns the voltage across the main capacitor for a current
// through the branch at order h.
func (b *Branch) CapacitorVoltage(h float64, current complex128) complex128 {
	return current * complex(0, -b.Xc/h)
}

// Loss returns the loss of one phase in W for a current of the given order.
func (b *Branch) Loss(h float64, current complex128) float64 {
	i := cmplx.Abs(current)
	return i * i * real(b.Impedance(h))
}
