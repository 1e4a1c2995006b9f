package piecewise

import "math"

// moments returns the mean over the period of s_i s_j for the full state s
// (branch currents, capacitor voltages, constants; the constant 1 gives the
// means themselves). Between samples and changes the trapezoid with its end
// correction by the exact derivatives is used, an error of fourth order.
func (e *engine) moments() [][]float64 {
	ns := e.wide
	out := square(ns)
	nb, nv := e.c.nb(), e.c.nv()
	dyn := nb + nv
	xa, da := make([]float64, ns), make([]float64, ns)
	xb, db := make([]float64, ns), make([]float64, ns)
	sum, half := make([]float64, ns*ns), make([]float64, ns*ns)
	var u [3]float64
	for i := range e.segs {
		s := &e.segs[i]
		if s.b <= s.a {
			continue
		}
		m := s.m
		n, d := m.n, m.d
		clear(sum)
		copy(xa[n:d], s.xa[n:])
		copy(xb[n:d], s.xa[n:])
		clear(da[n:])
		clear(db[n:])
		from := s.a
		e.zh = e.s.powers(s.a, e.zh)
		e.s.value(e.zh, &u)
		copy(xa, s.xa[:n])
		m.slope(s.xa, &u, da)
		fine := 0.3 / m.steps.norm // panels of a fast transient
		for k := int(s.a/cell) + 1; ; k++ {
			to := cell * float64(k)
			done := to >= s.b
			if done {
				to = s.b
			}
			if next := from + math.Max(fine, 0.25*(from-s.a)); next < to {
				to, done = next, false
				k--
				e.stateOf(s, to, xb, &u)
			} else if done {
				e.zh = e.s.powers(s.b, e.zh)
				e.s.value(e.zh, &u)
				copy(xb, s.xb[:n])
			} else {
				at := k % Samples
				if e.atM[at] != m {
					continue // a change within rounding of the sample
				}
				copy(u[:], e.s.at[3*at:])
				copy(xb, e.atX[at*e.wide:at*e.wide+n])
			}
			m.slope(xb, &u, db)
			h := to - from
			h1, h2 := h/2, h*h/12
			for i := 0; i < n; i++ {
				row := sum[i*d : (i+1)*d]
				ai, bi, dai, dbi := h1*xa[i]+h2*da[i], h1*xb[i]-h2*db[i], h2*xa[i], h2*xb[i]
				for j := i; j < d; j++ {
					row[j] += ai*xa[j] + bi*xb[j] + dai*da[j] - dbi*db[j]
				}
			}
			from = to
			xa, xb, da, db = xb, xa, db, da
			copy(xb[n:d], xa[n:d])
			if done {
				break
			}
		}
		m.spread(sum, half, out, nb)
	}
	consts := e.segs[0].xa[e.segs[0].m.n:]
	for i := 0; i < ns; i++ {
		for j := i; j < ns; j++ {
			if i >= dyn {
				out[i][j] = consts[i-dyn] * consts[j-dyn]
			} else {
				out[i][j] /= e.span()
			}
			out[j][i] = out[i][j]
		}
	}
	return e.overParts(out)
}

// stateOf writes the dynamic state within a segment and the voltages there.
func (e *engine) stateOf(s *segment, theta float64, x []float64, u *[3]float64) {
	m := s.m
	xi := e.rootXi[:m.d]
	e.zh = e.s.powers(s.a, e.zh)
	m.response(e.zh, xi)
	for i, v := range s.xa {
		if i < m.n {
			v -= xi[i]
		}
		xi[i] = v
	}
	m.steps.advance(theta-s.a, xi)
	e.zh = e.s.powers(theta, e.zh)
	e.s.value(e.zh, u)
	m.response(e.zh, x[:m.n])
	for i := 0; i < m.n; i++ {
		x[i] += xi[i]
	}
}

// spread adds second moments of the mode's state (upper triangle of rows
// 0..n-1, d wide) to those of the full state.
func (m *mode) spread(sum, half []float64, out [][]float64, nb int) {
	n, d, ny := m.n, m.d, m.ny
	for i := 0; i < n; i++ {
		for j := 0; j < i; j++ {
			sum[i*d+j] = sum[j*d+i]
		}
	}
	// rows of the full state by the mode's columns
	dyn := nb + n - ny
	for b := 0; b < dyn; b++ {
		row := half[b*d : (b+1)*d]
		if b >= nb {
			copy(row, sum[(ny+b-nb)*d:(ny+b-nb+1)*d])
			continue
		}
		clear(row)
		for i := 0; i < ny; i++ {
			if t := m.T[b*ny+i]; t != 0 {
				for j := range row {
					row[j] += t * sum[i*d+j]
				}
			}
		}
	}
	for b := 0; b < dyn; b++ {
		row := half[b*d : (b+1)*d]
		for c := b; c < nb; c++ {
			out[b][c] += dot(m.T[c*ny:(c+1)*ny], row)
		}
		for j := ny; j < d; j++ {
			if c := nb + j - ny; c >= b {
				out[b][c] += row[j]
			}
		}
	}
}

// overParts averages second moments over the parts of the period.
func (e *engine) overParts(one [][]float64) [][]float64 {
	if e.sym == nil {
		return one
	}
	ns := len(one)
	from, sign := make([]int, ns), make([]float64, ns)
	for i := range from {
		from[i], sign[i] = i, 1
	}
	for i, f := range e.sym.From {
		from[i], sign[i] = f, e.sym.Sign[i]
	}
	sum, now := square(ns), one
	for r := 0; r < e.parts; r++ {
		next := square(ns)
		for i := range now {
			for j, v := range now[i] {
				sum[i][j] += v / float64(e.parts)
				next[i][j] = sign[i] * sign[j] * now[from[i]][from[j]]
			}
		}
		now = next
	}
	return sum
}
