package study

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"slices"

	"quietbus/study/filter"
	"quietbus/study/grid"
	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// outcome gathers everything that is shown from a solved model.
func (m *model) outcome(ctx context.Context, sol *solution) (*Outcome, error) {
	s := m.plan.study
	o := &Outcome{Study: m.plan.origin, State: m.plan.state}
	if w, ok := sol.net.(interface{ check() grid.Check }); ok {
		o.Check = Check(w.check())
	}
	for _, x := range m.plan.chosen {
		o.On = append(o.On, x.Name)
	}
	m.buses(o, sol)
	m.elements(o, sol)
	for i := range s.Assessments {
		p, err := m.point(ctx, &s.Assessments[i], o)
		if err != nil {
			return nil, err
		}
		o.Points = append(o.Points, p)
	}
	for _, x := range m.plan.chosen {
		o.Measures = append(o.Measures, m.measure(x, sol, o))
	}
	for i := range s.Scans {
		q := &s.Scans[i]
		if bus := m.unfed(q.Bus, q.At); bus != "" {
			o.Warnings = append(o.Warnings, fmt.Sprintf("Scan %s: bus %s has no supply, so it has no impedance.", q.Name, bus))
			continue
		}
		scan, err := m.scan(ctx, q.Name, q.Bus, q.At, sequenceOf(q.Sequence), or(q.From, 1), or(q.To, float64(s.Order())))
		if err != nil {
			return nil, err
		}
		o.Scans = append(o.Scans, *scan)
	}
	m.warn(o, sol)
	return o, nil
}

// unfed returns the first of the named buses that no supply reaches.
func (m *model) unfed(buses ...string) string {
	for _, b := range buses {
		if b != "" && !m.system.Live(m.bus[b]) {
			return b
		}
	}
	return ""
}

func sequenceOf(word string) phasor.Sequence {
	switch word {
	case "negative":
		return phasor.Negative
	case "zero":
		return phasor.Zero
	}
	return phasor.Positive
}

func (m *model) buses(o *Outcome, sol *solution) {
	s := m.plan.study
	for _, b := range s.Buses {
		id := m.bus[b.Name]
		phase, seq := sol.net.BusVoltage(id)
		o.Buses = append(o.Buses, BusResult{Name: b.Name, NominalV: 1000 * b.NominalKV, Live: m.system.Live(id), Phase: phase, Seq: seq})
	}
	for _, x := range m.plan.chosen {
		out, ok := m.outlets[x.Name]
		if !ok {
			continue
		}
		at := o.Bus(out.load.Bus)
		b := BusResult{Name: OutletName(x.Name), NominalV: at.NominalV, Live: at.Live}
		weight := out.load.Connection.conductors()
		for i := range b.Phase {
			b.Phase[i] = phasor.New(s.Order())
			if !out.load.Connection.threePhase() && weight[i] == 0 {
				continue
			}
			for h := 1; h <= s.Order(); h++ {
				b.Phase[i][h] = at.Phase[i][h] * out.pass.Ratio(float64(h))
			}
		}
		b.Seq = phasor.SequencesOf(b.Phase)
		o.Buses = append(o.Buses, b)
	}
}

// OutletName names the bus behind a low-pass measure in the results.
func OutletName(measure string) string { return measure + ", outlet" }

// Bus returns the result of a bus, nil when there is none of the name.
func (o *Outcome) Bus(name string) *BusResult {
	for i := range o.Buses {
		if o.Buses[i].Name == name {
			return &o.Buses[i]
		}
	}
	return nil
}

// Element returns the result of an item, nil when there is none of the name.
func (o *Outcome) Element(name string) *ElementResult {
	for i := range o.Elements {
		if o.Elements[i].Name == name {
			return &o.Elements[i]
		}
	}
	return nil
}

// THD returns the highest total harmonic distortion of the three phases, as a
// fraction of that phase's fundamental.
func (b *BusResult) THD() float64 {
	worst := 0.0
	for _, p := range b.Phase {
		worst = math.Max(worst, phasor.THD(p))
	}
	return worst
}

// elements lists the current of each item that stands, in file order by kind,
// measures last.
func (m *model) elements(o *Outcome, sol *solution) {
	s := m.plan.study
	for _, kind := range []Kind{KindSupply, KindTransformer, KindCable, KindReactor, KindLoad, KindMotor, KindGenerator} {
		for _, item := range s.Items(kind) {
			m.passive(o, sol, kind, NameOf(item))
		}
	}
	for i := range s.NonlinearLoads {
		l := &s.NonlinearLoads[i]
		if current, ok := sol.drawn[l.Name]; ok {
			o.Elements = append(o.Elements, source(KindNonlinearLoad, l.Name, l.Bus, current))
		}
	}
	for i := range m.plan.banks {
		m.passive(o, sol, KindBank, m.plan.banks[i].Name)
	}
	for i := range m.plan.filters {
		m.passive(o, sol, KindFilter, m.plan.filters[i].Name)
	}
	for _, x := range m.plan.chosen {
		if a, ok := sol.active[x.Name]; ok {
			o.Elements = append(o.Elements, source(KindMeasure, x.Name, x.Bus, a.Drawn))
		} else if m.branch[x.Name] != nil {
			m.passive(o, sol, KindMeasure, x.Name)
		}
	}
}

