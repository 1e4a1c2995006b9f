package study

import (
	"fmt"
	"math"
	"slices"

	"quietbus/study/converter"
	"quietbus/study/limits"
)

// A plan is a study with its chosen measures applied: what stands, where, and
// which measure changed it. It shares the study's slices and never writes to
// them.
type plan struct {
	study   *Study // as it stands in the operating state
	origin  *Study // as the file has it
	state   string // the operating state
	chosen  []*Measure
	banks   []Bank                             // that stand, detuned ones as they would be
	filters []Filter                           // that stand
	spectra map[string]converter.Model         // of loads behind a new line reactor
	lowpass map[string]*Measure                // by the load behind them
	notes   map[string][]string                // by measure
	skin    map[string]func(h float64) float64 // by cable, worked out once; may be nil
	sets    map[string]*limits.Set             // the study's own limits, worked out once; may be nil
	vary    *Variation                         // nil: as stated
	lines   map[*NonlinearLoad][]line          // spectra worked out before; nil to keep none
}

// apply returns the plan of the named measures. It fails on names that are no
// measure and on measures that cannot coexist.
func (s *Study) apply(on []string) (*plan, error) {
	for _, name := range on {
		if !slices.ContainsFunc(s.Measures, func(m Measure) bool { return m.Name == name }) {
			return nil, &FieldError{Item: name, Field: "name", Problem: "is not a measure of this study", Remedy: "choose one of the measures listed in it"}
		}
	}
	if c := s.Conflicts(on); len(c) > 0 {
		return nil, &ConflictError{c}
	}
	p := &plan{study: s, origin: s, state: NormalState, chosen: s.chosen(on), notes: map[string][]string{}, lowpass: map[string]*Measure{}, spectra: map[string]converter.Model{}}
	gone := map[string]bool{}
	detuned := map[string]*Measure{}
	for _, m := range p.chosen {
		for _, name := range m.Replaces {
			gone[name] = true
		}
		switch m.Kind {
		case RemoveBank:
			gone[m.Target] = true
		case DetuneBank:
			detuned[m.Target] = m
		case LowPassRC, LowPassLC:
			p.lowpass[m.Target] = m
		case LineReactor:
			if err := p.addReactor(m); err != nil {
				return nil, err
			}
		}
	}
	for _, b := range s.Banks {
		if gone[b.Name] {
			continue
		}
		if m := detuned[b.Name]; m != nil {
			b = p.detune(b, m)
		}
		p.banks = append(p.banks, b)
	}
	for _, f := range s.Filters {
		if !gone[f.Name] {
			p.filters = append(p.filters, f)
		}
	}
	return p, nil
}

// detune puts a reactor of m.Percent in front of bank b. The capacitors stay:
// behind the reactor their voltage, and with it the output of the branch,
// rises by 1/(1-p).
func (p *plan) detune(b Bank, m *Measure) Bank {
	was, plain := b.Kvar, b.Kvar*(1-b.DetuningPercent/100)
	share := m.Percent / 100
	b.DetuningPercent = m.Percent
	b.Kvar = plain / (1 - share)
	if m.Q > 0 {
		b.ReactorQ = m.Q
	}
	if m.RatedKV > 0 {
		b.RatedKV = m.RatedKV
	}
	p.notes[m.Name] = append(p.notes[m.Name],
		fmt.Sprintf("The capacitors of %s stay; behind the reactor they see %.3g %% more voltage and the branch gives %.4g instead of %.4g kvar. Tuned to order %.3g.",
			b.Name, 100*(1/(1-share)-1), b.Kvar, was, 10/math.Sqrt(m.Percent)))
	return b
}

// addReactor gives the target of a line-reactor measure the typical spectrum
// of a six-pulse bridge behind its present and the added reactance.
func (p *plan) addReactor(m *Measure) error {
	for i := range p.study.NonlinearLoads {
		l := &p.study.NonlinearLoads[i]
		if l.Name != m.Target {
			continue
		}
		present, ok := converter.ReactanceOf(l.Spectrum)
		if !ok {
			return &FieldError{Item: m.Name, Field: "target", Problem: fmt.Sprintf("%s has the spectrum %q, whose change by a line reactor is not known", l.Name, l.Spectrum),
				Remedy: "choose a load with a typical six-pulse spectrum, or type the spectrum with the reactor into the load"}
		}
		model := converter.WithReactance(present + m.Percent)
		p.spectra[l.Name] = model
		p.notes[m.Name] = append(p.notes[m.Name],
			fmt.Sprintf("%s is computed with the spectrum %q (%s).", l.Name, model.Title, model.Source))
		return nil
	}
	return nil // its target is out of service in this state; Validate refuses one that is not there at all
}
