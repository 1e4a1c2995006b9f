package study

import (
	"math"
	"math/cmplx"

	"quietbus/study/filter"
	"quietbus/study/grid"
	"quietbus/study/phasor"
)

// model is a plan turned into a network: SI values, and where each item of the
// study went.
type model struct {
	plan    *plan
	system  *grid.System
	bus     map[string]grid.BusID
	volts   map[string]float64 // nominal line-to-line voltage by bus
	element map[string]grid.ElementID
	branch  map[string]*filter.Branch // banks, filters and measures
	outlets map[string]outlet         // by low-pass measure
	net     *grid.Network

	// Of a variant on a reduced network only:
	solver solver // nil: the whole network is solved
	base   *model // the network that was reduced
	added  map[string]grid.Added
}

// outlet is a low-pass measure in front of a load.
type outlet struct {
	load *Load
	pass *filter.LowPass
}

// build makes the network of the plan.
func (p *plan) build() (*model, error) {
	s := p.study
	m := &model{plan: p, net: grid.New(s.FrequencyHz), bus: map[string]grid.BusID{}, volts: map[string]float64{},
		element: map[string]grid.ElementID{}, branch: map[string]*filter.Branch{}, outlets: map[string]outlet{}}
	m.net.Deviate(m.plan.vary.ratio())
	for _, b := range s.Buses {
		m.bus[b.Name], m.volts[b.Name] = m.net.AddBus(b.Name, 1000*b.NominalKV), 1000*b.NominalKV
	}
	for _, c := range s.Couplers {
		if c.Closed {
			m.net.Join(m.bus[c.From], m.bus[c.To])
		}
	}
	for _, add := range []func() error{m.addSeries, m.addLoads, m.addShunts} {
		if err := add(); err != nil {
			return nil, err
		}
	}
	var err error
	if m.system, err = m.net.Compile(); err != nil {
		return nil, asFieldError("", err)
	}
	return m, nil
}

func (m *model) add(name string, e grid.Element) { m.element[name] = m.net.Add(e) }

// addSeries adds supplies, transformers, cables and reactors.
func (m *model) addSeries() error {
	s := m.plan.study
	for i := range s.Supplies {
		m.add(s.Supplies[i].Name, m.supply(&s.Supplies[i]))
	}
	for i := range s.Transformers {
		t, err := m.transformer(&s.Transformers[i])
		if err != nil {
			return err
		}
		m.add(t.Name, t)
	}
	for i := range s.Cables {
		m.add(s.Cables[i].Name, m.cable(&s.Cables[i]))
	}
	for _, r := range s.Reactors {
		x := 2 * math.Pi * s.FrequencyHz * r.InductanceMH / 1000
		ohm := x / or(r.Q, 50)
		m.add(r.Name, &grid.Cable{Name: r.Name, From: m.bus[r.From], To: m.bus[r.To], R: ohm, X: x, R0: ohm, X0: x})
	}
	return nil
}

func or(v, otherwise float64) float64 {
	if v == 0 {
		return otherwise
	}
	return v
}

func radians(deg float64) float64 { return deg * math.Pi / 180 }

// FaultA returns the three-phase fault current that the supply states, A, on a
// bus of the given nominal line-to-line voltage in V.
func (s *Supply) FaultA(nominalV float64) float64 {
	if s.FaultKA > 0 {
		return 1000 * s.FaultKA
	}
	return 1e6 * s.FaultMVA / (math.Sqrt(3) * nominalV)
}

func (m *model) supply(s *Supply) *grid.Supply {
	v := m.volts[s.Bus] / math.Sqrt(3)
	z := v / s.FaultA(m.volts[s.Bus])
	x := z * s.XOverR / math.Hypot(1, s.XOverR)
	e := &grid.Supply{Name: s.Name, Bus: m.bus[s.Bus], R: x / s.XOverR, X: x,
		EMF: cmplx.Rect(v*or(s.VoltagePercent, 100)/100, radians(s.AngleDeg))}
	e.Ratio = m.plan.vary.ratio()
	e.R0, e.X0 = e.R*s.ZeroSequenceRatio, e.X*s.ZeroSequenceRatio
	switch s.ResistanceLaw {
	case "sqrt":
		e.Exponent = 0.5
	case "linear":
		e.Exponent = 1
	case "exponent":
		e.Exponent = s.ResistanceExp
	}
	for _, b := range s.Background {
		line := grid.Background{Order: b.Order, Sequence: phasor.OfOrder(b.Order)}
		switch b.Sequence {
		case "positive":
			line.Sequence = phasor.Positive
		case "negative":
			line.Sequence = phasor.Negative
		case "zero":
			line.Sequence = phasor.Zero
		}
		deg := float64(b.Order) * s.AngleDeg
		if b.AngleDeg != nil {
			deg += *b.AngleDeg
		}
		line.Voltage = cmplx.Rect(v*b.Percent/100, radians(deg))
		e.Background = append(e.Background, line)
	}
	return e
}

