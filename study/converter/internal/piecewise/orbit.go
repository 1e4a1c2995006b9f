package piecewise

import (
	"context"
	"math"
	"math/cmplx"
	"sync"

	"gonum.org/v1/gonum/mat"

	"quietbus/study/phasor"
)

// A Solver finds periodic states of one circuit under changing supplies. It
// keeps the modes met and the last state, so that a supply near the last one
// takes little. Its methods may be called from several goroutines; they wait
// for each other.
type Solver struct {
	mu sync.Mutex
	e  *engine
	at start
	ok bool // at is a periodic state
}

// An Orbit is one periodic state.
type Orbit struct {
	Lines      [3]phasor.Spectrum // line currents, orders 1..order; order 0 from the moments
	Moments    [][]float64        // mean of s_i s_j, see Circuit; the first constant is 1
	State      []float64          // full state at the start
	Correction float64            // last Newton correction over the scales
	Passes     int                // periods stepped
	Multiplier complex128         // largest by modulus: how a disturbance grows in one period
	Changes    int                // changes of the conducting valves in one period
	Yield      []float64          // by control: derivative of its average (power) by its parameter alone

	solver *Solver
	sym    *Symmetry
	parts  int
	segs   []segment
	links  []link
	watts  []control
	first  [3]complex128
	walked []float64 // Samples x states
	rates  []float64 // Samples x states: derivatives of the branch currents, or nil
}

// control is a Control with the averages of the orbit.
type control struct {
	Control
	p, mean float64
}

// quiet is a sample at which a supply with its phases at the usual angles has no
// two phases alike.
const quiet = 7

// NewSolver takes the circuit over; it must not be changed afterwards.
func NewSolver(c *Circuit) *Solver {
	return &Solver{e: newEngine(c)}
}

// Start sets the state that the next solution starts from: all valves block,
// full is the full state (branch currents, capacitor voltages, 1, parameters).
func (s *Solver) Start(full []float64) {
	s.mu.Lock()
	defer s.mu.Unlock()
	m := s.e.mode(0)
	x := make([]float64, m.d)
	m.reduce(full, x)
	s.at, s.ok = start{sample: quiet, key: 0, x: x}, false
}

// Continue sets the next start to that of an orbit of a circuit that differs
// only in having fixed EMFs where this one has free parameters, whose values
// are given.
func (s *Solver) Continue(o *Orbit, parameters []float64) {
	s.mu.Lock()
	defer s.mu.Unlock()
	first := o.segs[0]
	x := append(append([]float64(nil), first.xa[:first.m.n]...), 1)
	s.at = start{sample: int(math.Round(first.a / cell)), key: first.m.key, x: append(x, parameters...)}
	s.ok = true
}

// Warm reports whether the solver holds a periodic state to start from.
func (s *Solver) Warm() bool {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.ok
}

// Solve returns the periodic state under the phase voltages v (orders 1 and
// up), with line currents to the given order.
func (s *Solver) Solve(ctx context.Context, v [3]phasor.Spectrum, order int) (*Orbit, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	e := s.e
	e.s.set(v)
	e.schedule()
	e.choose()
	e.passes = 0
	was := s.at
	was.x = append([]float64(nil), was.x...)
	left, err := e.shoot(ctx, &s.at, s.ok)
	if err != nil {
		s.at, s.ok = was, false
		return nil, err
	}
	s.ok = true
	s.at.x = append(s.at.x[:0], e.segs[0].xa...)
	s.at.key = e.segs[0].m.key

	o := &Orbit{solver: s, Correction: left, Passes: e.passes, Changes: e.parts * (len(e.segs) - 1), first: e.s.first}
	o.Moments = e.moments()
	o.Lines = e.lines(order)
	nb, nv := e.c.nb(), e.c.nv()
	for q := range o.Lines {
		for b := 0; b < nb; b++ {
			o.Lines[q][0] += complex(e.c.K[b][q]*o.Moments[b][nb+nv], 0)
		}
	}
	o.State = make([]float64, e.wide)
	e.segs[0].m.expand(e.segs[0].xa, o.State)
	for i, c := range e.c.Controls {
		o.watts = append(o.watts, control{c, o.State[nb+nv+1+i], e.mean[i]})
	}
	o.keep(e)
	o.Multiplier = o.multiplier(e)
	o.Yield = o.yield(e)
	return o, nil
}

