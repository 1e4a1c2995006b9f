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
	drawn map[ElementID][3]complex128
}

// Harmonics solves orders 2..order for the given currents.
func (s *System) Harmonics(ctx context.Context, base *Fundamental, order int, injections []Injection) (*Solution, error) {
	sol := &Solution{sys: s, order: order, base: base, Check: Check{Rounds: base.Rounds}}
	fac := s.pat.newFactors()
	for q := range sol.seq {
		sol.seq[q] = make([][]complex128, order+1)
		sol.seq[q][1] = base.seq[q]
	}
	cur := make([]complex128, s.nodes)
	for h := 2; h <= order; h++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		for q := phasor.Zero; q <= phasor.Negative; q++ {
			clear(cur)
			any := false
			for _, in := range injections {
				k := s.node[in.Bus]
				if !s.live[k] {
					continue
				}
				i := phasor.ToSequence([3]complex128{in.Current[0].At(h), in.Current[1].At(h), in.Current[2].At(h)})[q]
				if cmplx.Abs(i) > 1e-12 {
					any = true
					cur[k] -= s.turned(k, mirror(q), i)
				}
			}
			for _, sup := range s.supplies {
				if v := sup.emf(h, q); v != 0 {
					any = true
					cur[s.node[sup.Bus]] += v * sup.admittance(float64(h), q)
				}
			}
			if !any {
				continue
			}
			if _, ok := s.matrix(fac, float64(h), q); !ok {
				return nil, fmt.Errorf("the %s-sequence network cannot be solved at order %d", q, h)
			}
			v := s.solveSequence(fac, cur)
			for k := range v {
				if cmplx.IsNaN(v[k]) || cmplx.Abs(v[k]) > 1e3*s.scale[k] {
					return nil, fmt.Errorf("bus %q has no path for the %s-sequence current of order %d", s.busName(k), q, h)
				}
			}
			sol.seq[q][h] = v
			sol.Check.Residual = math.Max(sol.Check.Residual, s.residual(float64(h), q, v, cur))
		}
	}
	if sol.Check.Residual > 1e-8 {
		return nil, fmt.Errorf("the solution fails its own check: residual %.1e", sol.Check.Residual)
	}
	return sol, nil
}

// residual returns max |Y V - I| over max |I|, element by element, without the
// assembled matrix.
func (s *System) residual(h float64, q phasor.Sequence, v, cur []complex128) float64 {
	r := make([]complex128, s.nodes)
	var size float64
	for k, i := range cur {
		r[k] = -i
		size = math.Max(size, cmplx.Abs(i)*s.scale[k])
	}
	for _, e := range s.net.elements {
		b := e.ends()
		if !s.live[s.node[b[0]]] {
			continue
		}
		e.stamp(s.net.f1, h, q, func(i, j int, y complex128) {
			m, n := s.node[b[i]], s.node[b[j]]
			r[m] += y * v[n]
			if i != j {
				r[n] += y * v[m]
			}
		})
	}
	var worst float64
	for k := range r {
		if s.live[k] && v[k] != 0 {
			worst = math.Max(worst, cmplx.Abs(r[k])*s.scale[k])
		}
	}
	if size == 0 {
		return worst
	}
	return worst / size
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
