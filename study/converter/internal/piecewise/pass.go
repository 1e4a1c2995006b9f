package piecewise

import "math"

// A segment is a stretch of the period in one mode.
type segment struct {
	m      *mode
	a, b   float64   // rad
	xa, xb []float64 // state at both ends, d
	by     int       // watch that ended it, -1 at the end of the period
	gate   int       // gate whose opening ended it, -1 when no gate did
}

// settleTol is the tolerance of a watch at the instant of a change (ten times
// more each time that valves change twice at one instant), roundTol
// that at a sample, where a current that has just begun may be off by rounding;
// both relative to its scale.
const (
	settleTol = 1e-7
	roundTol  = 1e-13
)

// An engine steps one circuit through its periods. It is not for concurrent use.
type engine struct {
	c     *Circuit
	modes map[uint64]*mode
	s     supply
	edges []edge
	sym   *Symmetry // in force; nil for none
	parts int       // 1 without symmetry

	segs  []segment
	atX   []float64 // Samples x wide: state at the samples of the last pass
	atM   []*mode   // its mode
	wide  int
	arena []float64

	zh         []complex128
	u, ub      [3]float64
	x, xi      []float64
	xb, xib    []float64
	prevXi     []float64
	full       []float64
	fa, fb, fp []float64
	rootF      []complex128
	rootXi     []float64
	passes     int

	links               []link
	flowA, flowB, flowW []float64
	newtonJ, newtonR    []float64
	mean                []float64
	zb                  []complex128
	re, im, diff        []float64
	diffStamp           int
	ka, kb, za, zb2     []complex128
	homeH, homeX        []float64
	marks               []int
	tol                 float64
	force               []complex128
}

func newEngine(c *Circuit) *engine {
	wide := c.states()
	e := &engine{c: c, parts: 1, modes: map[uint64]*mode{}, wide: wide, atX: make([]float64, Samples*wide), atM: make([]*mode, Samples), full: make([]float64, wide)}
	for _, v := range []*[]float64{&e.x, &e.xi, &e.xb, &e.xib, &e.prevXi, &e.rootXi} {
		*v = make([]float64, wide)
	}
	return e
}

// mode returns the mode of a key, ready for the present supply; nil when it
// cannot be.
func (e *engine) mode(key uint64) *mode {
	m, ok := e.modes[key]
	if !ok {
		m = e.c.newMode(key)
		e.modes[key] = m
	}
	if m != nil {
		m.respond(&e.s)
	}
	return m
}

func (e *engine) keep(x []float64) []float64 {
	if len(e.arena)+len(x) > cap(e.arena) {
		e.arena = make([]float64, 0, max(1024, 2*cap(e.arena)))
	}
	at := len(e.arena)
	e.arena = append(e.arena, x...)
	return e.arena[at:len(e.arena):len(e.arena)]
}

