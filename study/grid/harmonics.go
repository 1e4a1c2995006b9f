package grid

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// Injection is a current drawn from a bus, by phase and order (A rms).
type Injection struct {
	Name    string
	Bus     BusID
	Current [3]phasor.Spectrum
}

// Check says how well a solution satisfies its equations.
type Check struct {
	Residual, Balance float64
	Fallback, Rounds  int
	Reciprocity       float64 // of one pair of buses at one order, relative
}

// Solution is the network solved at orders 1..H.
type Solution struct {
	Check Check
	sys   *System
	order int
	seq   [3][][]complex128 // by sequence and order: shift-free node voltages, nil when zero
	prim  [3][][]primitive  // by sequence and order: each element's admittance, nil when not solved
	base  *Fundamental
	shunt map[ElementID]phasor.Spectrum // current through phase shunts, orders 2..H
	muted map[ElementID]bool            // supplies whose background is left out; nil for none: see Contributions
}

// Harmonics solves orders 2..order for the given currents and the supplies'
// background. Every order is checked: the residual and the complex power
// balance are taken element by element, without the assembled matrix. A
// solution that fails is an error.
func (s *System) Harmonics(ctx context.Context, base *Fundamental, order int, injections []Injection) (*Solution, error) {
	sol := &Solution{sys: s, order: order, base: base, shunt: map[ElementID]phasor.Spectrum{}, Check: Check{Rounds: base.Rounds}}
	for q := range sol.seq {
		sol.seq[q], sol.prim[q] = make([][]complex128, order+1), make([][]primitive, order+1)
		sol.seq[q][1], sol.prim[q][1] = base.seq[q], base.prim[q]
	}
	w := s.newWork()
	w.prims, w.volts = s.stores(order, injections, len(w.shunts) > 0)
	for h := 2; h <= order; h++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if err := s.order(sol, w, h, injections); err != nil {
			return nil, err
		}
	}
	if sol.Check.Reciprocity = s.reciprocity(w); sol.Check.Reciprocity > 1e-7 {
		return nil, fmt.Errorf("the solution fails its own check: reciprocity %.1e", sol.Check.Reciprocity)
	}
	if sol.Check.Residual > 1e-7 || sol.Check.Balance > 1e-7 {
		return nil, fmt.Errorf("the solution fails its own check: residual %.1e, power balance %.1e", sol.Check.Residual, sol.Check.Balance)
	}
	return sol, nil
}

// stores returns room for the admittances and voltages of all the orders and
// sequences that will carry something.
func (s *System) stores(order int, injections []Injection, coupled bool) ([]primitive, []complex128) {
	count := 0
	for h := 2; h <= order; h++ {
		var some [3]bool
		for i := range injections {
			in := &injections[i]
			phase := [3]complex128{in.Current[0].At(h), in.Current[1].At(h), in.Current[2].At(h)}
			if phase == ([3]complex128{}) || !s.live[s.node[in.Bus]] {
				continue
			}
			for q, v := range phasor.ToSequence(phase) {
				some[q] = some[q] || cmplxAbs1(v) > 1e-12
			}
		}
		for _, sup := range s.supplies {
			for q := range some {
				some[q] = some[q] || sup.emf(h, phasor.Sequence(q)) != 0
			}
		}
		if coupled && some != ([3]bool{}) {
			some = [3]bool{true, true, true}
		}
		for _, x := range some {
			if x {
				count++
			}
		}
	}
	return make([]primitive, count*len(s.net.elements)), make([]complex128, count*s.nodes)
}

// work is what one order needs, kept from order to order.
type work struct {
	factors  [3]*factors
	current  [3][]complex128
	b        []complex128 // right-hand side in elimination order
	residual []complex128
	shunts   []ElementID
	prims    []primitive  // room for the admittances of the orders to come
	volts    []complex128 // room for their voltages
}

// room returns the next admittances and voltages of a solution, from the
// store that was made for all of its orders.
func (w *work) room(elements, nodes int) ([]primitive, []complex128) {
	if len(w.prims) < elements || len(w.volts) < nodes {
		return make([]primitive, elements), make([]complex128, nodes)
	}
	p, v := w.prims[:elements:elements], w.volts[:nodes:nodes]
	w.prims, w.volts = w.prims[elements:], w.volts[nodes:]
	return p, v
}

func (s *System) newWork() *work {
	w := &work{b: make([]complex128, s.nodes), residual: make([]complex128, s.nodes)}
	for q := range w.factors {
		w.factors[q], w.current[q] = s.pat.newFactors(), make([]complex128, s.nodes)
	}
	for id, e := range s.net.elements {
		if _, ok := e.(*PhaseShunt); ok && s.place[id].live {
			w.shunts = append(w.shunts, ElementID(id))
		}
	}
	return w
}

