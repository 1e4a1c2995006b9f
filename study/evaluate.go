package study

import (
	"context"
	"fmt"

	"quietbus/study/grid"
	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// Evaluate solves the study with the named measures on: the fundamental by a
// power flow, orders 2 and above by nodal admittance in symmetrical
// components, each solution checked; then it assesses the limits and works
// out what the measures bear. Use Prepare to evaluate one study many times.
//
// Errors: FieldErrors for a study that is not valid, *ConflictError for
// measures that cannot coexist, and the errors of study/grid.
func Evaluate(ctx context.Context, s *Study, on []string) (*Outcome, error) {
	p, err := Prepare(s)
	if err != nil {
		return nil, err
	}
	return p.Evaluate(ctx, on)
}

// Prepared is a study that has been validated once, ready to be evaluated for
// many choices of measures. It is immutable and safe for concurrent use. The
// study must not be changed afterwards: clone it first.
type Prepared struct {
	study *Study
	skin  map[string]func(h float64) float64 // by cable
	sets  map[string]*limits.Set             // the study's own limit sets, by name
	stood map[string]*Study                  // by operating state: the study as it stands in it
}

// Prepare validates s. All problems found come back as one error.
func Prepare(s *Study) (*Prepared, error) {
	if problems := s.Validate(); len(problems) > 0 {
		return nil, FieldErrors(problems)
	}
	p := &Prepared{study: s, skin: map[string]func(float64) float64{}, sets: map[string]*limits.Set{}, stood: map[string]*Study{}}
	for i := range s.LimitSets {
		p.sets[s.LimitSets[i].Name] = s.LimitSets[i].set()
	}
	for _, name := range s.States() {
		x, err := s.state(name)
		if err != nil {
			return nil, err
		}
		p.stood[name] = s.In(x)
	}
	for i := range s.Cables {
		p.skin[s.Cables[i].Name] = s.Cables[i].skin(s)
	}
	return p, nil
}

// Study returns the study that was prepared.
func (p *Prepared) Study() *Study { return p.study }

// States returns the names of the operating states, the normal one first.
func (p *Prepared) States() []string { return p.study.States() }

// Evaluate is the function of the same name for a prepared study, in its
// normal state.
func (p *Prepared) Evaluate(ctx context.Context, on []string) (*Outcome, error) {
	return p.EvaluateIn(ctx, on, "")
}

// EvaluateAll evaluates every operating state, in the order of States.
func (p *Prepared) EvaluateAll(ctx context.Context, on []string) ([]*Outcome, error) {
	var all []*Outcome
	for _, state := range p.States() {
		o, err := p.EvaluateIn(ctx, on, state)
		if err != nil {
			return nil, InState(state, err)
		}
		all = append(all, o)
	}
	return all, nil
}

// EvaluateIn evaluates one operating state; "" is the normal one. A name that
// is no state is a *FieldError.
func (p *Prepared) EvaluateIn(ctx context.Context, on []string, state string) (*Outcome, error) {
	m, err := p.model(on, state)
	if err != nil {
		return nil, err
	}
	sol, err := m.solve(ctx)
	if err != nil {
		return nil, err
	}
	return m.outcome(ctx, sol)
}

// model returns the network with the named measures on, in an operating state.
func (p *Prepared) model(on []string, state string) (*model, error) {
	x, err := p.study.state(state)
	if err != nil {
		return nil, err
	}
	name := NormalState
	if x != nil {
		name = x.Name
	}
	stood, ready := p.stood[name]
	if !ready {
		stood = p.study.In(x)
	}
	plan, err := p.plan(stood, name, on)
	if err != nil {
		return nil, err
	}
	return plan.build()
}

// plan applies measures to the study as it stands in a state.
func (p *Prepared) plan(stood *Study, state string, on []string) (*plan, error) {
	plan, err := stood.apply(on)
	if err != nil {
		return nil, err
	}
	plan.origin, plan.state, plan.skin, plan.sets = p.study, state, p.skin, p.sets
	return plan, nil
}

// solution is a solved model: the network's solution, what each non-linear
// load draws and what each active filter injects.
type solution struct {
	net    solver
	drawn  map[string][3]phasor.Spectrum // by non-linear load
	active map[string]activeResult       // by measure

	injections []grid.Injection
}

// solve runs the power flow, derives the harmonic currents from it and solves
// the orders above.
func (m *model) solve(ctx context.Context) (*solution, error) {
	order := m.plan.study.Order()
	base := m.solver
	if base == nil {
		base = &whole{sys: m.system, order: order}
	}
	if err := base.Fundamental(ctx); err != nil {
		return nil, m.named(err)
	}
	sol := &solution{drawn: map[string][3]phasor.Spectrum{}, active: map[string]activeResult{}}
	var injections []grid.Injection
	for i := range m.plan.study.NonlinearLoads {
		l := &m.plan.study.NonlinearLoads[i]
		bus := m.bus[l.Bus]
		if !m.system.Live(bus) {
			continue
		}
		lines, err := m.plan.spectrumOf(l)
		if err != nil {
			return nil, err
		}
		current := drawn(l, lines, order, base.Current(m.element[l.Name]), base.Voltage(bus))
		sol.drawn[l.Name] = current
		injections = append(injections, grid.Injection{Bus: bus, Name: l.Name, Current: current})
	}
	for _, measure := range m.plan.chosen {
		if measure.Kind != ActiveFilter || !m.system.Live(m.bus[measure.Bus]) {
			continue
		}
		r, err := m.compensate(measure, sol.drawn)
		if err != nil {
			return nil, err
		}
		sol.active[measure.Name] = r
		injections = append(injections, grid.Injection{Bus: m.bus[measure.Bus], Name: measure.Name, Current: r.Drawn})
	}
	if err := base.Harmonics(ctx, injections); err != nil {
		return nil, m.named(err)
	}
	sol.net, sol.injections = base, injections
	return sol, m.sum(ctx, sol)
}

// named turns an error of the network into one that names item and field of
// the study where it can.
func (m *model) named(err error) error { return asFieldError("", err) }

// Impedance returns the driving-point impedance at a bus with the named
// measures on, from one order to another, with its peaks and valleys refined.
// EMFs are shorted and non-linear loads open.
func (p *Prepared) Impedance(ctx context.Context, on []string, bus string, seq phasor.Sequence, from, to float64) (*ScanResult, error) {
	return p.ImpedanceIn(ctx, on, "", bus, seq, from, to)
}

// ImpedanceIn is Impedance in one operating state.
func (p *Prepared) ImpedanceIn(ctx context.Context, on []string, state, bus string, seq phasor.Sequence, from, to float64) (*ScanResult, error) {
	m, err := p.model(on, state)
	if err != nil {
		return nil, err
	}
	id, ok := m.bus[bus]
	if !ok {
		return nil, &FieldError{Item: bus, Field: "bus", Problem: "is not a bus of this study", Remedy: "choose one of its buses"}
	}
	if !m.system.Live(id) {
		return nil, fmt.Errorf("bus %q has no supply, so it has no impedance to scan", bus)
	}
	return m.scan(ctx, "", bus, "", seq, from, to)
}
