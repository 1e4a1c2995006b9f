package grid

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// matrix assembles and factors the admittance of one sequence at order h, in
// per unit of each node's nominal voltage so that pivots are comparable.
// Nodes without supply, and nodes that nothing holds in this sequence, get a
// unit pivot and a zero right-hand side.
func (s *System) matrix(f *factors, h float64, q phasor.Sequence) ([]complex128, bool) {
	clear(f.diag)
	clear(f.low)
	for _, e := range s.net.elements {
		b := e.ends()
		if !s.live[s.node[b[0]]] {
			continue
		}
		e.stamp(s.net.f1, h, q, func(i, j int, v complex128) {
			m, n := s.node[b[i]], s.node[b[j]]
			v *= complex(s.scale[m]*s.scale[n], 0)
			r, c := s.pat.rank[m], s.pat.rank[n]
			if r == c {
				f.diag[r] += v
				return
			}
			if r < c {
				r, c = c, r
			}
			f.low[s.pat.slot[[2]int{r, c}]] += v
		})
	}
	for k := range f.diag {
		if f.diag[k] == 0 {
			f.diag[k] = 1
		}
	}
	before := append([]complex128(nil), f.diag...)
	return before, s.pat.factor(f)
}

// solveSequence solves Y V = I for node currents (A) and returns V (V).
func (s *System) solveSequence(f *factors, current []complex128) []complex128 {
	b := make([]complex128, s.nodes)
	for k, v := range current {
		b[s.pat.rank[k]] = v * complex(s.scale[k], 0)
	}
	s.pat.solve(f, b)
	out := make([]complex128, s.nodes)
	for k := range out {
		if s.live[k] {
			out[k] = b[s.pat.rank[k]] * complex(s.scale[k], 0)
		}
	}
	return out
}

// Fundamental is the solution at order 1.
type Fundamental struct {
	sys    *System
	seq    [3][]complex128 // shift-free node voltages
	drawn  map[ElementID][3]complex128
	Rounds int
}

// Voltage returns the phase voltages of a bus at order 1.
func (f *Fundamental) Voltage(b BusID) [3]complex128 { return f.sys.phaseAt(&f.seq, f.sys.node[b]) }

// Current returns what a load draws from each phase at order 1.
func (f *Fundamental) Current(e ElementID) [3]complex128 { return f.drawn[e] }

func (s *System) phaseAt(seq *[3][]complex128, k int) [3]complex128 {
	var v [3]complex128
	for q := range v {
		if seq[q] != nil {
			v[q] = s.turned(k, phasor.Sequence(q), seq[q][k])
		}
	}
	return phasor.ToPhase(v)
}

// Drawing is an element whose order 1 current follows from the voltage.
type Drawing interface {
	Element
	// draw returns the phase currents at the given phase voltages.
	draw(v [3]complex128) [3]complex128
}

// PowerLoad draws constant power, or constant current, at order 1, and
// nothing above (what it draws above is injected).
type PowerLoad struct {
	Name     string
	Bus      BusID
	P, Q     float64    // W, var; total
	Current  float64    // A rms: fixed instead of the power, at angle of P, Q
	Weight   [3]float64 // terminals: zero for three-phase, {1,-1,0} for ab
	NominalV float64    // terminal voltage at which a constant current is stated; 0: not
}

func (e *PowerLoad) label() string                                  { return e.Name }
func (e *PowerLoad) ends() []BusID                                  { return []BusID{e.Bus} }
func (e *PowerLoad) series() bool                                   { return false }
func (e *PowerLoad) check() *ElementError                           { return nil }
func (e *PowerLoad) stamp(_, _ float64, _ phasor.Sequence, _ Stamp) {}
func (e *PowerLoad) draw(v [3]complex128) [3]complex128 {
	power := complex(e.P, e.Q)
	current := func(u complex128, share float64) complex128 {
		if u == 0 {
			return 0
		}
		if e.Current > 0 {
			return cmplx.Rect(e.Current, cmplx.Phase(u)-cmplx.Phase(power))
		}
		return cmplx.Conj(power * complex(share, 0) / u)
	}
	if e.Weight == ([3]float64{}) {
		q := phasor.ToSequence(v)
		return phasor.ToPhase([3]complex128{phasor.Positive: current(q[phasor.Positive], 1.0/3)})
	}
	var u complex128
	for i, w := range e.Weight {
		u += complex(w, 0) * v[i]
	}
	var out [3]complex128
	for i, w := range e.Weight {
		out[i] = complex(w, 0) * current(u, 1)
	}
	return out
}

// Fundamental solves order 1 by current injection: the linear network is
// factored once and the loads' currents are corrected until they settle.
func (s *System) Fundamental(ctx context.Context) (*Fundamental, error) {
	f := &Fundamental{sys: s, drawn: map[ElementID][3]complex128{}}
	var fac [3]*factors
	var base [3][]complex128
	for q := range fac {
		fac[q] = s.pat.newFactors()
		if _, ok := s.matrix(fac[q], 1, phasor.Sequence(q)); !ok {
			return nil, fmt.Errorf("the %s-sequence network cannot be solved at order 1", phasor.Sequence(q))
		}
		base[q] = make([]complex128, s.nodes)
		for _, sup := range s.supplies {
			k := s.node[sup.Bus]
			base[q][k] += sup.emf(1, phasor.Sequence(q)) * sup.admittance(1, phasor.Sequence(q))
		}
		f.seq[q] = s.solveSequence(fac[q], base[q])
	}
	const rounds = 200
	for f.Rounds = 1; f.Rounds <= rounds; f.Rounds++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		var cur [3][]complex128
		for q := range cur {
			cur[q] = append([]complex128(nil), base[q]...)
		}
		for id, e := range s.net.elements {
			d, ok := e.(Drawing)
			if !ok || !s.live[s.node[e.ends()[0]]] {
				continue
			}
			k := s.node[e.ends()[0]]
			i := d.draw(s.phaseAt(&f.seq, k))
			f.drawn[ElementID(id)] = i
			for q, v := range phasor.ToSequence(i) {
				cur[q][k] -= s.turned(k, mirror(phasor.Sequence(q)), v)
			}
		}
		var worst float64
		for q := range cur {
			v := s.solveSequence(fac[q], cur[q])
			for k := range v {
				d := cmplx.Abs(v[k]-f.seq[q][k]) / s.scale[k]
				worst = math.Max(worst, d)
			}
			f.seq[q] = v
		}
		if math.IsNaN(worst) || worst > 1e6 {
			break
		}
		if worst < 1e-13 {
			return f, nil
		}
	}
	return nil, fmt.Errorf("the power flow does not settle: the supply is too weak for the loads as stated")
}

// mirror returns the sequence whose turn undoes that of q.
func mirror(q phasor.Sequence) phasor.Sequence {
	switch q {
	case phasor.Positive:
		return phasor.Negative
	case phasor.Negative:
		return phasor.Positive
	}
	return q
}
