package piecewise

import (
	"context"
	"fmt"
	"math"
)

// A Linearisation says how the line currents of an orbit follow small changes
// of the phase voltages, all as rms phasors:
//
//	dI_k = sum over h of Direct(k, h) dV_h + Mirror(k, h) conj(dV_h)
//
// Each entry is a 3 x 3 matrix over the phases (line by voltage). Orders 1 to
// Order of both; the free parameters follow as their controls demand and the
// gates as the fundamentals turn.
type Linearisation struct {
	Order          int
	direct, mirror []complex128 // 3 Order x 3 Order
}

// At returns Direct and Mirror of current order k and voltage order h.
func (l *Linearisation) At(k, h int) (direct, mirror [3][3]complex128) {
	n := 3 * l.Order
	for p := 0; p < 3; p++ {
		for q := 0; q < 3; q++ {
			i := (3*(k-1)+p)*n + 3*(h-1) + q
			direct[p][q], mirror[p][q] = l.direct[i], l.mirror[i]
		}
	}
	return direct, mirror
}

// Linearise returns the linearisation of the orbit for orders 1..order.
//
// A complex voltage e^jht drives the periodically time-varying system of the
// variations: in a segment dx = X_h e^jht plus a transient, over a change it
// passes the saltation matrix. Its periodic solution has current orders of
// both signs; those below zero are the conjugate couplings.
func (o *Orbit) Linearise(ctx context.Context, order int) (*Linearisation, error) {
	o.solver.mu.Lock()
	defer o.solver.mu.Unlock()
	c := o.solver.e.c
	var inputs [3]bool
	for _, k := range c.K {
		for q := range inputs {
			inputs[q] = inputs[q] || k[q] != 0
		}
	}
	v := newVariation(o, c, order)
	if err := v.close(); err != nil {
		return nil, err
	}
	n := 3 * order
	l := &Linearisation{Order: order, direct: make([]complex128, n*n), mirror: make([]complex128, n*n)}
	for h := 1; h <= order; h++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		for q := range inputs {
			if !inputs[q] {
				continue
			}
			if err := v.drive(h, q); err != nil {
				return nil, err
			}
			for k := 1; k <= order; k++ {
				up, down := v.coefficients(h, q, k)
				for p := 0; p < 3; p++ {
					i := (3*(k-1)+p)*n + 3*(h-1) + q
					l.direct[i] = up[p]
					l.mirror[i] = complex(real(down[p]), -imag(down[p]))
				}
			}
		}
	}
	return l, nil
}

// A variation is the work space of a linearisation.
type variation struct {
	o       *Orbit
	c       *Circuit
	order   int
	inv     [][]complex128 // by segment: (jkI - A)^-1 blocks
	turns   [][]complex128 // by boundary: e^jk theta, k = 0..2 order
	flow    []float64      // d0 x d0 derivative over the period
	means   []float64      // np x d0
	lu      []float64      // (n0+np)^2 Newton matrix
	n0, np  int
	d0      int
	rowsOut [][]complex128 // by segment: order x 3 x n: out (jkI - A)^-1

	xa, xb [][]complex128 // by segment: variation at both ends, d
	X      [][]complex128 // by segment: driven part, n
}

func newVariation(o *Orbit, c *Circuit, order int) *variation {
	v := &variation{o: o, c: c, order: order, n0: o.segs[0].m.n, d0: o.segs[0].m.d, np: len(c.Controls)}
	powers := func(theta float64) []complex128 {
		z := make([]complex128, 2*order+1)
		for k := range z {
			z[k] = turn(float64(k) * theta)
		}
		return z
	}
	v.turns = append(v.turns, powers(o.segs[0].a))
	for _, s := range o.segs {
		v.turns = append(v.turns, powers(s.b))
		v.inv = append(v.inv, s.m.inverse(order))
		v.xa = append(v.xa, make([]complex128, s.m.d))
		v.xb = append(v.xb, make([]complex128, s.m.d))
		v.X = append(v.X, make([]complex128, s.m.n))
		v.rowsOut = append(v.rowsOut, s.m.outputs(order))
	}
	return v
}