// pass steps the state x of mode m from sample k0 through one period, or one
// part of it under a symmetry, and leaves the segments and the states at the samples behind.
func (e *engine) pass(k0 int, m *mode, x []float64) error {
	e.passes++
	e.tol = settleTol
	e.segs, e.arena = e.segs[:0], e.arena[:0]
	k := k0
	theta := cell * float64(k0)
	end := k0 + Samples/e.parts
	gates, next := e.gatesAt(theta)

	copy(e.x[:m.d], x)
	copy(e.u[:], e.s.at[3*(k%Samples):])
	m, err := e.settle(m, gates)
	if err != nil {
		return err
	}
	start := theta
	var xa []float64
	begin := func() {
		xa = e.keep(e.x[:m.d])
		e.size(len(m.watch))
		for i := range m.watch {
			e.fa[i] = m.watch[i].value(e.x, &e.u)
		}
	}
	forced := m.sampled(&e.s, k)
	copy(e.xi, e.x[:m.d])
	for i, v := range forced {
		e.xi[i] -= v
	}
	begin()
	e.record(k, m)
	prev, havePrev := 0.0, false
	onCell := true
	limit := 400 + 100*len(e.c.Units)

	for k < end {
		stop, edge := cell*float64(k+1), false
		if next.theta <= stop {
			stop, edge = next.theta, true
		}
		tau := stop - theta
		copy(e.xib[:m.d], e.xi)
		if onCell && !edge {
			m.steps.cellStep(e.xib[:m.d])
		} else {
			m.steps.advance(tau, e.xib[:m.d])
		}
		copy(e.xb[:m.d], e.xib)
		if edge {
			e.zh = e.s.powers(stop, e.zh)
			e.s.value(e.zh, &e.ub)
			m.response(e.zh, e.rootXi)
			for i := 0; i < m.n; i++ {
				e.xb[i] += e.rootXi[i]
			}
		} else {
			copy(e.ub[:], e.s.at[3*((k+1)%Samples):])
			for i, v := range m.sampled(&e.s, k+1) {
				e.xb[i] += v
			}
		}
		if !(math.Abs(e.xb[0]) < 1e30) {
			return ErrDiverged
		}

		// the earliest watch that fails before stop
		by, when, back := -1, math.Inf(1), false
		for i := range m.watch {
			w := &m.watch[i]
			f := w.value(e.xb, &e.ub)
			e.fb[i] = f
			if w.need&^gates != 0 {
				continue
			}
			switch fa := e.fa[i]; {
			case f < -roundTol*w.scale:
				if t := e.root(m, w, theta, e.xi, fa, stop, f); t < when {
					by, when, back = i, t, false
				}
			case havePrev && fa < f && fa < e.fp[i] && fa < 0.05*w.scale && fa > 0 && e.fp[i] > 0:
				if t, ok := e.dip(m, w, prev, e.fp[i], theta, fa, stop, f); ok && t < when {
					by, when, back = i, t, t < theta
				}
			}
		}
		if by < 0 {
			copy(e.fp, e.fa)
			copy(e.prevXi[:m.d], e.xi)
			prev, havePrev = theta, true
			copy(e.xi[:m.d], e.xib)
			copy(e.x[:m.d], e.xb)
			copy(e.fa, e.fb)
			e.u = e.ub
			theta = stop
			if !edge {
				k++
				onCell = true
				e.record(k, m)
				continue
			}
			onCell, havePrev = false, false
			opened := next.gate
			if next.open {
				gates |= 1 << next.gate
			} else {
				gates &^= 1 << next.gate
			}
			wasOpen := next.open
			next = e.after(next)
			if !wasOpen {
				continue
			}
			// a valve that waited for this gate fires now
			fire := -1
			for i := range m.watch {
				if w := &m.watch[i]; w.need>>opened&1 != 0 && w.need&^gates == 0 && e.fa[i] < 0 {
					if fire < 0 || e.fa[i] < e.fa[fire] {
						fire = i
					}
				}
			}
			if fire < 0 {
				continue
			}
			e.segs = append(e.segs, segment{m, start, theta, xa, e.keep(e.x[:m.d]), fire, opened})
			if m, err = e.change(m, fire, gates); err != nil {
				return err
			}
			start = theta
			e.zh = e.s.powers(theta, e.zh)
		} else {
			base, xi := theta, e.xi
			if back {
				base, xi = prev, e.prevXi
				if theta == cell*float64(k) {
					k--
				}
			}
			theta = when
			copy(e.x[:m.d], xi)
			m.steps.advance(theta-base, e.x[:m.d])
			e.zh = e.s.powers(theta, e.zh)
			e.s.value(e.zh, &e.u)
			m.response(e.zh, e.rootXi)
			for i := 0; i < m.n; i++ {
				e.x[i] += e.rootXi[i]
			}
			e.segs = append(e.segs, segment{m, start, theta, xa, e.keep(e.x[:m.d]), by, -1})
			if m, err = e.change(m, by, gates); err != nil {
				return err
			}
			start = theta
			onCell, havePrev = false, false
		}
		if len(e.segs) > limit {
			return ErrInconsistent
		}
		m.response(e.zh, e.rootXi)
		copy(e.xi[:m.d], e.x)
		for i := 0; i < m.n; i++ {
			e.xi[i] -= e.rootXi[i]
		}
		begin()
	}
	e.segs = append(e.segs, segment{m, start, theta, xa, e.keep(e.x[:m.d]), -1, -1})
	return nil
}

// record keeps the present state as that of sample k.
func (e *engine) record(k int, m *mode) {
	k %= Samples
	copy(e.atX[k*e.wide:], e.x[:m.d])
	e.atM[k] = m
}

func (e *engine) size(n int) {
	for len(e.fa) < n {
		e.fa, e.fb, e.fp = append(e.fa, 0), append(e.fb, 0), append(e.fp, 0)
	}
}

// change passes from mode m over its failed watch to the mode that holds next,
// with the present state e.x and voltages e.u.
func (e *engine) change(m *mode, by int, gates uint64) (*mode, error) {
	to, err := e.enter(m, m.watch[by].next)
	if err != nil {
		return nil, err
	}
	if s := &e.segs[len(e.segs)-1]; s.b-s.a < 1e-9 {
		e.tol = math.Min(10*e.tol, 1e-2)
	} else {
		e.tol = settleTol
	}
	return e.settle(to, gates)
}

// enter carries e.x over to the mode of a key.
func (e *engine) enter(m *mode, key uint64) (*mode, error) {
	to := e.mode(key)
	if to == nil {
		return nil, ErrInconsistent
	}
	m.expand(e.x, e.full)
	to.reduce(e.full, e.x)
	return to, nil
}

// settle changes mode until every watch holds at the present state.
func (e *engine) settle(m *mode, gates uint64) (*mode, error) {
	for tries := 0; tries < 60; tries++ {
		worst, depth := -1, -e.tol
		for i := range m.watch {
			w := &m.watch[i]
			if w.need&^gates != 0 {
				continue
			}
			if f := w.value(e.x, &e.u) / w.scale; f < depth {
				worst, depth = i, f
			}
		}
		if worst < 0 {
			return m, nil
		}
		var err error
		if m, err = e.enter(m, m.watch[worst].next); err != nil {
			return nil, err
		}
	}
	return nil, ErrInconsistent
}
