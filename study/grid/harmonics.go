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
}

// Solution is the network solved at orders 1..H.
type Solution struct {
	Check Check
	sys   *System
	order int
	seq   [3][][]complex128 // by sequence and order: shift-free node voltages, nil when zero
	base  *Fundamental
	shunt map[ElementID]phasor.Spectrum // current through phase shunts, orders 2..H
}

// Harmonics solves orders 2..order for the given currents and the supplies'
// background. Every order is checked: the residual and the complex power
// balance are taken element by element, without the assembled matrix. A
// solution that fails is an error.
func (s *System) Harmonics(ctx context.Context, base *Fundamental, order int, injections []Injection) (*Solution, error) {
	sol := &Solution{sys: s, order: order, base: base, shunt: map[ElementID]phasor.Spectrum{}, Check: Check{Rounds: base.Rounds}}
	for q := range sol.seq {
		sol.seq[q] = make([][]complex128, order+1)
		sol.seq[q][1] = base.seq[q]
	}
	w := s.newWork()
	for h := 2; h <= order; h++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if err := s.order(sol, w, h, injections); err != nil {
			return nil, err
		}
	}
	if sol.Check.Residual > 1e-7 || sol.Check.Balance > 1e-7 || math.IsNaN(sol.Check.Residual+sol.Check.Balance) {
		return nil, fmt.Errorf("the solution fails its own check: residual %.1e, power balance %.1e", sol.Check.Residual, sol.Check.Balance)
	}
	return sol, nil
}

// work is what one order needs, kept from order to order.
type work struct {
	factors [3]*factors
	current [3][]complex128
	shunts  []ElementID
}

func (s *System) newWork() *work {
	w := &work{}
	for q := range w.factors {
		w.factors[q], w.current[q] = s.pat.newFactors(), make([]complex128, s.nodes)
	}
	for id, e := range s.net.elements {
		if x, ok := e.(*PhaseShunt); ok && s.Live(x.Bus) {
			w.shunts = append(w.shunts, ElementID(id))
		}
	}
	return w
}

// order solves one order.
func (s *System) order(sol *Solution, w *work, h int, injections []Injection) error {
	sourced := s.sources(w, h, injections)
	if sourced == [3]bool{} {
		return nil
	}
	coupled := len(w.shunts) > 0
	for q := phasor.Zero; q <= phasor.Negative; q++ {
		if !sourced[q] && !coupled {
			continue
		}
		if err := s.prepare(sol, w.factors[q], h, q); err != nil {
			return err
		}
		sol.seq[q][h] = s.solveSequence(w.factors[q], w.current[q])
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
			if cmplx.IsNaN(v[k]) || cmplx.Abs(v[k]) > 1e3*s.scale[k] {
				return &PathError{Bus: s.busName(k), Sequence: q, Order: h}
			}
		}
		residual, balance := s.audit(float64(h), q, v, w.current[q])
		sol.Check.Residual = math.Max(sol.Check.Residual, residual)
		sol.Check.Balance = math.Max(sol.Check.Balance, balance)
	}
	return nil
}

// PathError says that a current finds no way back to its source, or meets a
// resonance without any damping.
type PathError struct {
	Bus      string
	Sequence phasor.Sequence
	Order    int
}

func (e *PathError) Error() string {
	if e.Sequence == phasor.Zero {
		return fmt.Sprintf("%s: the zero-sequence current of order %d has no path back; connect the load without neutral, or earth a neutral on this side of the transformer", e.Bus, e.Order)
	}
	return fmt.Sprintf("%s: order %d meets a resonance without any damping; give reactors, cables or loads their resistance", e.Bus, e.Order)
}

// prepare assembles and factors one sequence at one order.
func (s *System) prepare(sol *Solution, f *factors, h int, q phasor.Sequence) error {
	if _, ok := s.matrix(f, float64(h), q); !ok {
		return fmt.Errorf("the %s-sequence network cannot be solved at order %d", q, h)
	}
	return nil
}

