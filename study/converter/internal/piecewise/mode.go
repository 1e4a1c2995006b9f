package piecewise

import "math"

// A mode is the linear system of one set of conducting valves. Its state x
// holds the free currents y, the capacitor voltages and the constants: n
// dynamic entries, d in all.
//
//	x' = A x + B u    (rows 0..n-1; the constants stand)
type mode struct {
	key   uint64
	ny    int
	n, d  int
	pick  []int     // branch that serves as coordinate of each free current
	T     []float64 // nb x ny: branch currents c = T y
	A     []float64 // n x d
	B     []float64 // n x 3
	out   []float64 // 3 x n: line currents
	watch []watch

	steps *ladder
	inv   []complex128 // (H+1) x n x n: (jhI - A)^-1, filled up to invTo
	invTo int
	outs  []complex128 // (H+1) x 3 x n: line currents of inv, filled up to outTo
	outTo int

	drive driven // response to the present voltage
}

// A watch is a trigger of the mode in terms of its state and of the phase
// voltages: f = x.state + u.voltages.
type watch struct {
	x     []float64 // d
	xA    []float64 // d: derivative of the transient part
	u     [3]float64
	need  uint64
	next  uint64
	scale float64
}

// value returns f at a state and phase voltages.
func (w *watch) value(x []float64, u *[3]float64) float64 {
	f := w.u[0]*u[0] + w.u[1]*u[1] + w.u[2]*u[2]
	for i, v := range w.x {
		f += v * x[i]
	}
	return f
}

// newMode projects the circuit on the currents that the state leaves free. It
// returns nil when a loop has no inductance, so that the mode cannot be.
func (c *Circuit) newMode(key uint64) *mode {
	nb, nv, nc := c.nb(), c.nv(), c.nc()
	var cols []column
	shift := uint(0)
	for _, u := range c.Units {
		cols = append(cols, u.columns(key>>shift&(1<<u.bits()-1))...)
		shift += u.bits()
	}
	m := &mode{key: key, ny: len(cols), n: len(cols) + nv, invTo: -1, outTo: -1}
	ny := m.ny
	m.d = m.n + nc
	m.T = make([]float64, nb*ny)
	for j, col := range cols {
		m.pick = append(m.pick, col.coord)
		for _, t := range col.terms {
			m.T[t.branch*ny+j] += t.coef
		}
	}
	xt, rt := product(c.X, m.T, ny), product(c.R, m.T, ny)
	// right-hand side of T^T X T y' : y, v, constants, u
	wide := m.d + 3
	gram, rhs := make([]float64, ny*ny), make([]float64, ny*wide)
	for i := 0; i < ny; i++ {
		for b := 0; b < nb; b++ {
			t := m.T[b*ny+i]
			if t == 0 {
				continue
			}
			row := rhs[i*wide : (i+1)*wide]
			for j := 0; j < ny; j++ {
				gram[i*ny+j] += t * xt[b*ny+j]
				row[j] -= t * rt[b*ny+j]
			}
			for j := 0; j < nv; j++ {
				row[ny+j] -= t * c.S[b][j]
			}
			for j := 0; j < nc; j++ {
				row[m.n+j] += t * c.EMF[b][j]
			}
			for q := 0; q < 3; q++ {
				row[m.d+q] += t * c.K[b][q]
			}
		}
	}
	if !solve(gram, ny, rhs, wide) {
		return nil
	}
	m.A, m.B = make([]float64, m.n*m.d), make([]float64, m.n*3)
	for i := 0; i < ny; i++ {
		copy(m.A[i*m.d:(i+1)*m.d], rhs[i*wide:])
		copy(m.B[i*3:(i+1)*3], rhs[i*wide+m.d:])
	}
	for i := 0; i < nv; i++ {
		row := m.A[(ny+i)*m.d : (ny+i+1)*m.d]
		for b := 0; b < nb; b++ {
			for j := 0; j < ny; j++ {
				row[j] += c.S[b][i] * m.T[b*ny+j] / c.Y[i]
			}
		}
		row[ny+i] -= c.G[i] / c.Y[i]
		for j := 0; j < nc; j++ {
			row[m.n+j] += c.Draw[i][j] / c.Y[i]
		}
	}
	m.out = make([]float64, 3*m.n)
	for b := 0; b < nb; b++ {
		for q := 0; q < 3; q++ {
			for j := 0; j < ny; j++ {
				m.out[q*m.n+j] += c.K[b][q] * m.T[b*ny+j]
			}
		}
	}
	m.addWatches(c, xt, rt)
	m.steps = newLadder(m, c)
	return m
}