// keep copies what the linearisation and the waveforms need.
func (o *Orbit) keep(e *engine) {
	o.segs, o.links = make([]segment, len(e.segs)), make([]link, len(e.segs))
	clone := func(v []float64) []float64 { return append([]float64(nil), v...) }
	for i, s := range e.segs {
		s.xa, s.xb = clone(s.xa), clone(s.xb)
		o.segs[i] = s
		l := e.links[i]
		o.links[i] = link{D: clone(l.D), W: clone(l.W), jump: clone(l.jump), rate: l.rate}
		if l.S != nil {
			o.links[i].S = clone(l.S)
		}
	}
	o.sym, o.parts = e.sym, e.parts
	o.walked = make([]float64, Samples*e.wide)
	if e.c.Rates {
		o.rates = make([]float64, Samples*e.wide)
	}
	row := func(v []float64, k int) []float64 { k %= Samples; return v[k*e.wide : (k+1)*e.wide] }
	var u [3]float64
	slope := make([]float64, e.wide)
	for _, k := range e.recorded() {
		m := e.atM[k]
		x := e.atX[k*e.wide : k*e.wide+m.d]
		m.expand(x, row(o.walked, k))
		if o.rates != nil {
			copy(u[:], e.s.at[3*k:])
			m.slope(x, &u, slope)
			for b := 0; b < e.c.nb(); b++ {
				row(o.rates, k)[b] = dot(m.T[b*m.ny:(b+1)*m.ny], slope)
			}
		}
	}
	stride := Samples / e.parts
	for i, k := 0, e.marks[0]; i < Samples-stride; i++ {
		e.ahead(row(o.walked, k+i), row(o.walked, k+i+stride))
		if o.rates != nil {
			e.ahead(row(o.rates, k+i), row(o.rates, k+i+stride))
		}
	}
}

// multiplier returns the largest eigenvalue of the derivative over what was
// stepped, to the power that makes it a period.
func (o *Orbit) multiplier(e *engine) complex128 {
	flow, _ := e.derivative()
	m := e.segs[0].m
	if m.n == 0 {
		return 0
	}
	a := mat.NewDense(m.n, m.n, nil)
	for i := 0; i < m.n; i++ {
		a.SetRow(i, flow[i*m.d:i*m.d+m.n])
	}
	var eig mat.Eigen
	if !eig.Factorize(a, mat.EigenNone) {
		return cmplx.Inf()
	}
	var big complex128
	for _, v := range eig.Values(nil) {
		if cmplx.Abs(v) > cmplx.Abs(big) {
			big = v
		}
	}
	return cmplx.Pow(big, complex(float64(e.parts), 0))
}

// yield lets each parameter move alone and returns how its controlled average
// follows, in A, V or W per unit of the parameter.
func (o *Orbit) yield(e *engine) []float64 {
	np := len(e.c.Controls)
	if np == 0 {
		return nil
	}
	flow, means := e.derivative()
	m := e.segs[0].m
	out := make([]float64, np)
	for c, w := range o.watts {
		a, dx := make([]float64, m.n*m.n), make([]float64, m.n)
		for i := 0; i < m.n; i++ {
			for j := 0; j < m.n; j++ {
				a[i*m.n+j] = -flow[i*m.d+j]
			}
			a[i*m.n+i]++
			dx[i] = flow[i*m.d+m.n+1+c]
		}
		if !solve(a, m.n, dx, 1) {
			continue
		}
		mean := means[c*m.d+m.n+1+c]
		for j, d := range dx {
			mean += means[c*m.d+j] * d
		}
		mean /= e.span()
		out[c] = w.gain() * mean
		if w.Power {
			out[c] += w.mean
		}
	}
	return out
}

// Walk returns the full state at the samples of the period, state by state:
// Walk()[i] has Samples values.
func (o *Orbit) Walk() [][]float64 { return transpose(o.walked, len(o.State)) }

// WalkRates returns the derivatives of the branch currents by angle, A per rad,
// at the samples; nil unless the circuit asks for Rates.
func (o *Orbit) WalkRates() [][]float64 {
	if o.rates == nil {
		return nil
	}
	return transpose(o.rates, len(o.State))
}

func transpose(v []float64, n int) [][]float64 {
	out := rows(n, Samples)
	for i := range out {
		for k := range out[i] {
			out[i][k] = v[k*n+i]
		}
	}
	return out
}

// Share returns the share of the period in which a unit's state satisfies f.
func (o *Orbit) Share(unit int, f func(state uint64) bool) float64 {
	var shift uint
	c := o.solver.e.c
	for _, u := range c.Units[:unit] {
		shift += u.bits()
	}
	var sum float64
	for _, s := range o.segs {
		key := s.m.key
		for r := 0; r < o.parts; r++ {
			if f(key >> shift & (1<<c.Units[unit].bits() - 1)) {
				sum += s.b - s.a
			}
			if o.sym != nil {
				key = o.sym.turn(c, key)
			}
		}
	}
	return sum / (2 * math.Pi)
}