// sources fills in the node currents of one order, shift-free, and reports
// which sequences carry any.
func (s *System) sources(w *work, h int, injections []Injection) (any [3]bool) {
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
			if cmplx.Abs(v) > 1e-12 {
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
	return any
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
			response[i][q] = s.solveSequence(w.factors[q], one)
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

// audit returns max |Y V - I| over max |I|, and the net complex power of all
// elements over the sum of its magnitudes (Tellegen), both element by element
// without the assembled matrix.
func (s *System) audit(h float64, q phasor.Sequence, v, cur []complex128) (residual, balance float64) {
	r := make([]complex128, s.nodes)
	var size, total float64
	var net complex128
	for k, i := range cur {
		r[k] = -i
		size = math.Max(size, cmplx.Abs(i)*s.scale[k])
		power := v[k] * cmplx.Conj(i)
		net -= power
		total += cmplx.Abs(power)
	}
	for _, e := range s.net.elements {
		b := e.ends()
		if !s.live[s.node[b[0]]] {
			continue
		}
		e.stamp(s.net.f1, h, q, func(i, j int, y complex128) {
			m, n := s.node[b[i]], s.node[b[j]]
			r[m] += y * v[n]
			net += v[m] * cmplx.Conj(y*v[n])
			if i != j {
				r[n] += y * v[m]
				net += v[n] * cmplx.Conj(y*v[m])
			}
		})
	}
	for k := range r {
		if s.live[k] && v[k] != 0 {
			residual = math.Max(residual, cmplx.Abs(r[k])*s.scale[k])
		}
	}
	if size > 0 {
		residual /= size
	}
	if total > 0 {
		balance = cmplx.Abs(net) / total
	}
	return residual, balance
}

// BusSequence returns the sequence voltages of a bus by order.
func (x *Solution) BusSequence(b BusID) [3]phasor.Spectrum {
	k := x.sys.node[b]
	var out [3]phasor.Spectrum
	for q := range out {
		out[q] = phasor.New(x.order)
		for h := 1; h <= x.order; h++ {
			if v := x.seq[q][h]; v != nil {
				out[q][h] = x.sys.turned(k, phasor.Sequence(q), v[k])
			}
		}
	}
	return out
}

// BusPhase returns the phase-to-neutral voltages of a bus by order.
func (x *Solution) BusPhase(b BusID) [3]phasor.Spectrum { return phases(x.BusSequence(b)) }

func phases(seq [3]phasor.Spectrum) [3]phasor.Spectrum {
	var out [3]phasor.Spectrum
	for i := range out {
		out[i] = make(phasor.Spectrum, len(seq[0]))
	}
	for h := range seq[0] {
		for i, v := range phasor.ToPhase([3]complex128{seq[0][h], seq[1][h], seq[2][h]}) {
			out[i][h] = v
		}
	}
	return out
}

// End is the current into an element at one of its ends.
type End struct {
	Bus   BusID
	Phase [3]phasor.Spectrum
}

// Ends returns the current into an element at each of its ends.
func (x *Solution) Ends(id ElementID) []End {
	e := x.sys.net.elements[id]
	bus := e.ends()
	seq := make([][3]phasor.Spectrum, len(bus))
	for i := range seq {
		for q := range seq[i] {
			seq[i][q] = phasor.New(x.order)
		}
	}
	for q := phasor.Zero; q <= phasor.Negative; q++ {
		for h := 1; h <= x.order; h++ {
			v := x.seq[q][h]
			if v == nil || !x.sys.live[x.sys.node[bus[0]]] {
				continue
			}
			i := make([]complex128, len(bus))
			e.stamp(x.sys.net.f1, float64(h), q, func(a, b int, y complex128) {
				i[a] += y * v[x.sys.node[bus[b]]]
				if a != b {
					i[b] += y * v[x.sys.node[bus[a]]]
				}
			})
			if sup, ok := e.(*Supply); ok {
				i[0] -= sup.emf(h, q) * sup.admittance(float64(h), q)
			}
			for n := range bus {
				seq[n][q][h] = x.sys.turned(x.sys.node[bus[n]], q, i[n])
			}
		}
	}
	out := make([]End, len(bus))
	for n := range out {
		out[n] = End{bus[n], phases(seq[n])}
		if d, ok := x.base.drawn[id]; ok {
			for p := range d {
				out[n].Phase[p][1] += d[p]
			}
		}
		if current := x.shunt[id]; current != nil {
			for h := 2; h <= x.order; h++ {
				for p, i := range e.(*PhaseShunt).through(current[h]) {
					out[n].Phase[p][h] += i
				}
			}
		}
	}
	return out
}

// Scan returns the driving-point impedance at a bus.
func (s *System) Scan(ctx context.Context, bus BusID, q phasor.Sequence, orders []float64, dst []complex128) ([]complex128, error) {
	fac := s.pat.newFactors()
	k := s.node[bus]
	cur := make([]complex128, s.nodes)
	cur[k] = 1
	dst = dst[:0]
	for _, h := range orders {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if _, ok := s.matrix(fac, h, q); !ok {
			return nil, fmt.Errorf("the network cannot be solved at order %g", h)
		}
		dst = append(dst, s.solveSequence(fac, cur)[k])
	}
	return dst, nil
}
