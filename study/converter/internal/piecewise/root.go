package piecewise

import "math"

// rootTol is the accuracy of a switching instant, rad.
const rootTol = 1e-13

// track prepares the evaluation of a watch between samples: the series of its
// driven part.
func (e *engine) track(m *mode, w *watch) {
	e.rootF = e.rootF[:0]
	for k := range e.s.orders {
		f := complex(w.u[0], 0)*e.s.peak[0][k] + complex(w.u[1], 0)*e.s.peak[1][k] + complex(w.u[2], 0)*e.s.peak[2][k]
		for i, x := range w.x[:m.n] {
			if x != 0 {
				z := m.drive.X[i][k]
				f += complex(x*real(z), x*imag(z))
			}
		}
		e.rootF = append(e.rootF, f)
	}
}

// evaluate returns a tracked watch and its derivative at theta, from the
// transient xi at base.
func (e *engine) evaluate(m *mode, w *watch, base float64, xi []float64, theta float64) (f, slope float64) {
	x := e.rootXi[:m.d]
	copy(x, xi)
	m.steps.advance(theta-base, x)
	f, slope = dot(w.x, x), dot(w.xA, x)
	e.zh = e.s.powers(theta, e.zh)
	for i, z := range e.zh {
		p := e.rootF[i]
		f += real(p)*real(z) - imag(p)*imag(z)
		slope -= float64(e.s.orders[i]) * (real(p)*imag(z) + imag(p)*real(z))
	}
	return f, slope
}

// root returns the instant in [a, b] at which the watch turns negative, given
// fa at a (with the transient xi there) and fb < 0 at b. A watch that is not
// positive at a may still rise first: then the later instant is returned, else
// a itself.
func (e *engine) root(m *mode, w *watch, a float64, xi []float64, fa, b, fb float64) float64 {
	base := a
	e.track(m, w)
	if fa <= settleTol*w.scale {
		rose := false
		step := b - a
		fine := math.Min((b-a)/4096, 0.02/m.steps.norm)
		for step > fine {
			step /= 2
			if f, _ := e.evaluate(m, w, base, xi, a+step); f > 0 && f > fa {
				a, fa, rose = a+step, f, true
				break
			}
		}
		if !rose {
			if fa <= 0 {
				return a
			}
			fa = math.Max(fa, 0)
		}
	}
	t := a + (b-a)*fa/(fa-fb)
	for i := 0; i < 60; i++ {
		f, slope := e.evaluate(m, w, base, xi, t)
		if f > 0 {
			a, fa = t, f
		} else {
			b, fb = t, f
		}
		if b-a < rootTol {
			break
		}
		next := t - f/slope
		if math.Abs(next-t) < rootTol && next >= a-rootTol && next <= b+rootTol {
			t = next
			break
		}
		if !(next > a && next < b) {
			next = (a + b) / 2
		}
		t = next
	}
	return t
}

// dip looks whether a watch that is positive at three instants is negative
// between them: at the vertex of the parabola through them. It returns the
// instant at which it turns negative.
func (e *engine) dip(m *mode, w *watch, t0, f0, t1, f1, t2, f2 float64) (float64, bool) {
	d01, d12 := (f1-f0)/(t1-t0), (f2-f1)/(t2-t1)
	bend := (d12 - d01) / (t2 - t0)
	if !(bend > 0) {
		return 0, false
	}
	t := (t0+t1)/2 - d01/(2*bend)
	if !(t > t0 && t < t2) {
		return 0, false
	}
	low := f0 + d01*(t-t0) + bend*(t-t0)*(t-t1)
	if low > 0.25*f1 {
		return 0, false
	}
	base, xi := t0, e.prevXi
	e.track(m, w)
	f, _ := e.evaluate(m, w, base, xi, t)
	if f >= 0 {
		return 0, false
	}
	if t > t1 {
		return e.root(m, w, t1, e.xi, f1, t, f), true
	}
	return e.root(m, w, t0, e.prevXi, f0, t, f), true
}
