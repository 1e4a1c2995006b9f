package grid

import (
	"context"
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// ScanCurve is a driving-point impedance against order with its extrema.
type ScanCurve struct {
	Orders  []float64
	Z       []complex128
	Peaks   []Extremum // parallel resonances
	Valleys []Extremum // series resonances
}

// Extremum is a peak or valley of |Z|.
type Extremum struct {
	Order float64
	Ohm   float64
	Q     float64 // order over the width at 3 dB, zero where it cannot be told
}

// ScanAdaptive scans from one order to another. Where impedance turns fast it
// halves the step until neighbouring values lie within a few per cent of a
// straight line, so that a narrow peak is resolved; peaks and valleys are then
// refined by golden section on |Z|.
func (s *System) ScanAdaptive(ctx context.Context, bus BusID, q phasor.Sequence, from, to float64) (*ScanCurve, error) {
	return s.adaptive(ctx, s.NewScanner(bus, q).At, from, to)
}

// TransferAdaptive is ScanAdaptive for the voltage at another bus.
func (s *System) TransferAdaptive(ctx context.Context, bus, at BusID, q phasor.Sequence, from, to float64) (*ScanCurve, error) {
	scanner := s.NewScanner(bus, q)
	return s.adaptive(ctx, func(h float64) (complex128, error) { return scanner.Transfer(h, at) }, from, to)
}

func (s *System) adaptive(ctx context.Context, at func(float64) (complex128, error), from, to float64) (*ScanCurve, error) {
	var failed error
	z := func(h float64) complex128 {
		v, err := at(h)
		if err == nil {
			err = ctx.Err()
		}
		if err != nil {
			failed = err
			return cmplx.NaN()
		}
		return v
	}
	c := &ScanCurve{}
	steps := int(math.Ceil((to - from) / 0.1))
	h0, z0 := from, z(from)
	c.Orders, c.Z = append(c.Orders, h0), append(c.Z, z0)
	for i := 1; i <= steps && failed == nil; i++ {
		h1 := from + (to-from)*float64(i)/float64(steps)
		z1 := z(h1)
		s.between(c, z, h0, z0, h1, z1, 0)
		c.Orders, c.Z = append(c.Orders, h1), append(c.Z, z1)
		h0, z0 = h1, z1
	}
	if failed != nil {
		return nil, failed
	}
	c.extrema(z)
	return c, failed
}

// between adds the points that the stretch from h0 to h1 needs.
func (s *System) between(c *ScanCurve, z func(float64) complex128, h0 float64, z0 complex128, h1 float64, z1 complex128, depth int) {
	if depth > 12 {
		return
	}
	turn := cmplx.Phase(z1 / z0)
	if math.Abs(turn) < 0.12 && math.Abs(math.Log(cmplx.Abs(z1)/cmplx.Abs(z0))) < 0.12 {
		return
	}
	h := (h0 + h1) / 2
	v := z(h)
	s.between(c, z, h0, z0, h, v, depth+1)
	c.Orders, c.Z = append(c.Orders, h), append(c.Z, v)
	s.between(c, z, h, v, h1, z1, depth+1)
}

func (c *ScanCurve) extrema(z func(float64) complex128) {
	for i := 1; i+1 < len(c.Z); i++ {
		a, b, d := cmplx.Abs(c.Z[i-1]), cmplx.Abs(c.Z[i]), cmplx.Abs(c.Z[i+1])
		switch {
		case b > a && b >= d:
			c.Peaks = append(c.Peaks, refine(z, c.Orders[i-1], c.Orders[i+1], 1))
		case b < a && b <= d:
			c.Valleys = append(c.Valleys, refine(z, c.Orders[i-1], c.Orders[i+1], -1))
		}
	}
}

// refine finds the extremum of |Z| between two orders and its Q from the slope
// of the phase: Q = (h/2) |d arg Z / dh|.
func refine(z func(float64) complex128, lo, hi, sign float64) Extremum {
	const golden = 0.6180339887498949
	for range 30 {
		a, b := hi-golden*(hi-lo), lo+golden*(hi-lo)
		if sign*cmplx.Abs(z(a)) > sign*cmplx.Abs(z(b)) {
			hi = b
		} else {
			lo = a
		}
	}
	h := (lo + hi) / 2
	d := h * 1e-6
	slope := cmplx.Phase(z(h+d)/z(h-d)) / (2 * d)
	return Extremum{Order: h, Ohm: cmplx.Abs(z(h)), Q: h / 2 * math.Abs(slope)}
}
