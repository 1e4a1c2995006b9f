package study

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"

	"quietbus/study/filter"
	"quietbus/study/grid"
	"quietbus/study/phasor"
)

// A Quick evaluates many choices of measures in one operating state on a
// network that is reduced once to the buses that matter; banks, filters and
// shunt measures are then put in by a low-rank update (design of the kernel:
// the matrix inversion lemma). It gives a Brief: what comparisons need, equal
// to that of the full evaluation. What an update cannot express (such as an
// outlet low-pass, which changes a load) is reduced anew once for each choice
// of it; an update that would lose its accuracy is solved in full.
//
// A Quick keeps memory from one call to the next: one for each goroutine.
type Quick struct {
	prepared  *Prepared
	state     string
	operating *OperatingState // nil: as stated
	stood     *Study
	touched   map[string]bool // banks and filters that some measure changes or that vary
	fixed     bool            // nothing may be updated: each choice is solved in full
	bases     map[string]*quickBase
	lines     map[*NonlinearLoad][]line
	Full      int // how many evaluations were solved in full
}

// quickBase is a reduced network with the measures that an update cannot
// express.
type quickBase struct {
	model   *model
	variant *grid.Variant
}

// Quick returns an evaluator for one operating state, "" being the normal one.
// The named banks and filters may differ in the studies that BriefOf is given.
func (p *Prepared) Quick(state string, vary ...string) (*Quick, error) {
	x, err := p.study.state(state)
	if err != nil {
		return nil, err
	}
	q := &Quick{prepared: p, state: p.study.States()[0], operating: x, stood: p.study.In(x), touched: map[string]bool{}, bases: map[string]*quickBase{}, lines: map[*NonlinearLoad][]line{}}
	if x != nil {
		q.state = x.Name
	}
	if word, _ := q.stood.SummationLaw(); word != PhasorSum {
		q.fixed = true // the sources' parts need the whole network
	}
	for _, name := range vary {
		q.touched[name] = true
	}
	for i := range q.stood.Measures {
		m := &q.stood.Measures[i]
		q.touched[m.Target] = true
		for _, name := range m.Replaces {
			q.touched[name] = true
		}
	}
	// A bank with an earthed star point may be all that ties its side to earth
	// in the zero sequence, so it is not taken out of the network.
	for i := range q.stood.Banks {
		if b := &q.stood.Banks[i]; q.touched[b.Name] && b.Connection == "earthed-star" {
			q.fixed = true
		}
	}
	for i := range q.stood.Filters {
		if f := &q.stood.Filters[i]; q.touched[f.Name] && f.Connection == "earthed-star" {
			q.fixed = true
		}
	}
	return q, nil
}

// State returns the operating state that is evaluated.
func (q *Quick) State() string { return q.state }

// updatable reports whether a measure of this kind is an update of shunts or
// injected currents.
func updatable(kind string) bool {
	return IsFilter(kind) || kind == DetuneBank || kind == RemoveBank || kind == ActiveFilter || kind == LineReactor
}

// Brief evaluates the named measures. Errors are those of Evaluate.
func (q *Quick) Brief(ctx context.Context, on []string) (*Brief, error) {
	plan, err := q.prepared.plan(q.stood, q.state, on)
	if err != nil {
		return nil, err
	}
	plan.lines = q.lines
	return q.brief(ctx, plan)
}

// BriefOf evaluates a variation of the prepared study; the banks and filters
// that vary were named to Quick.
func (q *Quick) BriefOf(ctx context.Context, v *Variation, on []string) (*Brief, error) {
	plan, err := q.prepared.plan(v.Study.In(q.operating), q.state, on)
	if err != nil {
		return nil, err
	}
	plan.vary = v
	return q.brief(ctx, plan)
}

func (q *Quick) brief(ctx context.Context, plan *plan) (*Brief, error) {
	if !q.fixed && (plan.vary == nil || !plan.vary.rebuilt) {
		brief, err := q.update(ctx, plan)
		var refactor *grid.RefactorError
		if err == nil || !errors.As(err, &refactor) {
			return brief, err
		}
	}
	q.Full++
	m, err := plan.build()
	if err != nil {
		return nil, err
	}
	sol, err := m.solve(ctx)
	if err != nil {
		return nil, err
	}
	return m.brief(ctx, sol)
}