func (m *model) transformer(t *Transformer) (*grid.Transformer, error) {
	group, err := grid.ParseVectorGroup(t.VectorGroup)
	if err != nil {
		return nil, &FieldError{Item: t.Name, Field: "vectorGroup", Problem: err.Error(), Remedy: "correct the vector group"}
	}
	base := 1000 * t.LVKV * t.LVKV / t.RatedKVA // ohm, LV side
	z := t.ImpedancePercent / 100 * base
	r := z / math.Hypot(1, t.XOverR)
	if t.LoadLossKW > 0 {
		r = t.LoadLossKW / t.RatedKVA * base
	}
	return &grid.Transformer{Name: t.Name, HV: m.bus[t.HVBus], LV: m.bus[t.LVBus], Group: group,
		Ratio: t.HVKV / t.LVKV * (1 + t.TapPercent/100), R: r, X: math.Sqrt(z*z - r*r),
		Exponent: t.EddyExponent, ZeroRatio: t.ZeroRatio, Shift: radians(t.PhaseShiftDeg), NoLoad: t.noLoad(),
		HVN: complex(t.HVNeutralOhm, t.HVNeutralXOhm), LVN: complex(t.LVNeutralOhm, t.LVNeutralXOhm)}, nil
}

// noLoad returns conductance and susceptance of the magnetising branch, siemens
// a phase on the low-voltage side.
func (t *Transformer) noLoad() [2]float64 {
	v2 := 1e6 * t.LVKV * t.LVKV
	loss, power := 1000*t.NoLoadLossKW, 10*t.RatedKVA*t.NoLoadPercent
	return [2]float64{loss / v2, math.Sqrt(math.Max(0, power*power-loss*loss)) / v2}
}

func (m *model) cable(c *Cable) *grid.Cable {
	km, n := c.LengthM/1000, math.Max(1, float64(c.Parallel))
	r0, x0 := or(c.R0OhmPerKm, 4*c.ROhmPerKm), or(c.X0OhmPerKm, 3*c.XOhmPerKm)
	skin, known := m.plan.skin[c.Name]
	if !known {
		skin = c.skin(m.plan.study)
	}
	return &grid.Cable{Name: c.Name, From: m.bus[c.From], To: m.bus[c.To], Skin: skin, Exact: c.Form == "exact",
		R: c.ROhmPerKm * km / n, X: c.XOhmPerKm * km / n, C: 1e-9 * c.CNFPerKm * km * n,
		R0: r0 * km / n, X0: x0 * km / n, C0: 1e-9 * or(c.C0NFPerKm, c.CNFPerKm) * km * n}
}

// skin returns the law by which the cable's resistance rises with the order,
// nil for none.
func (c *Cable) skin(s *Study) func(h float64) float64 {
	switch c.Skin {
	case "none":
		return nil
	case "iec60287":
		return grid.SkinLaw(grid.IECSkin, c.ROhmPerKm/1000, s.FrequencyHz, s.Order())
	}
	return grid.SkinLaw(grid.RoundSkin, c.ROhmPerKm/1000, s.FrequencyHz, s.Order())
}

// addLoads adds linear loads, motors and the order 1 part of the non-linear
// loads. A load behind a low-pass measure is left out: the low-pass stands for
// both.
func (m *model) addLoads() error {
	s := m.plan.study
	for i := range s.Loads {
		l := &s.Loads[i]
		if measure := m.plan.lowpass[l.Name]; measure != nil {
			if err := m.addOutlet(measure, l); err != nil {
				return err
			}
			continue
		}
		m.add(l.Name, m.load(l))
	}
	for _, x := range s.Motors {
		v := m.volts[x.Bus]
		z := v * v / (1000 * x.RatedKVA) / or(x.LockedRotorRatio, 6)
		xr := or(x.LockedRotorXR, 5)
		r := z / math.Hypot(1, xr)
		m.add(x.Name, &grid.Motor{Name: x.Name, Bus: m.bus[x.Bus], P: 1000 * x.KW, Q: 1000 * x.Kvar, R: r, X: r * xr, Exponent: or(x.ResistanceExp, 0.5)})
	}
	for _, g := range s.Generators {
		v := m.volts[g.Bus]
		percent := v * v / (1000 * g.RatedKVA) / 100
		m.add(g.Name, &grid.Generator{Name: g.Name, Bus: m.bus[g.Bus], P: 1000 * g.KW, Q: 1000 * g.Kvar,
			R: percent * g.Subtransient / or(g.XOverR, 30), X: percent * g.Subtransient, X2: percent * or(g.Negative, g.Subtransient),
			X0: percent * g.ZeroPercent, Earthed: g.ZeroPercent > 0, NeutralOhm: complex(g.NeutralOhm, 0)})
	}
	for _, l := range s.NonlinearLoads {
		m.add(l.Name, m.nonlinear(&l))
	}
	return nil
}

// nonlinear is the order 1 part of a non-linear load.
func (m *model) nonlinear(l *NonlinearLoad) *grid.PowerLoad {
	pf := or(l.Displacement, 1)
	e := &grid.PowerLoad{Name: l.Name, Bus: m.bus[l.Bus], P: 1000 * l.KW, Q: 1000 * l.KW * math.Tan(math.Acos(pf)), Weight: l.Connection.conductors()}
	if l.CurrentA > 0 {
		e.Current, e.P, e.Q = l.CurrentA, pf, math.Sqrt(1-pf*pf)
	}
	return e
}