// close prepares the matrix that makes a variation periodic.
func (v *variation) close() error {
	e := v.o.solver.e
	// derivative works on the engine's segments: lend it those of the orbit
	segs, links := e.segs, e.links
	e.segs, e.links = v.o.segs, v.o.links
	flow, means := e.derivative()
	v.flow = append([]float64(nil), flow[:v.d0*v.d0]...)
	v.means = append([]float64(nil), means...)
	e.segs, e.links = segs, links

	size := v.n0 + v.np
	v.lu = make([]float64, size*size)
	for i := 0; i < v.n0; i++ {
		for j := 0; j < v.n0; j++ {
			v.lu[i*size+j] = -v.flow[i*v.d0+j]
		}
		v.lu[i*size+i]++
		for j := 0; j < v.np; j++ {
			v.lu[i*size+v.n0+j] = -v.flow[i*v.d0+v.n0+1+j]
		}
	}
	for c, w := range v.o.watts {
		row := v.lu[(v.n0+c)*size : (v.n0+c+1)*size]
		gain := w.gain()
		if w.Power {
			row[v.n0+c] += w.mean
		}
		for j := 0; j < v.n0; j++ {
			row[j] += gain * v.means[c*v.d0+j] / (2 * math.Pi)
		}
		for j := 0; j < v.np; j++ {
			row[v.n0+j] += gain * v.means[c*v.d0+v.n0+1+j] / (2 * math.Pi)
		}
	}
	return nil
}

// gain is the derivative of the controlled average by the mean of its state.
func (w control) gain() float64 {
	if w.Power {
		return w.p - 2*w.Slope*w.mean
	}
	return 1
}

// drive fills xa, xb and X with the periodic variation under e^jht on phase q.
func (v *variation) drive(h, q int) error {
	segs := v.o.segs
	for i := range segs {
		m := segs[i].m
		n := m.n
		for r := 0; r < n; r++ {
			var sum complex128
			for j := 0; j < n; j++ {
				if b := m.B[j*3+q]; b != 0 {
					z := v.inv[i][(h*n+r)*n+j]
					sum += complex(b*real(z), b*imag(z))
				}
			}
			v.X[i][r] = sum
		}
	}
	// once with a zero start, for the right-hand side; once with the solution
	clear(v.xa[0])
	end, means := v.run(h, q)
	size := v.n0 + v.np
	rhs := make([]float64, size*2)
	for i := 0; i < v.n0; i++ {
		rhs[2*i], rhs[2*i+1] = real(end[i]), imag(end[i])
	}
	for c, w := range v.o.watts {
		g := w.gain()
		rhs[2*(v.n0+c)], rhs[2*(v.n0+c)+1] = -g*real(means[c]), -g*imag(means[c])
	}
	if !solve(append([]float64(nil), v.lu...), size, rhs, 2) {
		return fmt.Errorf("the periodic state has no linearisation: %w", ErrNotPeriodic)
	}
	for i := 0; i < v.n0; i++ {
		v.xa[0][i] = complex(rhs[2*i], rhs[2*i+1])
	}
	for c := 0; c < v.np; c++ {
		v.xa[0][v.n0+1+c] = complex(rhs[2*(v.n0+c)], rhs[2*(v.n0+c)+1])
	}
	v.run(h, q)
	return nil
}