// update solves the plan as a variant of its base.
func (q *Quick) update(ctx context.Context, plan *plan) (*Brief, error) {
	base, err := q.base(ctx, plan)
	if err != nil {
		return nil, err
	}
	m := *base.model
	m.plan, m.base, m.solver = plan, base.model, base.variant
	m.branch, m.added = map[string]*filter.Branch{}, map[string]grid.Added{}
	if err := m.addShunts(); err != nil {
		return nil, err
	}
	if own := base.model.plan.study; len(own.Supplies) > 0 && &own.Supplies[0] != &plan.study.Supplies[0] {
		for i := range plan.study.Supplies {
			s := &plan.study.Supplies[i]
			base.variant.Replace(m.element[s.Name], m.supply(s))
		}
	} else {
		for i := range plan.study.Supplies {
			base.variant.Replace(m.element[plan.study.Supplies[i].Name], nil)
		}
	}
	if own := base.model.plan.study; len(own.NonlinearLoads) > 0 {
		same := &own.NonlinearLoads[0] == &plan.study.NonlinearLoads[0]
		for i := range plan.study.NonlinearLoads {
			l := &plan.study.NonlinearLoads[i]
			if same {
				base.variant.ReplaceLoad(m.element[l.Name], nil)
			} else {
				base.variant.ReplaceLoad(m.element[l.Name], m.nonlinear(l))
			}
		}
	}
	var list []grid.Added
	for _, a := range m.added {
		list = append(list, a)
	}
	slices.SortFunc(list, func(a, b grid.Added) int { return int(a.Bus) - int(b.Bus) })
	if err := base.variant.Set(list); err != nil {
		return nil, err
	}
	sol, err := m.solve(ctx)
	if err != nil {
		return nil, err
	}
	return m.brief(ctx, sol)
}

// base returns the reduced network for the measures of the plan that an update
// cannot express.
func (q *Quick) base(ctx context.Context, plan *plan) (*quickBase, error) {
	var rest []*Measure
	var names []string
	for _, x := range plan.chosen {
		if !updatable(x.Kind) {
			rest, names = append(rest, x), append(names, x.Name)
		}
	}
	ratio := plan.vary.ratio()
	key := fmt.Sprintf("%s\x00%g", strings.Join(names, "\x00"), ratio)
	if b := q.bases[key]; b != nil {
		return b, nil
	}
	bare, err := q.prepared.plan(q.stood, q.state, names)
	if err != nil {
		return nil, err
	}
	bare.chosen = rest
	if ratio != 0 {
		bare.vary = &Variation{frequency: plan.vary.frequency}
	}
	bare.banks = slices.DeleteFunc(slices.Clone(bare.banks), func(b Bank) bool { return q.touched[b.Name] })
	bare.filters = slices.DeleteFunc(slices.Clone(bare.filters), func(f Filter) bool { return q.touched[f.Name] })
	m, err := bare.build()
	if err != nil {
		return nil, err
	}
	reduced, err := m.system.Reduce(ctx, plan.study.Order(), m.watched(q.touched))
	if err != nil {
		return nil, m.named(err)
	}
	b := &quickBase{m, reduced.Variant()}
	q.bases[key] = b
	return b, nil
}

// watched lists the buses that a brief looks at.
func (m *model) watched(touched map[string]bool) []grid.BusID {
	s := m.plan.study
	var list []grid.BusID
	add := func(bus string) {
		if id, ok := m.bus[bus]; ok {
			list = append(list, id)
		}
	}
	for i := range s.Assessments {
		a := &s.Assessments[i]
		add(a.Bus)
		if _, item := s.Find(a.Current); item != nil {
			for _, key := range []string{"bus", "hvBus", "lvBus", "from", "to"} {
				add(GetField(item, key))
			}
		}
	}
	for i := range s.Measures {
		add(s.Measures[i].Bus)
		if _, item := s.Find(s.Measures[i].Target); item != nil {
			add(GetField(item, "bus"))
		}
	}
	for i := range s.Banks {
		add(s.Banks[i].Bus)
	}
	for i := range s.Filters {
		add(s.Filters[i].Bus)
	}
	return list
}

// addVariant records a branch that the reduced network does not hold.
func (m *model) addVariant(name, bus, connection string, b *filter.Branch) error {
	if _, held := m.base.element[name]; held {
		return nil
	}
	y := make([]complex128, m.plan.study.Order()+1)
	for h := 1; h < len(y); h++ {
		y[h] = b.Admittance(float64(h))
	}
	m.added[name] = grid.Added{Bus: m.bus[bus], Y: y, Zero: connection == "earthed-star"}
	return nil
}

// ends returns the current at each end of an item.
func (m *model) ends(sol *solution, name string) []grid.End {
	a, added := m.added[name]
	if !added {
		return sol.net.Ends(m.element[name])
	}
	phase, seq := sol.net.BusVoltage(a.Bus)
	end := grid.End{Bus: a.Bus}
	for p := range end.Phase {
		end.Phase[p] = phasor.New(len(a.Y) - 1)
		for h := 1; h < len(a.Y); h++ {
			v := phase[p][h]
			if !a.Zero {
				v -= seq[phasor.Zero][h]
			}
			end.Phase[p][h] = v * a.Y[h]
		}
	}
	return []grid.End{end}
}

// look returns the positive-sequence driving-point impedance at a bus, ohm.
func (m *model) look(ctx context.Context, bus string, h int) (complex128, error) {
	if v, ok := m.solver.(*grid.Variant); ok {
		return v.Impedance(m.bus[bus], phasor.Positive, h)
	}
	z, err := m.system.Scan(ctx, m.bus[bus], phasor.Positive, []float64{float64(h)}, nil)
	if err != nil {
		return 0, err
	}
	return z[0], nil
}