// order solves one order.
func (s *System) order(sol *Solution, w *work, h int, injections []Injection) error {
	sourced, err := s.sources(w, h, injections)
	if err != nil || sourced == [3]bool{} {
		return err
	}
	coupled := len(w.shunts) > 0
	for q := phasor.Zero; q <= phasor.Negative; q++ {
		if !sourced[q] && !coupled {
			continue
		}
		sol.prim[q][h], sol.seq[q][h] = w.room(len(s.net.elements), s.nodes)
		s.admit(sol.prim[q][h], float64(h), q)
		if s.factor(w.factors[q], sol.prim[q][h], q) {
			s.back(w.factors[q], w.current[q], w.b, sol.seq[q][h])
		} else if sol.Check.Fallback++; coupled || !s.dense(sol.prim[q][h], q, w.current[q], sol.seq[q][h]) {
			return &SingularError{Sequence: q, Order: h}
		}
	}
	if coupled {
		if err := s.compensate(sol, w, h); err != nil {
			return err
		}
	}
	for q := phasor.Zero; q <= phasor.Negative; q++ {
		v := sol.seq[q][h]
		if v == nil {
			continue
		}
		for k := range v {
			if a := cmplxAbs1(v[k]); !(a <= 100*s.scale[k]) {
				return &PathError{Bus: s.busName(k), Sequence: q, Order: h}
			}
		}
		residual, balance := s.audit(sol, w, h, q)
		if residual > 1e-9 && !coupled {
			sol.Check.Fallback++
			if !s.dense(sol.prim[q][h], q, w.current[q], v) {
				return &SingularError{Sequence: q, Order: h}
			}
			residual, balance = s.audit(sol, w, h, q)
		}
		sol.Check.Residual, sol.Check.Balance = max(sol.Check.Residual, residual), max(sol.Check.Balance, balance)
	}
	return nil
}

// PathError says that a current finds no way back to its source, or meets a
// resonance without any damping.
type PathError struct {
	Load     string // that draws the current; empty when several do
	Bus      string
	Sequence phasor.Sequence
	Order    int
}

func (e *PathError) Error() string {
	if e.Load != "" {
		return fmt.Sprintf("%s: the zero-sequence current of order %d that it draws at bus %s has no path back; connect the load without neutral, or earth a neutral on this side of the transformer", e.Load, e.Order, e.Bus)
	}
	if e.Sequence == phasor.Zero {
		return fmt.Sprintf("%s: the zero-sequence current of order %d has no path back; connect the load without neutral, or earth a neutral on this side of the transformer", e.Bus, e.Order)
	}
	return fmt.Sprintf("%s: order %d meets a resonance without any damping; give reactors, cables or loads their resistance", e.Bus, e.Order)
}

// sources fills in the node currents of one order, shift-free, and reports
// which sequences carry any.
func (s *System) sources(w *work, h int, injections []Injection) (any [3]bool, err error) {
	for q := range w.current {
		clear(w.current[q])
	}
	for i := range injections {
		in := &injections[i]
		k := s.node[in.Bus]
		if !s.live[k] {
			continue
		}
		for q, v := range phasor.ToSequence([3]complex128{in.Current[0].At(h), in.Current[1].At(h), in.Current[2].At(h)}) {
			if cmplxAbs1(v) > 1e-12 {
				if s.floating[q] != nil && s.floating[q][k] {
					return any, &PathError{Load: in.Name, Bus: s.busName(k), Sequence: phasor.Sequence(q), Order: h}
				}
				any[q] = true
				w.current[q][k] -= s.turned(k, mirror(phasor.Sequence(q)), v)
			}
		}
	}
	for _, sup := range s.supplies {
		for q := phasor.Zero; q <= phasor.Negative; q++ {
			if v := sup.emf(h, q); v != 0 {
				any[q] = true
				w.current[q][s.node[sup.Bus]] += v * sup.admittance(float64(h), q)
			}
		}
	}
	return any, nil
}