// run carries the variation through the period from xa[0]. It returns its end
// and the means of the controlled states.
func (v *variation) run(h, q int) (end []complex128, means []complex128) {
	means = make([]complex128, v.np)
	for i := range v.o.segs {
		s, l := &v.o.segs[i], &v.o.links[i]
		m := s.m
		za, zb := v.turns[i][h], v.turns[i+1][h]
		xa, xb, X := v.xa[i], v.xb[i], v.X[i]
		// transient part at the start
		xi := make([]complex128, m.d)
		copy(xi, xa)
		for r := range X {
			xi[r] -= X[r] * za
		}
		copy(xb, xi)
		for r := 0; r < m.n; r++ {
			xb[r] += rowTimes(l.D[r*m.d:(r+1)*m.d], xi) + X[r]*zb
		}
		for c := 0; c < v.np; c++ {
			sum := rowTimes(l.W[c*m.d:(c+1)*m.d], xi)
			for j, g := range m.steps.seen[c*m.d : c*m.d+m.n] {
				if g != 0 {
					sum += complex(g, 0) * X[j] * (zb - za) / complex(0, float64(h))
				}
			}
			means[c] += sum / complex(2*math.Pi, 0)
		}
		if l.S == nil {
			return xb, means
		}
		n := v.o.segs[i+1].m
		xn := v.xa[i+1]
		for r := 0; r < n.d; r++ {
			xn[r] = rowTimes(l.S[r*m.d:(r+1)*m.d], xb)
		}
		switch {
		case s.gate >= 0:
			if h == 1 {
				// the gate moves by minus the turn of its reference
				shift := v.o.gateTurn(v.c.Gates[s.gate], q)
				for r, g := range l.jump {
					xn[r] += complex(g, 0) * shift
				}
			}
		case l.rate != 0:
			du := complex(m.watch[s.by].u[q]/l.rate, 0) * zb
			for r, g := range l.jump {
				xn[r] += complex(g, 0) * du
			}
		}
	}
	return nil, means
}

// gateTurn returns the turn of a gate's reference under the complex voltage
// e^jt on phase q. The reference phasor (rms) changes by Ref_q / sqrt(2); of
// the turn, the imaginary part of the relative change, only the half that
// goes with e^jt counts here, its conjugate goes with e^-jt.
func (o *Orbit) gateTurn(g Gate, q int) complex128 {
	ref := g.Ref[0]*o.first[0] + g.Ref[1]*o.first[1] + g.Ref[2]*o.first[2]
	// u = Re(sqrt(2) dV e^jt) = (dV/sqrt(2)) e^jt + its conjugate
	dv := complex(math.Sqrt2, 0)
	return g.Ref[q] * dv / ref / complex(0, 2)
}

// coefficients returns the Fourier coefficients of the line currents at +k and
// -k of the variation under e^jht on phase q.
func (v *variation) coefficients(h, q, k int) (up, down [3]complex128) {
	for i := range v.o.segs {
		s := &v.o.segs[i]
		m := s.m
		n := m.n
		za, zb := v.turns[i], v.turns[i+1]
		// integrals of e^j(h-k)t, e^j(h+k)t and e^-jkt over the segment
		var minus complex128
		if h == k {
			minus = complex(s.b-s.a, 0)
		} else {
			minus = (signed(zb, h-k) - signed(za, h-k)) / complex(0, float64(h-k))
		}
		plus := (zb[h+k] - za[h+k]) / complex(0, float64(h+k))
		oneUp := (signed(zb, -k) - signed(za, -k)) / complex(0, -float64(k))
		cb, ca := signed(zb, -k), signed(za, -k)
		block := v.rowsOut[i][k*3*n : (k+1)*3*n]
		for j := 0; j < n; j++ {
			b := complex(m.B[j*3+q], 0)
			var held complex128
			for c := n + 1; c < m.d; c++ {
				held += complex(m.A[j*m.d+c], 0) * v.xa[i][c]
			}
			xb, xa := v.xb[i][j], v.xa[i][j]
			fu := b*minus + held*oneUp - xb*cb + xa*ca
			fd := b*plus + held*conj(oneUp) - xb*zb[k] + xa*za[k]
			for p := 0; p < 3; p++ {
				r := block[p*n+j]
				up[p] += r * fu
				down[p] += conj(r) * fd
			}
		}
	}
	for p := range up {
		up[p] /= complex(2*math.Pi, 0)
		down[p] /= complex(2*math.Pi, 0)
	}
	return up, down
}

func signed(z []complex128, k int) complex128 {
	if k < 0 {
		return conj(z[-k])
	}
	return z[k]
}

func conj(z complex128) complex128 { return complex(real(z), -imag(z)) }

func rowTimes(row []float64, x []complex128) complex128 {
	var re, im float64
	for i, a := range row {
		re += a * real(x[i])
		im += a * imag(x[i])
	}
	return complex(re, im)
}
