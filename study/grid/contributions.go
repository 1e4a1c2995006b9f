package grid

import (
	"context"
	"fmt"
	"math"

	"quietbus/study/phasor"
)

// Source is one source of harmonics: all currents that rise and fall together,
// or the background of one supply.
type Source struct {
	Name       string
	Injections []Injection
	Supply     string // element whose background it is; "" for a load
}

// Contributions is what each source by itself makes of a solved network. Their
// sum is the solution, by superposition.
type Contributions struct {
	Sources []Source
	parts   []*Solution
}

// Contributions solves orders 2 and above for each source by itself, several
// right-hand sides for each factored matrix. The sources' currents together
// have to be those that x was solved for; supplies with a background are added
// as sources of their own. The parts are checked against x: a sum that differs
// by more than a millionth is an error.
func (x *Solution) Contributions(ctx context.Context, sources []Source) (*Contributions, error) {
	s := x.sys
	c := &Contributions{Sources: append([]Source(nil), sources...)}
	for _, sup := range s.supplies {
		if len(sup.Background) > 0 {
			c.Sources = append(c.Sources, Source{Name: sup.Name, Supply: sup.Name})
		}
	}
	for range c.Sources {
		part := &Solution{sys: s, order: x.order, base: &Fundamental{}, shunt: map[ElementID]phasor.Spectrum{}}
		for q := range part.seq {
			part.seq[q] = make([][]complex128, x.order+1)
		}
		part.prim = x.prim
		c.parts = append(c.parts, part)
	}
	for i, src := range c.Sources {
		part := c.parts[i]
		part.muted = map[ElementID]bool{}
		for id, e := range s.net.elements {
			if sup, ok := e.(*Supply); ok && sup.Name != src.Supply {
				part.muted[ElementID(id)] = true
			}
		}
	}
	w := s.newWork()
	for h := 2; h <= x.order; h++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if err := c.order(x, w, h); err != nil {
			return nil, err
		}
	}
	return c, nil
}

// order solves one order for every source.
func (c *Contributions) order(x *Solution, w *work, h int) error {
	s := x.sys
	coupled := len(w.shunts) > 0
	var ready, poor [3]bool
	for i, src := range c.Sources {
		some, err := s.alone(w, h, src)
		if err != nil {
			return err
		}
		if some == [3]bool{} {
			continue
		}
		part := c.parts[i]
		for q := phasor.Zero; q <= phasor.Negative; q++ {
			if !some[q] && !coupled || x.prim[q][h] == nil {
				continue
			}
			if !ready[q] {
				ready[q], poor[q] = true, !s.factor(w.factors[q], x.prim[q][h], q)
			}
			v := make([]complex128, s.nodes)
			if poor[q] {
				if coupled || !s.dense(x.prim[q][h], q, w.current[q], v) {
					return &SingularError{Sequence: q, Order: h}
				}
			} else {
				s.back(w.factors[q], w.current[q], w.b, v)
			}
			part.seq[q][h] = v
		}
		if coupled {
			if err := s.compensate(part, w, h); err != nil {
				return err
			}
		}
	}
	return c.agree(x, h)
}

// alone fills in the node currents of one source.
func (s *System) alone(w *work, h int, src Source) (some [3]bool, err error) {
	for q := range w.current {
		clear(w.current[q])
	}
	for i := range src.Injections {
		in := &src.Injections[i]
		k := s.node[in.Bus]
		if !s.live[k] {
			continue
		}
		for q, v := range phasor.ToSequence([3]complex128{in.Current[0].At(h), in.Current[1].At(h), in.Current[2].At(h)}) {
			if cmplxAbs1(v) <= 1e-12 {
				continue
			}
			if s.floating[q] != nil && s.floating[q][k] {
				return some, &PathError{Load: in.Name, Bus: s.busName(k), Sequence: phasor.Sequence(q), Order: h}
			}
			some[q] = true
			w.current[q][k] -= s.turned(k, mirror(phasor.Sequence(q)), v)
		}
	}
	for _, sup := range s.supplies {
		if src.Supply == "" || sup.Name != src.Supply {
			continue
		}
		for q := phasor.Zero; q <= phasor.Negative; q++ {
			if v := sup.emf(h, q); v != 0 {
				some[q] = true
				w.current[q][s.node[sup.Bus]] += v * sup.admittance(float64(h), q)
			}
		}
	}
	return some, nil
}

