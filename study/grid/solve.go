package grid

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// place is where an element's admittance goes in the factors: diagonal
// positions of its ends, the entry between them, and whether it counts.
type place struct {
	d0, d1, low   int32 // low < 0: a shunt
	s00, s01, s11 float64
	n0, n1        int32
	live          bool
}

// places finds the place of each element, once for a topology.
func (s *System) places() {
	s.place = make([]place, len(s.net.elements))
	for i, e := range s.net.elements {
		b := e.ends()
		p := &s.place[i]
		m := s.node[b[0]]
		p.n0, p.d0, p.low, p.live = int32(m), int32(s.pat.rank[m]), -1, s.live[m]
		p.s00 = s.scale[m] * s.scale[m]
		if len(b) == 1 {
			continue
		}
		n := s.node[b[1]]
		p.n1, p.d1 = int32(n), int32(s.pat.rank[n])
		p.s01, p.s11 = s.scale[m]*s.scale[n], s.scale[n]*s.scale[n]
		r, c := s.pat.rank[m], s.pat.rank[n]
		if r < c {
			r, c = c, r
		}
		p.low = int32(s.pat.slot(r, c))
	}
}

// admit fills in the admittance of every element of one sequence at order h.
func (s *System) admit(dst []primitive, h float64, q phasor.Sequence) {
	for i, e := range s.net.elements {
		if s.place[i].live {
			dst[i] = s.net.at(e, h, q)
		} else {
			dst[i] = primitive{}
		}
	}
}

// factor assembles and factors one sequence from its elements' admittances, in
// per unit of each node's nominal voltage so that pivots are comparable. Nodes
// that take no part are pinned to a unit pivot. It reports false when a pivot is poor.
func (s *System) factor(f *factors, prim []primitive, q phasor.Sequence) bool {
	return s.shifted(f, prim, q, 0)
}

// shifted is factor with a value taken from each place on the diagonal.
func (s *System) shifted(f *factors, prim []primitive, q phasor.Sequence, shift complex128) bool {
	clear(f.diag)
	clear(f.low)
	clear(f.size)
	for i := range prim {
		p := &s.place[i]
		if !p.live {
			continue
		}
		y := &prim[i]
		f.add(p.d0, y.y00*complex(p.s00, 0))
		if p.low >= 0 {
			f.add(p.d1, y.y11*complex(p.s11, 0))
			f.low[p.low] += y.y01 * complex(p.s01, 0)
		}
	}
	for k := range s.nodes {
		if s.pinned(k, q) {
			f.add(int32(s.pat.rank[k]), 1)
		} else if shift != 0 {
			f.diag[s.pat.rank[k]] -= shift
		}
	}
	return s.pat.factor(f)
}

// pinned reports whether a node takes no part in a sequence: it has no supply,
// or nothing ties it to earth.
func (s *System) pinned(k int, q phasor.Sequence) bool {
	return !s.live[k] || s.floating[q] != nil && s.floating[q][k]
}

// back solves Y V = I for node currents (A) into v (V), with b for the work.
func (s *System) back(f *factors, current, b, v []complex128) {
	for k, i := range current {
		b[s.pat.rank[k]] = i * complex(s.scale[k], 0)
	}
	s.pat.solve(f, b)
	for k := range v {
		v[k] = 0
		if s.live[k] {
			v[k] = b[s.pat.rank[k]] * complex(s.scale[k], 0)
		}
	}
}

// dense solves the same system by a pivoted dense solver, for the orders at
// which a pivot is poor. It reports false when the matrix is singular.
func (s *System) dense(prim []primitive, q phasor.Sequence, current, v []complex128) bool {
	a := make([][]complex128, s.nodes)
	for k := range a {
		a[k] = make([]complex128, s.nodes)
	}
	for i := range prim {
		p := &s.place[i]
		if !p.live {
			continue
		}
		a[p.n0][p.n0] += prim[i].y00 * complex(p.s00, 0)
		if p.low < 0 {
			continue
		}
		a[p.n1][p.n1] += prim[i].y11 * complex(p.s11, 0)
		a[p.n0][p.n1] += prim[i].y01 * complex(p.s01, 0)
		a[p.n1][p.n0] += prim[i].y01 * complex(p.s01, 0)
	}
	b := make([]complex128, s.nodes)
	for k := range a {
		if s.pinned(k, q) {
			a[k][k]++
		}
		b[k] = current[k] * complex(s.scale[k], 0)
	}
	if !solveDense(a, b) {
		return false
	}
	for k := range v {
		v[k] = b[k] * complex(s.scale[k], 0)
	}
	return true
}