func (m *model) passive(o *Outcome, sol *solution, kind Kind, name string) {
	e := ElementResult{Name: name, Kind: kind}
	if x, ok := sol.net.(*summed); ok {
		ends, neutrals := x.endsAndNeutrals(m.element[name])
		for k, end := range ends {
			e.Ends = append(e.Ends, EndResult{Bus: m.plan.study.Buses[end.Bus].Name, Phase: end.Phase, Neutral: neutrals[k]})
		}
		o.Elements = append(o.Elements, e)
		return
	}
	for _, end := range m.ends(sol, name) {
		e.Ends = append(e.Ends, endResult(m.plan.study.Buses[end.Bus].Name, end.Phase))
	}
	o.Elements = append(o.Elements, e)
}

func source(kind Kind, name, bus string, current [3]phasor.Spectrum) ElementResult {
	return ElementResult{Name: name, Kind: kind, Ends: []EndResult{endResult(bus, current)}}
}

// endResult adds the neutral's current, the sum of the phases, where there is
// any.
func endResult(bus string, phase [3]phasor.Spectrum) EndResult {
	e := EndResult{Bus: bus, Phase: phase}
	for h := range phase[0] {
		sum := neutralOf([3]complex128{phase[0][h], phase[1].At(h), phase[2].At(h)})
		if sum == 0 {
			continue
		}
		if e.Neutral == nil {
			e.Neutral = make(phasor.Spectrum, len(phase[0]))
		}
		e.Neutral[h] = sum
	}
	return e
}

// neutralOf returns the sum of three phase currents, 0 where it is only
// rounding.
func neutralOf(i [3]complex128) complex128 {
	sum := i[0] + i[1] + i[2]
	if sum == 0 || cmplx.Abs(sum) <= 1e-9*(cmplx.Abs(i[0])+cmplx.Abs(i[1])+cmplx.Abs(i[2])) {
		return 0
	}
	return sum
}

// point assesses one point.
func (m *model) point(ctx context.Context, a *Assessment, o *Outcome) (PointResult, error) {
	p := PointResult{Name: a.Name, Bus: a.Bus, Set: a.Set}
	set, own, ok := m.limitSet(a)
	if !ok {
		return p, &FieldError{Item: a.Name, Field: "set", Problem: fmt.Sprintf("%q is no limit set of this program", a.Set), Remedy: "choose one from the list"}
	}
	p.SetTitle = set.Title
	if set.LimitsEquipment() {
		err := m.assessEquipment(ctx, a, o, set, &p)
		return p, err
	}
	if own != nil {
		p.NotAssessed = append(p.NotAssessed, own.gaps(a.Current != "")...)
	}
	if why := beyond(set, m.plan.study.Order()); why != "" {
		p.NotAssessed = append(p.NotAssessed, why)
	}
	bus := o.Bus(a.Bus)
	at := limits.Point{NominalV: bus.NominalV, Voltage: bus.Phase}
	if err := p.take(set.Voltage(at)); err != nil {
		return p, err
	}
	if a.Current == "" {
		return p, nil
	}
	current, isc, err := m.demand(ctx, a, o)
	if err != nil {
		return p, err
	}
	at.Current, at.DemandA, at.IscA = current, a.DemandA, isc
	if err := p.take(set.Current(at)); err != nil {
		return p, err
	}
	if slices.ContainsFunc(p.Rows, func(r limits.Row) bool { return r.Quantity == "current" }) {
		p.IscA, p.ILA = at.IscA, at.DemandA
	}
	return p, nil
}

// take adds rows, or the reason why there are none.
func (p *PointResult) take(rows []limits.Row, err error) error {
	if p.Rows == nil {
		p.Rows = rows
	} else {
		p.Rows = append(p.Rows, rows...)
	}
	if why, ok := limits.IsNotAssessed(err); ok {
		p.NotAssessed = append(p.NotAssessed, why)
		return nil
	}
	return err
}

// demand returns the assessed current and the short-circuit current at a point.
func (m *model) demand(ctx context.Context, a *Assessment, o *Outcome) (current [3]phasor.Spectrum, isc float64, err error) {
	for i := range current { // of a branch that is out of service in this state
		current[i] = phasor.New(m.plan.study.Order())
	}
	if e := o.Element(a.Current); e != nil {
		end := &e.Ends[0]
		for i := range e.Ends {
			if e.Ends[i].Bus == a.Bus {
				end = &e.Ends[i]
			}
		}
		current = end.Phase
	}
	isc, _, err = m.shortCircuit(ctx, a)
	return current, isc, err
}