// agree checks that the parts of one order add up to the solution.
func (c *Contributions) agree(x *Solution, h int) error {
	s := x.sys
	for q := range x.seq {
		var worst, size float64
		for k := range s.nodes {
			var sum complex128
			var all float64
			for _, part := range c.parts {
				if v := part.seq[q][h]; v != nil {
					sum += v[k]
					all += cmplxAbs1(v[k])
				}
			}
			if v := x.seq[q][h]; v != nil {
				sum -= v[k]
			}
			worst, size = max(worst, cmplxAbs1(sum)/s.scale[k]), max(size, all/s.scale[k])
		}
		if worst > 1e-6*size+1e-12 || math.IsNaN(worst) {
			return fmt.Errorf("the sources' parts do not add up to the solution at order %d: off by %.1e of nominal", h, worst)
		}
	}
	return nil
}

// Voltage returns the voltages that one source by itself makes at a bus, as
// BusVoltage does; order 1 is zero.
func (c *Contributions) Voltage(source int, b BusID) (phase, seq [3]phasor.Spectrum) {
	return c.parts[source].BusVoltage(b)
}

// Ends returns the currents that one source by itself drives into an element at
// each of its ends; order 1 is zero.
func (c *Contributions) Ends(source int, id ElementID) []End { return c.parts[source].Ends(id) }

// VoltageAt returns the phase and sequence voltages that one source makes at a
// bus at one order above 1, and false when it makes none.
func (c *Contributions) VoltageAt(source int, b BusID, h int) (phase, seq [3]complex128, some bool) {
	part := c.parts[source]
	k := part.sys.node[b]
	for q := range seq {
		if v := part.seq[q][h]; v != nil && v[k] != 0 {
			seq[q], some = part.sys.turned(k, phasor.Sequence(q), v[k]), true
		}
	}
	if some {
		phase = phasor.ToPhase(seq)
	}
	return phase, seq, some
}

// CurrentAt returns the phase currents that one source drives into an element
// at each of its ends, two at most, at one order above 1, and false when it
// drives none.
func (c *Contributions) CurrentAt(source int, id ElementID, h int) (ends [2][3]complex128, some bool) {
	part := c.parts[source]
	s := part.sys
	p := &s.place[id]
	if !p.live {
		return ends, false
	}
	var seq [2][3]complex128
	for q := range seq[0] {
		v := part.seq[q][h]
		if v == nil {
			continue
		}
		some = true
		y := &part.prim[q][h][id]
		i := y.y00 * v[p.n0]
		if p.low >= 0 {
			i += y.y01 * v[p.n1]
			seq[1][q] = s.turned(int(p.n1), phasor.Sequence(q), y.y01*v[p.n0]+y.y11*v[p.n1])
		}
		if sup, ok := s.net.elements[id].(*Supply); ok && !part.muted[id] {
			i -= sup.emf(h, phasor.Sequence(q)) * y.y00
		}
		seq[0][q] = s.turned(int(p.n0), phasor.Sequence(q), i)
	}
	if !some {
		return ends, false
	}
	ends[0] = phasor.ToPhase(seq[0])
	if p.low >= 0 {
		ends[1] = phasor.ToPhase(seq[1])
	}
	if current := part.shunt[id]; current != nil {
		for i, v := range s.net.elements[id].(*PhaseShunt).through(current[h]) {
			ends[0][i] += v
		}
	}
	return ends, true
}