// Fundamental is the solution at order 1.
type Fundamental struct {
	sys    *System
	seq    [3][]complex128 // shift-free node voltages
	prim   [3][]primitive
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

func (e *PowerLoad) label() string                                   { return e.Name }
func (e *PowerLoad) ends() []BusID                                   { return []BusID{e.Bus} }
func (e *PowerLoad) series() bool                                    { return false }
func (e *PowerLoad) check() *ElementError                            { return nil }
func (e *PowerLoad) admit(_, _ float64, _ phasor.Sequence) primitive { return primitive{} }
func (e *PowerLoad) weights() [3]float64                             { return e.Weight }
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
// factored once and the loads' currents are corrected until they settle. A
// supply too weak for its loads does not settle and is a *WeakError.
func (s *System) Fundamental(ctx context.Context) (*Fundamental, error) {
	f := &Fundamental{sys: s, drawn: map[ElementID][3]complex128{}}
	w := s.newWork()
	var base [3][]complex128
	n := s.nodes
	block := make([]complex128, 7*n)
	next := block[6*n:]
	for q := range base {
		base[q], f.seq[q] = block[q*n:(q+1)*n], block[(3+q)*n:(4+q)*n]
		f.prim[q] = make([]primitive, len(s.net.elements))
		s.admit(f.prim[q], 1, phasor.Sequence(q))
		if !s.factor(w.factors[q], f.prim[q], phasor.Sequence(q)) {
			return nil, &SingularError{Sequence: phasor.Sequence(q), Order: 1}
		}
		for _, sup := range s.supplies {
			base[q][s.node[sup.Bus]] += sup.emf(1, phasor.Sequence(q)) * sup.admittance(1, phasor.Sequence(q))
		}
		s.back(w.factors[q], base[q], w.b, f.seq[q])
	}
	const rounds = 300
	weakest := 0
	for f.Rounds = 1; f.Rounds <= rounds; f.Rounds++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		for q := range base {
			copy(w.current[q], base[q])
		}
		for id, e := range s.net.elements {
			d, ok := e.(Drawing)
			if !ok || !s.place[id].live {
				continue
			}
			k := int(s.place[id].n0)
			i := d.draw(s.phaseAt(&f.seq, k))
			f.drawn[ElementID(id)] = i
			for q, v := range phasor.ToSequence(i) {
				if s.floating[q] != nil && s.floating[q][k] {
					continue // only rounding is left of it there: see float
				}
				w.current[q][k] -= s.turned(k, mirror(phasor.Sequence(q)), v)
			}
		}
		var worst float64
		for q := range base {
			s.back(w.factors[q], w.current[q], w.b, next)
			for k := range next {
				if d := cmplxAbs1(next[k]-f.seq[q][k]) / s.scale[k]; d > worst || math.IsNaN(d) {
					worst, weakest = d, k
				}
			}
			copy(f.seq[q], next)
		}
		if math.IsNaN(worst) || worst > 1e6 {
			break
		}
		if worst < 1e-13 {
			return f, s.sound(f)
		}
	}
	return nil, &WeakError{Bus: s.busName(weakest)}
}

// sound refuses a solution in which a bus has lost more than six tenths of its
// voltage: loads do not work there, and the stable branch is not sure.
func (s *System) sound(f *Fundamental) error {
	for k, live := range s.live {
		if live && cmplx.Abs(f.seq[phasor.Positive][k]) < 0.4*s.scale[k] {
			return &WeakError{Bus: s.busName(k)}
		}
	}
	return nil
}

// WeakError says that the power flow has no sound solution.
type WeakError struct{ Bus string }

func (e *WeakError) Error() string {
	return fmt.Sprintf("%s: the supply is too weak for the loads as stated, the voltage collapses; check fault level, impedances and powers on the way to this bus", e.Bus)
}

// SingularError says that a network has no solution.
type SingularError struct {
	Sequence phasor.Sequence
	Order    int
}

func (e *SingularError) Error() string {
	return fmt.Sprintf("the %s-sequence network has no solution at order %d: a resonance without any damping; give reactors, cables or loads their resistance", e.Sequence, e.Order)
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