// compensate puts the phase shunts in: with e the voltages across them, e0
// those without them and R the response to a current drawn by each,
// (1 - R Y) e = e0.
func (s *System) compensate(sol *Solution, w *work, h int) error {
	n := len(w.shunts)
	response := make([][3][]complex128, n) // by shunt and sequence: node voltages for 1 A drawn
	injected := make([][3]complex128, n)   // the same current, shift-free, by sequence
	for i, id := range w.shunts {
		x := s.net.elements[id].(*PhaseShunt)
		k := s.node[x.Bus]
		for q, v := range phasor.ToSequence(x.through(1)) {
			injected[i][q] = -s.turned(k, mirror(phasor.Sequence(q)), v)
			one := make([]complex128, s.nodes)
			one[k] = injected[i][q]
			response[i][q] = make([]complex128, s.nodes)
			s.back(w.factors[q], one, w.b, response[i][q])
		}
	}
	a, e := make([][]complex128, n), make([]complex128, n)
	y := make([]complex128, n)
	for i, id := range w.shunts {
		y[i] = s.net.elements[id].(*PhaseShunt).Branch.Admittance(float64(h))
	}
	voltages := [3][]complex128{sol.seq[0][h], sol.seq[1][h], sol.seq[2][h]}
	for i, id := range w.shunts {
		x := s.net.elements[id].(*PhaseShunt)
		k := s.node[x.Bus]
		e[i] = x.terminal(s.phaseAt(&voltages, k))
		a[i] = make([]complex128, n)
		for j := range n {
			a[i][j] = -x.terminal(s.phaseAt(&response[j], k)) * y[j]
		}
		a[i][i]++
	}
	if !solveDense(a, e) {
		return fmt.Errorf("the single-phase loads resonate with the network at order %d without any damping", h)
	}
	for i, id := range w.shunts {
		current := y[i] * e[i]
		if sol.shunt[id] == nil {
			sol.shunt[id] = phasor.New(sol.order)
		}
		sol.shunt[id][h] = current
		k := s.node[s.net.elements[id].(*PhaseShunt).Bus]
		for q := range voltages {
			w.current[q][k] += current * injected[i][q]
			for node, v := range response[i][q] {
				voltages[q][node] += v * current
			}
		}
	}
	return nil
}

// audit returns the residual max |Y V - I| over max |I|, and the net complex
// power of all elements over the sum of its magnitudes (Tellegen), both taken
// element by element without the assembled matrix.
func (s *System) audit(sol *Solution, w *work, h int, q phasor.Sequence) (residual, balance float64) {
	v, r := sol.seq[q][h], w.residual
	var size, total, worst float64
	var net complex128
	for k, i := range w.current[q] {
		r[k] = -i
		if i == 0 {
			continue
		}
		size = max(size, cmplxAbs1(i)*s.scale[k])
		power := v[k] * cmplx.Conj(i)
		net -= power
		total += cmplxAbs1(power)
	}
	for i, y := range sol.prim[q][h] {
		p := &s.place[i]
		if !p.live {
			continue
		}
		v0 := v[p.n0]
		i0 := y.y00 * v0
		if p.low >= 0 {
			v1 := v[p.n1]
			i0 += y.y01 * v1
			i1 := y.y01*v0 + y.y11*v1
			r[p.n1] += i1
			power := v1 * cmplx.Conj(i1)
			net += power
			total += cmplxAbs1(power)
		}
		r[p.n0] += i0
		power := v0 * cmplx.Conj(i0)
		net += power
		total += cmplxAbs1(power)
	}
	for k := range r {
		if s.live[k] && v[k] != 0 {
			worst = max(worst, cmplxAbs1(r[k])*s.scale[k])
		}
	}
	if size > 0 {
		residual = worst / size
	}
	if total > 0 {
		balance = cmplxAbs1(net) / total
	}
	if math.IsNaN(worst) || math.IsNaN(cmplxAbs1(net)) {
		residual = math.Inf(1)
	}
	return residual, balance
}

// three returns three zero spectra in one block.
func three(order int) [3]phasor.Spectrum {
	n := order + 1
	all := make(phasor.Spectrum, 3*n)
	return [3]phasor.Spectrum{all[:n:n], all[n : 2*n : 2*n], all[2*n:]}
}

// BusVoltage returns the phase-to-neutral and the sequence voltages of a bus by
// order.
func (x *Solution) BusVoltage(b BusID) (phase, seq [3]phasor.Spectrum) {
	k := x.sys.node[b]
	phase, seq = three(x.order), three(x.order)
	for h := 1; h <= x.order; h++ {
		var s [3]complex128
		for q := range s {
			if v := x.seq[q][h]; v != nil {
				s[q] = x.sys.turned(k, phasor.Sequence(q), v[k])
				seq[q][h] = s[q]
			}
		}
		if s != [3]complex128{} {
			for i, v := range phasor.ToPhase(s) {
				phase[i][h] = v
			}
		}
	}
	return phase, seq
}

