package piecewise

import "math"

// A Symmetry says that under a fitting supply every Parts-th of the period is
// like the one before with the phases exchanged and reversed:
//
//	u_q(t + T/Parts) = -u_Phase[q](t)
//	c_b(t + T/Parts) = Sign[b] c_From[b](t)
//
// while capacitor voltages and constants repeat. Unit i then is in the state of
// unit UnitFrom[i] with upper and lower valves exchanged and, in a unit of
// three legs, leg x in that of leg Legs[x]. Only one part is then stepped. A
// disturbance that breaks the symmetry still shows in the multiplier.
type Symmetry struct {
	Parts    int
	Phase    [3]int
	From     []int
	Sign     []float64
	UnitFrom []int
	Legs     []int
}

// turned implementations: polarity exchanged, legs permuted.

func (a Always) turned(uint64, []int) uint64 { return 0 }

func (v Valve) turned(state uint64, _ []int) uint64 { return exchange(state, 1, nil) }

func (b Bridge) turned(state uint64, legs []int) uint64 { return exchange(state, len(b.AC), legs) }

func (s Star) turned(state uint64, legs []int) uint64 { return exchange(state, 3, legs) }

// exchange swaps the halves of a state of n + n bits and takes bit x of each
// from bit legs[x].
func exchange(state uint64, n int, legs []int) uint64 {
	var out uint64
	for x := 0; x < n; x++ {
		from := x
		if len(legs) == n {
			from = legs[x]
		}
		out |= state >> (n + from) & 1 << x
		out |= state >> from & 1 << (n + x)
	}
	return out
}

// turn returns the key one part later.
func (y *Symmetry) turn(c *Circuit, key uint64) uint64 {
	var states [64]uint64
	shift := uint(0)
	for i, u := range c.Units {
		states[i] = key >> shift & (1<<u.bits() - 1)
		shift += u.bits()
	}
	var out uint64
	shift = 0
	for i, u := range c.Units {
		out |= u.turned(states[y.UnitFrom[i]], y.Legs) << shift
		shift += u.bits()
	}
	return out
}

// back returns the key one part earlier.
func (y *Symmetry) back(c *Circuit, key uint64) uint64 {
	for i := 1; i < y.Parts; i++ {
		key = y.turn(c, key)
	}
	return key
}

// fits reports whether the supply has the symmetry, to 1e-9 of its fundamental.
func (y *Symmetry) fits(s *supply) bool {
	var size float64
	for q := range s.first {
		size = math.Max(size, cabs1(s.first[q]))
	}
	for i, h := range s.orders {
		z := turn(2 * math.Pi * float64(h) / float64(y.Parts))
		for q, p := range y.Phase {
			if cabs1(s.peak[q][i]*z+s.peak[p][i]) > 1e-9*size {
				return false
			}
		}
	}
	return true
}

// choose takes the finest symmetry that the supply allows.
func (e *engine) choose() {
	e.sym, e.parts = nil, 1
	for i := range e.c.Symmetries {
		if y := &e.c.Symmetries[i]; y.Parts > e.parts && y.fits(&e.s) {
			e.sym, e.parts = y, y.Parts
		}
	}
}

// ahead writes the full state one part after s into dst.
func (e *engine) ahead(s, dst []float64) {
	copy(dst, s)
	if e.sym == nil {
		return
	}
	for b, from := range e.sym.From {
		dst[b] = e.sym.Sign[b] * s[from]
	}
}

// home brings the state at the end of the pass back by the part that was
// stepped, into the frame of its start: its mode, its state, and the matrix of
// that map. The mode is nil when it cannot be.
func (e *engine) home() (*mode, []float64, []float64) {
	end := &e.segs[len(e.segs)-1]
	m := end.m
	if e.sym == nil {
		return m, end.xb, nil
	}
	to := e.mode(e.sym.back(e.c, m.key))
	if to == nil {
		return nil, nil, nil
	}
	e.homeH = sized(e.homeH, to.d*m.d)
	for j, b := range to.pick {
		for i, from := range e.sym.From {
			if from == b {
				for k := 0; k < m.ny; k++ {
					e.homeH[j*m.d+k] = e.sym.Sign[i] * m.T[i*m.ny+k]
				}
			}
		}
	}
	for j := 0; j < to.d-to.ny; j++ {
		e.homeH[(to.ny+j)*m.d+m.ny+j] = 1
	}
	e.homeX = sized(e.homeX, to.d)
	for j := range e.homeX {
		e.homeX[j] = dot(e.homeH[j*m.d:(j+1)*m.d], end.xb)
	}
	return to, e.homeX, e.homeH
}
