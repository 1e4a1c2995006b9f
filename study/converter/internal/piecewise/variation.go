package piecewise

import "math"

// A link is the derivative of the flow over one segment and over the change
// that ends it.
type link struct {
	D    []float64 // n x d: exp(A tau) - 1
	W    []float64 // np x d: integrals of the controlled states
	S    []float64 // dNext x d: state after the change by state before it; nil at the end of the period
	jump []float64 // nNext: rate after the change minus the rate before it, in the next mode's state
	rate float64   // derivative of the watch that ended the segment
}

// buildLinks computes the links of the last pass.
func (e *engine) buildLinks() {
	np := len(e.c.Controls)
	for len(e.links) < len(e.segs) {
		e.links = append(e.links, link{})
	}
	e.links = e.links[:len(e.segs)]
	for i := range e.segs {
		s, l := &e.segs[i], &e.links[i]
		m := s.m
		l.D, l.W = sized(l.D, m.n*m.d), sized(l.W, np*m.d)
		m.steps.matrices(s.b-s.a, l.D, l.W)
		if i+1 == len(e.segs) {
			l.S, l.jump = nil, nil
			continue
		}
		e.joint(s, &e.segs[i+1], l)
	}
}

// joint fills the change between two segments. With f = w.x + u-part the
// watch that ended the first, the instant moves by -df/f', so that
// S = P + (f_new - P f_old) w / f' with P the projection on the new state.
func (e *engine) joint(s, t *segment, l *link) {
	m, n := s.m, t.m
	l.S = sized(l.S, n.d*m.d)
	l.jump = sized(l.jump, n.n)
	for j, b := range n.pick {
		copy(l.S[j*m.d:j*m.d+m.ny], m.T[b*m.ny:(b+1)*m.ny])
	}
	for j := 0; j < n.d-n.ny; j++ {
		l.S[(n.ny+j)*m.d+m.ny+j] = 1
	}
	var u, du [3]float64
	e.zh = e.s.powers(s.b, e.zh)
	e.s.value(e.zh, &u)
	e.s.rate(e.zh, &du)
	old, fresh := e.xb[:m.n], e.xib[:n.n]
	m.slope(s.xb, &u, old)
	n.slope(t.xa, &u, fresh)
	for j := 0; j < n.n; j++ {
		v := fresh[j]
		for k, f := range old {
			v -= l.S[j*m.d+k] * f
		}
		l.jump[j] = v
	}
	w := &m.watch[s.by]
	l.rate = w.u[0]*du[0] + w.u[1]*du[1] + w.u[2]*du[2]
	for k, f := range old {
		l.rate += w.x[k] * f
	}
	if s.gate >= 0 || math.Abs(l.rate) < 1e-9*w.scale {
		l.rate = 0
		return
	}
	for j, g := range l.jump {
		if g == 0 {
			continue
		}
		g /= l.rate
		for k, x := range w.x {
			l.S[j*m.d+k] += g * x
		}
	}
}

// derivative returns the derivative of the state at the end of the pass, in the
// frame of its start (d x d), and of the integrals of the controlled states (np x d) by
// the state at its start.
func (e *engine) derivative() (flow, means []float64) {
	d0, np := e.segs[0].m.d, len(e.c.Controls)
	wide := e.wide
	a, b := sized(e.flowA, wide*d0), sized(e.flowB, wide*d0)
	e.flowA, e.flowB = a, b
	means = sized(e.flowW, np*d0)
	e.flowW = means
	for i := 0; i < d0; i++ {
		a[i*d0+i] = 1
	}
	for i := range e.segs {
		m, l := e.segs[i].m, &e.links[i]
		multiplyAdd(means, l.W, a, np, m.d, d0)
		copy(b[:m.d*d0], a)
		multiplyAdd(b, l.D, a, m.n, m.d, d0)
		a, b = b, a
		if l.S == nil {
			if to, _, H := e.home(); H != nil {
				clear(b[:to.d*d0])
				multiplyAdd(b, H, a, to.d, m.d, d0)
				a = b
			}
			break
		}
		n := e.segs[i+1].m
		clear(b[:n.d*d0])
		multiplyAdd(b, l.S, a, n.d, m.d, d0)
		a, b = b, a
	}
	return a, means
}

// multiplyAdd adds p (r x s) times q (s x c) to out.
func multiplyAdd(out, p, q []float64, r, s, c int) {
	for i := 0; i < r; i++ {
		o := out[i*c : (i+1)*c]
		for k := 0; k < s; k++ {
			v := p[i*s+k]
			if v == 0 {
				continue
			}
			for j, x := range q[k*c : (k+1)*c] {
				o[j] += v * x
			}
		}
	}
}

// sized returns a zero slice of n entries, reusing v.
func sized(v []float64, n int) []float64 {
	if cap(v) < n {
		return make([]float64, n)
	}
	v = v[:n]
	clear(v)
	return v
}

// controlled writes the mean over the period of each controlled state.
func (e *engine) controlled() []float64 {
	np := len(e.c.Controls)
	e.mean = sized(e.mean, np)
	if np == 0 {
		return e.mean
	}
	e.zb = e.s.powers(e.segs[0].a, e.zb)
	for i := range e.segs {
		s, l := &e.segs[i], &e.links[i]
		e.zh, e.zb = e.zb, e.zh // zh: start, zb: end
		e.zb = e.s.powers(s.b, e.zb)
		m := s.m
		xi := e.rootXi[:m.d]
		m.response(e.zh, xi)
		for j, v := range s.xa {
			if j < m.n {
				xi[j] = v - xi[j]
			} else {
				xi[j] = v
			}
		}
		for c := 0; c < np; c++ {
			sum := dot(l.W[c*m.d:(c+1)*m.d], xi)
			for j, g := range m.steps.seen[c*m.d : c*m.d+m.n] {
				if g == 0 {
					continue
				}
				for k, h := range e.s.orders {
					// real part of X (zb - za) / (j h)
					x, z := m.drive.X[j][k], e.zb[k]-e.zh[k]
					sum += g * (real(x)*imag(z) + imag(x)*real(z)) / float64(h)
				}
			}
			e.mean[c] += sum / e.span()
		}
	}
	return e.mean
}