// End is the current into an element at one of its ends.
type End struct {
	Bus   BusID
	Phase [3]phasor.Spectrum
}

// Ends returns the current into an element at each of its ends.
func (x *Solution) Ends(id ElementID) []End {
	e := x.sys.net.elements[id]
	p := &x.sys.place[id]
	bus := e.ends()
	out := make([]End, len(bus))
	for n := range out {
		out[n] = End{bus[n], three(x.order)}
	}
	if !p.live {
		return out
	}
	sup, supply := e.(*Supply)
	for h := 1; h <= x.order; h++ {
		var s [2][3]complex128
		for q := range s[0] {
			v := x.seq[q][h]
			if v == nil {
				continue
			}
			y := &x.prim[q][h][id]
			i := y.y00 * v[p.n0]
			if p.low >= 0 {
				i += y.y01 * v[p.n1]
				s[1][q] = x.sys.turned(int(p.n1), phasor.Sequence(q), y.y01*v[p.n0]+y.y11*v[p.n1])
			}
			if supply && !x.muted[id] {
				i -= sup.emf(h, phasor.Sequence(q)) * y.y00
			}
			s[0][q] = x.sys.turned(int(p.n0), phasor.Sequence(q), i)
		}
		for n := range out {
			if s[n] != [3]complex128{} {
				for i, v := range phasor.ToPhase(s[n]) {
					out[n].Phase[i][h] = v
				}
			}
		}
	}
	if d, ok := x.base.drawn[id]; ok {
		for i := range d {
			out[0].Phase[i][1] += d[i]
		}
	}
	if current := x.shunt[id]; current != nil {
		for h := 2; h <= x.order; h++ {
			for i, v := range e.(*PhaseShunt).through(current[h]) {
				out[0].Phase[i][h] += v
			}
		}
	}
	return out
}

// Scan returns the driving-point impedance at a bus in one sequence, ohm, for
// each order: EMFs shorted, non-linear loads open. dst is used when it is long
// enough.
func (s *System) Scan(ctx context.Context, bus BusID, q phasor.Sequence, orders []float64, dst []complex128) ([]complex128, error) {
	sc := s.NewScanner(bus, q)
	dst = dst[:0]
	for i, h := range orders {
		if i%64 == 0 {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
		}
		z, err := sc.At(h)
		if err != nil {
			return nil, err
		}
		dst = append(dst, z)
	}
	return dst, nil
}

// Scanner looks into one bus in one sequence, order after order, without
// allocating.
type Scanner struct {
	s    *System
	q    phasor.Sequence
	node int
	f    *factors
	prim []primitive
	one  []complex128
	b, v []complex128
}

// NewScanner returns a scanner. It is not safe for concurrent use.
func (s *System) NewScanner(bus BusID, q phasor.Sequence) *Scanner {
	sc := &Scanner{s: s, q: q, node: s.node[bus], f: s.pat.newFactors(), prim: make([]primitive, len(s.net.elements)),
		one: make([]complex128, s.nodes), b: make([]complex128, s.nodes), v: make([]complex128, s.nodes)}
	sc.one[sc.node] = 1
	return sc
}

// Transfer returns the voltage at another bus, V, for 1 A into the scanner's
// own bus at order h: the transfer impedance, ohm, with the angle that the
// vector groups between the two give it.
func (sc *Scanner) Transfer(h float64, to BusID) (complex128, error) {
	s := sc.s
	if _, err := sc.At(h); err != nil {
		return 0, err
	}
	k := s.node[to]
	if s.pinned(k, sc.q) || sc.v[k] == 0 {
		return 0, fmt.Errorf("%s: no current at %s reaches this bus in the %s sequence, so there is no transfer impedance", s.busName(k), s.busName(sc.node), sc.q)
	}
	return s.turned(k, sc.q, s.turned(sc.node, mirror(sc.q), sc.v[k])), nil
}

// At returns the driving-point impedance at order h, ohm.
func (sc *Scanner) At(h float64) (complex128, error) {
	s := sc.s
	if s.floating[sc.q] != nil && s.floating[sc.q][sc.node] {
		return 0, fmt.Errorf("%s: nothing ties this bus to earth in the %s sequence, so its impedance has no value", s.busName(sc.node), sc.q)
	}
	s.admit(sc.prim, h, sc.q)
	if s.factor(sc.f, sc.prim, sc.q) {
		s.back(sc.f, sc.one, sc.b, sc.v)
	} else if !s.dense(sc.prim, sc.q, sc.one, sc.v) {
		return 0, &SingularError{Sequence: sc.q, Order: int(math.Round(h))}
	}
	return sc.v[sc.node], nil
}
