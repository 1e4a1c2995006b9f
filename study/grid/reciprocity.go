package grid

import "quietbus/study/phasor"

// reciprocity returns how far the transfer impedances of one pair of buses
// differ in the two directions, relative: between the first and the last live
// node of the elimination, in the positive sequence at order 5. The two
// currents take different ways through the factors, so rounding that grows
// there shows.
func (s *System) reciprocity(w *work) float64 {
	a, b := -1, -1
	for k := range s.nodes {
		if !s.live[k] {
			continue
		}
		if a < 0 || s.pat.rank[k] < s.pat.rank[a] {
			a = k
		}
		if b < 0 || s.pat.rank[k] > s.pat.rank[b] {
			b = k
		}
	}
	if a < 0 || a == b {
		return 0
	}
	prim := make([]primitive, len(s.net.elements))
	s.admit(prim, 5, phasor.Positive)
	f, current := w.factors[0], w.current[0]
	if !s.factor(f, prim, phasor.Positive) {
		return 0 // the dense solver has its own check
	}
	transfer := func(from, to int) complex128 {
		clear(current)
		current[from] = 1
		s.back(f, current, w.b, w.residual)
		return w.residual[to]
	}
	there, back := transfer(a, b), transfer(b, a)
	if size := cmplxAbs1(there) + cmplxAbs1(back); size > 0 {
		return cmplxAbs1(there-back) / size
	}
	return 0
}
