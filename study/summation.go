package study

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"

	"quietbus/study/grid"
	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// The ways of adding what several sources make of one order.
const (
	PhasorSum     = "phasor"
	SecondLaw     = "second-law"
	ArithmeticSum = "arithmetic"
)

// Exponents are those of the second summation law by band of orders: below 5,
// 5 to 10, above 10 (IEC/TR 61000-3-6:2008 clause 7.2.1: 1, 1.4 and 2, from
// memory, high confidence).
type Exponents [3]float64

// SummationLaw returns the study's way of adding sources and its exponents; those
// of a phasor sum mean nothing.
func (s *Study) SummationLaw() (word string, x Exponents) {
	switch s.Summation {
	case SecondLaw:
		x = Exponents{limits.SummationExponent(4), limits.SummationExponent(5), limits.SummationExponent(11)}
		for i, own := range []float64{s.ExponentLow, s.ExponentMiddle, s.ExponentHigh} {
			x[i] = or(own, x[i])
		}
		return SecondLaw, x
	case ArithmeticSum:
		return ArithmeticSum, Exponents{1, 1, 1}
	}
	return PhasorSum, x
}

// At returns the exponent of an order.
func (x Exponents) At(h int) float64 {
	switch {
	case h < 5:
		return x[0]
	case h <= 10:
		return x[1]
	}
	return x[2]
}

// SummationWords says how the study adds its sources, for captions and print.
func (s *Study) SummationWords() string {
	word, x := s.SummationLaw()
	switch word {
	case SecondLaw:
		whose := "IEC/TR 61000-3-6:2008, exponents from memory: to be confirmed against the document"
		if s.ExponentLow+s.ExponentMiddle+s.ExponentHigh > 0 {
			whose = "own exponents"
		}
		return fmt.Sprintf("second summation law, exponent %g below order 5, %g to 10, %g above (%s)", x[0], x[1], x[2], whose)
	case ArithmeticSum:
		return "arithmetic sum of the magnitudes"
	}
	return "phasor sum, with the angles as stated"
}

// SummationShort is SummationWords in a word or two.
func (s *Study) SummationShort() string {
	word, _ := s.SummationLaw()
	return map[string]string{PhasorSum: "phasor sum", SecondLaw: "second summation law", ArithmeticSum: "arithmetic sum"}[word]
}

// summed is a solved network whose sources are added by a law: orders 2 and
// above have the law's magnitude and the angle of the phasor sum.
type summed struct {
	*whole
	law   Exponents
	parts *grid.Contributions
}

// sources groups the injected currents by what makes them. The current of an
// active filter answers to the loads that it senses, each of which is charged
// with its part of it.
func (m *model) sources(sol *solution, injections []grid.Injection) []grid.Source {
	var out []grid.Source
	at := map[string]int{}
	for _, in := range injections {
		if _, filter := sol.active[in.Name]; filter {
			continue
		}
		at[in.Name] = len(out)
		out = append(out, grid.Source{Name: in.Name, Injections: []grid.Injection{in}})
	}
	for _, in := range injections {
		if _, filter := sol.active[in.Name]; !filter {
			continue
		}
		for name, part := range m.answers(in, sol) {
			if i, ok := at[name]; ok {
				out[i].Injections = append(out[i].Injections, part)
			}
		}
	}
	return out
}

// answers splits the current of an active filter into what answers to each load
// that it senses.
func (m *model) answers(in grid.Injection, sol *solution) map[string]grid.Injection {
	var x *Measure
	for _, c := range m.plan.chosen {
		if c.Name == in.Name {
			x = c
		}
	}
	var sensed [3]phasor.Spectrum
	for p := range sensed {
		sensed[p] = make(phasor.Spectrum, len(in.Current[p]))
	}
	var loads []string
	for i := range m.plan.study.NonlinearLoads {
		l := &m.plan.study.NonlinearLoads[i]
		if current, ok := sol.drawn[l.Name]; ok && x.sensesLoad(l) {
			loads = append(loads, l.Name)
			for p := range sensed {
				for h := range sensed[p] {
					sensed[p][h] += current[p].At(h)
				}
			}
		}
	}
	out := map[string]grid.Injection{}
	for _, name := range loads {
		part := grid.Injection{Name: in.Name, Bus: in.Bus}
		for p := range part.Current {
			part.Current[p] = make(phasor.Spectrum, len(sensed[p]))
			for h, all := range sensed[p] {
				if all != 0 {
					part.Current[p][h] = in.Current[p][h] * sol.drawn[name][p].At(h) / all
				}
			}
		}
		out[name] = part
	}
	return out
}