// shortCircuit returns the short-circuit current at a point, A, and where it
// comes from, in words: as stated, else of the supplies there, else from the
// driving-point impedance at order 1.
func (m *model) shortCircuit(ctx context.Context, a *Assessment) (isc float64, origin string, err error) {
	if a.IscKA > 0 {
		return 1000 * a.IscKA, "as stated", nil
	}
	var names []string
	for i := range m.plan.origin.Supplies { // limits rest on the stated fault level in every state
		if s := &m.plan.origin.Supplies[i]; s.Bus == a.Bus {
			isc += s.FaultA(m.volts[s.Bus])
			names = append(names, s.Name)
		}
	}
	if isc == 0 && m.system.Live(m.bus[a.Bus]) {
		z, err := m.look(ctx, a.Bus, 1)
		if err != nil {
			return 0, "", err
		}
		return m.volts[a.Bus] / math.Sqrt(3) / cmplx.Abs(z), fmt.Sprintf("from the driving-point impedance of %.4g ohm at order 1", cmplx.Abs(z)), nil
	}
	return isc, "from the fault level of " + join(names), nil
}

func (m *model) warn(o *Outcome, sol *solution) {
	for _, b := range o.Buses {
		if !b.Live {
			o.Warnings = append(o.Warnings, fmt.Sprintf("Bus %s has no supply; it and what stands on it are left out.", b.Name))
		}
	}
	for _, x := range m.plan.study.Supplies {
		var unknown []string
		for _, b := range x.Background {
			if b.AngleDeg == nil && b.Percent > 0 {
				unknown = append(unknown, fmt.Sprint(b.Order))
			}
		}
		if word, _ := m.plan.origin.SummationLaw(); unknown != nil && word == PhasorSum {
			o.Warnings = append(o.Warnings, fmt.Sprintf("%s: the angle of its background is unknown at order %s and counts as zero; the background may add to or take from the site's own distortion.", x.Name, join(unknown)))
		}
	}
	for _, l := range m.plan.study.NonlinearLoads {
		if d, ok := sol.drawn[l.Name]; ok {
			if dc := cmplx.Abs(d[0].At(0)) + cmplx.Abs(d[1].At(0)) + cmplx.Abs(d[2].At(0)); dc > 0 {
				o.Warnings = append(o.Warnings, fmt.Sprintf("%s draws direct current (%.3g A); IEEE 519 does not allow loads that cause a dc offset, and transformers may saturate.", l.Name, dc))
			}
		}
	}
	for _, x := range o.Measures {
		if x.Saturated {
			o.Warnings = append(o.Warnings, fmt.Sprintf("Active filter %s is asked for more than its rating and scales everything down.", x.Name))
		}
		if d := x.Duty; d != nil && d.RatedV > 0 && d.VoltageV > 1.1*d.RatedV {
			o.Warnings = append(o.Warnings, fmt.Sprintf("%s: the capacitors bear %.4g V against %.4g V rated.", x.Name, d.VoltageV, d.RatedV))
		}
	}
}

// activeResult is what an active filter does.
type activeResult = filter.Compensation

// compensate works out the current of an active filter.
func (m *model) compensate(x *Measure, drawn map[string][3]phasor.Spectrum) (activeResult, error) {
	s := m.plan.study
	var sensed [3]phasor.Spectrum
	for i := range sensed {
		sensed[i] = phasor.New(s.Order())
	}
	for i := range s.NonlinearLoads {
		l := &s.NonlinearLoads[i]
		if !x.sensesLoad(l) {
			continue
		}
		if m.volts[l.Bus] != m.volts[x.Bus] {
			return activeResult{}, &FieldError{Item: x.Name, Field: "senses", Problem: l.Name + " stands on another voltage level", Remedy: "put the active filter on the voltage level of the loads it senses"}
		}
		for p, spectrum := range drawn[l.Name] {
			for h := range spectrum {
				sensed[p][h] += spectrum[h]
			}
		}
	}
	share := map[int]float64{}
	for _, t := range x.Shares {
		share[t.Order] = t.Percent / 100
	}
	ceiling := x.MaxOrder
	if ceiling == 0 {
		ceiling = 25
	}
	a := filter.Active{RatedA: x.RatedA, MaxOrder: ceiling, Share: func(h int) float64 {
		if v, ok := share[h]; ok {
			return v
		}
		return or(x.Share, 90) / 100
	}}
	return a.Compensate(sensed), nil
}

func (x *Measure) sensesLoad(l *NonlinearLoad) bool {
	if len(x.Senses) == 0 {
		return l.Bus == x.Bus
	}
	for _, name := range x.Senses {
		if name == l.Name {
			return true
		}
	}
	return false
}