// addWatches turns the triggers of every unit into functions of the state.
func (m *mode) addWatches(c *Circuit, xt, rt []float64) {
	nv, nc := c.nv(), c.nc()
	shift := uint(0)
	for _, unit := range c.Units {
		mask := uint64(1)<<unit.bits() - 1
		for _, t := range unit.triggers(m.key >> shift & mask) {
			w := watch{
				x: make([]float64, m.d), xA: make([]float64, m.d),
				need: t.need, next: m.key&^(mask<<shift) | t.next<<shift, scale: c.Amp,
			}
			if t.volt {
				w.scale = c.Volt
			}
			for _, s := range t.terms {
				if !t.volt {
					for j := 0; j < m.ny; j++ {
						w.x[j] += s.coef * m.T[s.branch*m.ny+j]
					}
					continue
				}
				for j := 0; j < m.ny; j++ {
					w.x[j] -= s.coef * rt[s.branch*m.ny+j]
				}
				for j := 0; j < nv; j++ {
					w.x[m.ny+j] -= s.coef * c.S[s.branch][j]
				}
				for j := 0; j < nc; j++ {
					w.x[m.n+j] += s.coef * c.EMF[s.branch][j]
				}
				for q := 0; q < 3; q++ {
					w.u[q] += s.coef * c.K[s.branch][q]
				}
				for i := 0; i < m.ny; i++ {
					x := s.coef * xt[s.branch*m.ny+i]
					if x == 0 {
						continue
					}
					for j := 0; j < m.d; j++ {
						w.x[j] -= x * m.A[i*m.d+j]
					}
					for q := 0; q < 3; q++ {
						w.u[q] -= x * m.B[i*3+q]
					}
				}
			}
			for i := 0; i < m.n; i++ {
				for j := 0; j < m.d; j++ {
					w.xA[j] += w.x[i] * m.A[i*m.d+j]
				}
			}
			m.watch = append(m.watch, w)
		}
		shift += unit.bits()
	}
}

// product returns a (nb x nb) times t (nb x ny).
func product(a [][]float64, t []float64, ny int) []float64 {
	out := make([]float64, len(a)*ny)
	for i, row := range a {
		for k, v := range row {
			if v == 0 {
				continue
			}
			for j := 0; j < ny; j++ {
				out[i*ny+j] += v * t[k*ny+j]
			}
		}
	}
	return out
}

// slope writes x' into dst (n).
func (m *mode) slope(x []float64, u *[3]float64, dst []float64) {
	for i := 0; i < m.n; i++ {
		v := m.B[i*3]*u[0] + m.B[i*3+1]*u[1] + m.B[i*3+2]*u[2]
		for j, a := range m.A[i*m.d : (i+1)*m.d] {
			v += a * x[j]
		}
		dst[i] = v
	}
}

// expand writes the full state s (branch currents, capacitor voltages,
// constants) of x into dst.
func (m *mode) expand(x, dst []float64) {
	nb := len(dst) - (m.d - m.ny)
	for b := 0; b < nb; b++ {
		dst[b] = dot(m.T[b*m.ny:(b+1)*m.ny], x)
	}
	copy(dst[nb:], x[m.ny:m.d])
}

// reduce writes the mode's state x of a full state s into dst.
func (m *mode) reduce(s, dst []float64) {
	for j, b := range m.pick {
		dst[j] = s[b]
	}
	copy(dst[m.ny:m.d], s[len(s)-(m.d-m.ny):])
}

// inverse returns (jhI - A)^-1 for orders 0..h as one slice of n x n blocks.
func (m *mode) inverse(h int) []complex128 {
	if h <= m.invTo {
		return m.inv
	}
	nn := m.n * m.n
	grown := make([]complex128, (h+1)*nn)
	copy(grown, m.inv)
	a := make([]complex128, nn)
	for k := m.invTo + 1; k <= h; k++ {
		for i := 0; i < m.n; i++ {
			for j := 0; j < m.n; j++ {
				a[i*m.n+j] = complex(-m.A[i*m.d+j], 0)
			}
			a[i*m.n+i] += complex(0, float64(k))
		}
		if !invertComplex(a, m.n, grown[k*nn:(k+1)*nn]) && k > 0 {
			for i := range grown[k*nn : (k+1)*nn] {
				grown[k*nn+i] = complex(math.Inf(1), 0)
			}
		}
	}
	m.inv, m.invTo = grown, h
	return m.inv
}

// outputs returns out (jhI - A)^-1 for orders 0..h as one slice of 3 x n blocks.
func (m *mode) outputs(h int) []complex128 {
	if h <= m.outTo {
		return m.outs
	}
	inv, n := m.inverse(h), m.n
	out := make([]complex128, (h+1)*3*n)
	for k := 1; k <= h; k++ {
		for q := 0; q < 3; q++ {
			row := out[(k*3+q)*n : (k*3+q+1)*n]
			for i := 0; i < n; i++ {
				g := m.out[q*n+i]
				if g == 0 {
					continue
				}
				for j := range row {
					z := inv[(k*n+i)*n+j]
					row[j] += complex(g*real(z), g*imag(z))
				}
			}
		}
	}
	m.outs, m.outTo = out, h
	return out
}