// bySource solves the network once more for each source by itself.
func (m *model) bySource(ctx context.Context, sol *solution) (*grid.Contributions, error) {
	w, ok := sol.net.(*whole)
	if !ok {
		return nil, fmt.Errorf("the sources' parts need the whole network")
	}
	parts, err := w.Solution.Contributions(ctx, m.sources(sol, sol.injections))
	if err != nil {
		return nil, m.named(err)
	}
	return parts, nil
}

// BusVoltage is that of the whole network with the sources added by the law.
func (x *summed) BusVoltage(b grid.BusID) (phase, seq [3]phasor.Spectrum) {
	phase, seq = x.whole.BusVoltage(b)
	for h := 2; h < len(phase[0]); h++ {
		var of [2][3]powers
		a := x.law.At(h)
		for i := range x.parts.Sources {
			p, s, some := x.parts.VoltageAt(i, b, h)
			if !some {
				continue
			}
			addThree(&of[0], a, p)
			addThree(&of[1], a, s)
		}
		for p := range phase {
			of[0][p].scale(&phase[p][h], a)
			of[1][p].scale(&seq[p][h], a)
		}
	}
	return phase, seq
}

// Ends is that of the whole network with the sources added by the law.
func (x *summed) Ends(id grid.ElementID) []grid.End {
	ends, _ := x.endsAndNeutrals(id)
	return ends
}

// endsAndNeutrals returns with the ends the current that the law makes of the
// sources' neutral currents at each; nil where there is none.
func (x *summed) endsAndNeutrals(id grid.ElementID) (ends []grid.End, neutrals []phasor.Spectrum) {
	ends = x.whole.Ends(id)
	neutrals = make([]phasor.Spectrum, len(ends))
	for k := range ends {
		neutrals[k] = endResult("", ends[k].Phase).Neutral // the angles of the phasor sum
	}
	for h := 2; h < len(ends[0].Phase[0]); h++ {
		var of [2][3]powers
		var back [2]powers
		a := x.law.At(h)
		for i := range x.parts.Sources {
			current, some := x.parts.CurrentAt(i, id, h)
			if !some {
				continue
			}
			for k := range ends {
				addThree(&of[k], a, current[k])
				if n := neutralOf(current[k]); n != 0 {
					back[k].add(a, n)
				}
			}
		}
		for k := range ends {
			for p := range ends[k].Phase {
				of[k][p].scale(&ends[k].Phase[p][h], a)
			}
			if back[k] > 0 && neutrals[k] == nil {
				neutrals[k] = make(phasor.Spectrum, len(ends[k].Phase[0]))
			}
			if neutrals[k] != nil {
				back[k].scale(&neutrals[k][h], a)
			}
		}
	}
	return ends, neutrals
}

// powers is a sum of magnitudes to the power of the law's exponent.
type powers float64

func (s *powers) add(a float64, v complex128) {
	switch u := cmplx.Abs(v); {
	case u == 0:
	case a == 1:
		*s += powers(u)
	case a == 2:
		*s += powers(u * u)
	default:
		*s += powers(math.Pow(u, a))
	}
}

// addThree adds three values to three sums; three of equal size, as of a balanced
// source, are raised to their power once.
func addThree(of *[3]powers, a float64, v [3]complex128) {
	var size [3]float64
	for i, x := range v {
		size[i] = real(x)*real(x) + imag(x)*imag(x)
	}
	if math.Abs(size[0]-size[1])+math.Abs(size[0]-size[2]) <= 1e-12*size[0] {
		var once powers
		once.add(a, v[0])
		for i := range of {
			of[i] += once
		}
		return
	}
	for i := range of {
		of[i].add(a, v[i])
	}
}

// scale gives v the magnitude that the sum stands for, and leaves its angle.
func (s powers) scale(v *complex128, a float64) {
	size := float64(s)
	switch {
	case a == 2:
		size = math.Sqrt(size)
	case a != 1 && size > 0:
		size = math.Pow(size, 1/a)
	}
	if old := cmplx.Abs(*v); old > 0 {
		*v *= complex(size/old, 0)
	} else {
		*v = complex(size, 0)
	}
}

// sum puts the study's way of adding sources between the solution and its
// results. A network that was reduced adds phasors: see Quick.
func (m *model) sum(ctx context.Context, sol *solution) error {
	word, law := m.plan.origin.SummationLaw()
	w, ok := sol.net.(*whole)
	if word == PhasorSum || !ok {
		return nil
	}
	parts, err := m.bySource(ctx, sol)
	if err != nil {
		return err
	}
	sol.net = &summed{whole: w, law: law, parts: parts}
	return nil
}