func (m *model) load(l *Load) grid.Element {
	v, p, q := m.volts[l.Bus], 1000*l.KW, 1000*l.Kvar
	if l.Connection.threePhase() {
		return &grid.Load{Name: l.Name, Bus: m.bus[l.Bus], P: p, Q: q, NominalV: v, AtOrder1: l.atOrder1(), Model: l.model()}
	}
	if l.atOrder1() == "impedance" {
		return &grid.PhaseShunt{Name: l.Name, Bus: m.bus[l.Bus], Weight: l.Connection.conductors(), Branch: passive{l.model(), p, q, m.terminalV(l)}}
	}
	e := &grid.PowerLoad{Name: l.Name, Bus: m.bus[l.Bus], P: p, Q: q, Weight: l.Connection.conductors()}
	if l.AtOrder1 == "current" {
		e.Current = math.Hypot(p, q) / m.terminalV(l)
	}
	return e
}

// terminalV returns the nominal voltage across a load's terminals: line to
// line for three-phase and phase-to-phase loads.
func (m *model) terminalV(l *Load) float64 {
	v := m.volts[l.Bus]
	if len(l.Connection) == 1 {
		return v / math.Sqrt(3)
	}
	return v
}

func (l *Load) atOrder1() string {
	if l.AtOrder1 == "" {
		return "impedance"
	}
	return l.AtOrder1
}

func (l *Load) model() string {
	if l.Model == "" {
		return "parallel"
	}
	return l.Model
}

// passive is a linear load as a branch: p W and q var at v volts across it
// (for a three-phase load in star equivalent, v line to line).
type passive struct {
	model   string
	p, q, v float64
}

func (b passive) Admittance(h float64) complex128 {
	return grid.LoadAdmittance(b.model, b.p, b.q, b.v, h)
}

func (m *model) addOutlet(measure *Measure, l *Load) error {
	pass, err := filter.LowPassRC(measure.ROhm, measure.CUF/1e6, m.plan.study.FrequencyHz)
	if measure.Kind == LowPassLC {
		pass, err = filter.LowPassLC(measure.LMH/1000, measure.CUF/1e6, m.plan.study.FrequencyHz)
	}
	if err != nil {
		return asFieldError(measure.Name, err)
	}
	if len(l.Connection) == 2 {
		return &FieldError{Item: measure.Name, Field: "target", Problem: l.Name + " stands between two phases; an outlet low-pass is built to neutral", Remedy: "choose a three-phase or phase-to-neutral load"}
	}
	pass.Load = passive{l.model(), 1000 * l.KW, 1000 * l.Kvar, m.terminalV(l)}.Admittance
	m.outlets[measure.Name] = outlet{l, pass}
	if l.Connection.threePhase() {
		m.add(l.Name, &grid.Shunt{Name: l.Name, Bus: m.bus[l.Bus], Branch: pass})
	} else {
		m.add(l.Name, &grid.PhaseShunt{Name: l.Name, Bus: m.bus[l.Bus], Weight: l.Connection.conductors(), Branch: pass})
	}
	return nil
}

// addShunts adds banks, filters and the passive shunt measures.
func (m *model) addShunts() error {
	f1 := m.plan.study.FrequencyHz
	for _, b := range m.plan.banks {
		v := 1000 * or(b.AtKV, m.volts[b.Bus]/1000)
		loss := or(b.LossWPerKvar, 0.2) / 1000
		branch, err := filter.Bank(1000*b.Kvar, v, f1, loss)
		if b.DetuningPercent > 0 {
			branch, err = filter.Detuned(1000*b.Kvar, v, f1, b.DetuningPercent/100, or(b.ReactorQ, 50), loss)
		}
		if err := m.addBranch(b.Name, b.Bus, b.Connection, branch, err); err != nil {
			return err
		}
	}
	for _, f := range m.plan.filters {
		branch, err := passiveFilter(f.Kind, 1000*f.Kvar, 1000*or(f.AtKV, m.volts[f.Bus]/1000), f1, f.Order, f.Order2, f.Q)
		if err := m.addBranch(f.Name, f.Bus, f.Connection, branch, err); err != nil {
			return err
		}
	}
	for _, x := range m.plan.chosen {
		if IsFilter(x.Kind) {
			branch, err := passiveFilter(x.Kind, 1000*x.Kvar, m.volts[x.Bus], f1, x.Order, x.Order2, x.Q)
			if err := m.addBranch(x.Name, x.Bus, "", branch, err); err != nil {
				return err
			}
		}
	}
	return nil
}

func (m *model) addBranch(name, bus, connection string, b *filter.Branch, err error) error {
	if err != nil {
		return asFieldError(name, err)
	}
	b = m.plan.vary.drifted(name, b)
	m.branch[name] = b
	if m.base != nil {
		return m.addVariant(name, bus, connection, b)
	}
	m.add(name, &grid.Shunt{Name: name, Bus: m.bus[bus], Branch: b, Zero: connection == "earthed-star"})
	return nil
}
