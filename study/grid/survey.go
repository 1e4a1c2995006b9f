package grid

import (
	"context"
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// Survey looks into every bus of one sequence at once, order after order,
// without allocating. It is not safe for concurrent use.
type Survey struct {
	s         *System
	q         phasor.Sequence
	f         *factors
	prim      []primitive
	diag, low []complex128
	z         []complex128 // by node
}

// NewSurvey returns a survey of one sequence.
func (s *System) NewSurvey(q phasor.Sequence) *Survey {
	return &Survey{s: s, q: q, f: s.pat.newFactors(), prim: make([]primitive, len(s.net.elements)),
		diag: make([]complex128, s.nodes), low: make([]complex128, len(s.pat.row)), z: make([]complex128, s.nodes)}
}

// At returns the driving-point impedance of each bus at order h, ohm, into dst
// when it is long enough: zero for buses that take no part (no supply, or
// nothing ties them to earth in this sequence).
func (v *Survey) At(h float64, dst []complex128) ([]complex128, error) {
	s := v.s
	if err := v.nodes(h); err != nil {
		return nil, err
	}
	dst = dst[:0]
	for _, k := range s.node {
		dst = append(dst, v.z[k])
	}
	return dst, nil
}

// nodes fills in v.z by node.
func (v *Survey) nodes(h float64) error {
	s := v.s
	s.admit(v.prim, h, v.q)
	if s.factor(v.f, v.prim, v.q) {
		s.pat.inverse(v.f, v.diag, v.low)
		for k := range v.z {
			v.z[k] = 0
			if !s.pinned(k, v.q) {
				v.z[k] = v.diag[s.pat.rank[k]] * complex(s.scale[k]*s.scale[k], 0)
			}
		}
		return nil
	}
	one, out := make([]complex128, s.nodes), make([]complex128, s.nodes)
	for k := range v.z {
		v.z[k] = 0
		if s.pinned(k, v.q) {
			continue
		}
		one[k] = 1
		if !s.dense(v.prim, v.q, one, out) {
			return &SingularError{Sequence: v.q, Order: int(math.Round(h))}
		}
		one[k], v.z[k] = 0, out[k]
	}
	return nil
}

// A SurveyCurve is the driving-point impedance of every bus against order.
type SurveyCurve struct {
	Orders []float64
	Z      [][]complex128 // by order and bus, ohm
}

// Adaptive surveys one range of orders. Where the impedance of any bus turns
// fast the step is halved, as in ScanAdaptive, so that no narrow peak is
// missed at any bus.
func (v *Survey) Adaptive(ctx context.Context, from, to float64) (*SurveyCurve, error) {
	c := &SurveyCurve{}
	at := func(h float64) ([]complex128, error) {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		return v.At(h, nil)
	}
	add := func(h float64, z []complex128) { c.Orders, c.Z = append(c.Orders, h), append(c.Z, z) }
	h0 := from
	z0, err := at(h0)
	if err != nil {
		return nil, err
	}
	add(h0, z0)
	var between func(h0 float64, z0 []complex128, h1 float64, z1 []complex128, depth int) error
	between = func(h0 float64, z0 []complex128, h1 float64, z1 []complex128, depth int) error {
		if depth > 12 || !turnsFast(z0, z1) {
			return nil
		}
		h := (h0 + h1) / 2
		z, err := at(h)
		if err != nil {
			return err
		}
		if err := between(h0, z0, h, z, depth+1); err != nil {
			return err
		}
		add(h, z)
		return between(h, z, h1, z1, depth+1)
	}
	steps := max(1, int(math.Ceil((to-from)/0.1)))
	for i := 1; i <= steps; i++ {
		h1 := from + (to-from)*float64(i)/float64(steps)
		z1, err := at(h1)
		if err != nil {
			return nil, err
		}
		if err := between(h0, z0, h1, z1, 0); err != nil {
			return nil, err
		}
		add(h1, z1)
		h0, z0 = h1, z1
	}
	return c, nil
}

// turnsFast reports whether any of the impedances differs by more than 0.12
// rad or 12 per cent between two orders.
func turnsFast(a, b []complex128) bool {
	for k, x := range a {
		if x == 0 {
			continue
		}
		r := b[k] / x
		// |r| within e^±0.12 and its angle within 0.12 rad, without logarithms
		size := real(r)*real(r) + imag(r)*imag(r)
		if !(size > 0.7866 && size < 1.2713) || !(real(r) > 0) || math.Abs(imag(r)) > 0.12058*real(r) {
			return true
		}
	}
	return false
}

// peaks returns the orders at which the impedance of a bus has a maximum.
func (c *SurveyCurve) peaks(b int) []int {
	var out []int
	for i := 1; i+1 < len(c.Z); i++ {
		a, m, z := cmplx.Abs(c.Z[i-1][b]), cmplx.Abs(c.Z[i][b]), cmplx.Abs(c.Z[i+1][b])
		if m > a && m >= z {
			out = append(out, i)
		}
	}
	return out
}
