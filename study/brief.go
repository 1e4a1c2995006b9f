package study

import (
	"context"
	"math"
	"math/cmplx"
	"slices"

	"quietbus/study/phasor"
)

// A Brief is what comparisons of many choices need of one evaluation: every
// limit row, the hardest stress on a capacitor branch or active filter, and the
// strongest amplification by a parallel resonance. Outcome has the rest.
type Brief struct {
	State     string // operating state
	Points    []PointResult
	Dead      []bool // by point: its bus has no voltage in this state
	Stress    StressShare
	Resonance Amplified
}

// StressShare is the hardest stress, 1 being what the part bears: rms current
// against 1.3 times rated, rms voltage against rated, crest against 1.2 times
// the crest of rated (IEC 60831-1 and IEEE 18, from memory); an active filter's
// current against its rating. Parts without a stated rating are presumed to
// get one that suits.
type StressShare struct {
	Item, What string // empty when nothing bears anything
	Share      float64
}

// Amplified says how many times the impedance at a bus with capacitors exceeds
// what its short-circuit impedance alone would be at that order, at the order
// at which loads draw where that is highest: |Z(h)| / (h |Z(1)|). A capacitor
// that resonates at order r gives 1 / |1 - (h/r)^2| without damping.
type Amplified struct {
	Order int // 0 when there is no capacitor
	Bus   string
	Times float64
}

// NearResonance is the amplification from which a set counts as resonant: 3
// times means a peak within about a fifth of an order at which loads draw.
const NearResonance = 3

// drawsShare is the share of its order 1 current from which a load's order
// counts as one at which it draws.
const drawsShare = 0.03

func (m *model) brief(ctx context.Context, sol *solution) (*Brief, error) {
	s := m.plan.study
	b := &Brief{State: m.plan.state}
	o := &Outcome{Study: m.plan.origin, State: m.plan.state}
	seen := map[string]bool{}
	for i := range s.Assessments {
		a := &s.Assessments[i]
		if !seen[a.Bus] {
			seen[a.Bus] = true
			o.Buses = append(o.Buses, m.busResult(a.Bus, sol))
		}
		if _, stands := m.element[a.Current]; stands && o.Element(a.Current) == nil {
			m.passive(o, sol, "", a.Current)
		}
	}
	b.Points, b.Dead = make([]PointResult, 0, len(s.Assessments)), make([]bool, len(s.Assessments))
	for i := range s.Assessments {
		a := &s.Assessments[i]
		p, err := m.point(ctx, a, o)
		if err != nil {
			return nil, err
		}
		b.Points = append(b.Points, p)
		b.Dead[i] = !m.system.Live(m.bus[a.Bus])
	}
	m.stress(b, sol)
	return b, m.resonance(ctx, b)
}

// busResult is the voltage of a bus.
func (m *model) busResult(name string, sol *solution) BusResult {
	id := m.bus[name]
	phase, seq := sol.net.BusVoltage(id)
	return BusResult{Name: name, NominalV: m.volts[name], Live: m.system.Live(id), Phase: phase, Seq: seq}
}

// stress fills in the hardest stress.
func (m *model) stress(b *Brief, sol *solution) {
	for i := range m.plan.banks {
		x := &m.plan.banks[i]
		at := 1000 * or(x.AtKV, m.volts[x.Bus]/1000)
		m.branchStress(b, sol, x.Name, or(1000*x.RatedKV, at/(1-x.DetuningPercent/100)), x.RatedKV > 0, x.connection() == "delta")
	}
	for i := range m.plan.filters {
		x := &m.plan.filters[i]
		m.branchStress(b, sol, x.Name, 1000*x.RatedKV, x.RatedKV > 0, x.Connection == "delta")
	}
	for _, x := range m.plan.chosen {
		if IsFilter(x.Kind) {
			m.branchStress(b, sol, x.Name, 1000*x.RatedKV, x.RatedKV > 0, false)
		}
		if c, ok := sol.active[x.Name]; ok && x.RatedA > 0 {
			b.Stress.add(x.Name, "current", c.Requested/x.RatedA)
		}
	}
}

func (s *StressShare) add(item, what string, share float64) {
	if share > s.Share {
		*s = StressShare{item, what, share}
	}
}

// branchStress adds what a capacitor branch bears against a line-to-line rating
// in V, 0 for none. Voltages count only against a rating that is stated.
func (m *model) branchStress(b *Brief, sol *solution, name string, rated float64, stated, delta bool) {
	branch := m.branch[name]
	if branch == nil || rated == 0 {
		return
	}
	current := m.ends(sol, name)[0].Phase
	if bears := 1.3 * branch.RatedCurrent(rated); bears > 0 {
		for _, i := range current {
			b.Stress.add(name, "current", phasor.RMS(i)/bears)
		}
	}
	if !stated {
		return
	}
	var star [3]phasor.Spectrum
	for p, i := range current {
		star[p] = phasor.New(len(i) - 1)
		for h := 1; h < len(i); h++ {
			if i[h] != 0 {
				star[p][h] = branch.CapacitorVoltage(float64(h), i[h])
			}
		}
	}
	across := rated / math.Sqrt(3)
	if delta {
		across = rated
		a := slices.Clone(star[0])
		for p := range star {
			next := a
			if p < 2 {
				next = star[p+1]
			}
			for h := range star[p] {
				star[p][h] -= next[h]
			}
		}
	}
	for _, v := range star {
		b.Stress.add(name, "voltage", phasor.RMS(v)/across)
		sum := 0.0
		for _, u := range v {
			sum += cmplx.Abs(u)
		}
		// The crest never exceeds the arithmetic sum, so it is searched only
		// where it could be the hardest.
		if bears := 1.2 * across; sum/bears > b.Stress.Share {
			b.Stress.add(name, "crest", phasor.Peak(v)/math.Sqrt2/bears)
		}
	}
}

// resonance fills in the strongest amplification.
func (m *model) resonance(ctx context.Context, b *Brief) error {
	buses := map[string]bool{}
	for i := range m.plan.banks {
		buses[m.plan.banks[i].Bus] = true
	}
	for i := range m.plan.filters {
		buses[m.plan.filters[i].Bus] = true
	}
	for _, x := range m.plan.chosen {
		if IsFilter(x.Kind) {
			buses[x.Bus] = true
		}
	}
	if len(buses) == 0 {
		return nil
	}
	orders, err := m.sourceOrders()
	if err != nil {
		return err
	}
	var names []string
	for i := range m.plan.study.Buses {
		if bus := m.plan.study.Buses[i].Name; buses[bus] && m.system.Live(m.bus[bus]) {
			names = append(names, bus)
		}
	}
	base := make([]float64, len(names))
	for _, h := range append([]int{1}, orders...) {
		for i, bus := range names {
			z, err := m.look(ctx, bus, h)
			if err != nil {
				return err
			}
			if h == 1 {
				base[i] = cmplx.Abs(z)
			} else if times := cmplx.Abs(z) / (float64(h) * base[i]); times > b.Resonance.Times {
				b.Resonance = Amplified{h, bus, times}
			}
		}
	}
	return nil
}

// sourceOrders lists the orders at which live loads draw, triplen ones left
// out: they meet the zero sequence.
func (m *model) sourceOrders() ([]int, error) {
	some := make([]bool, m.plan.study.Order()+1)
	for i := range m.plan.study.NonlinearLoads {
		l := &m.plan.study.NonlinearLoads[i]
		if !m.system.Live(m.bus[l.Bus]) {
			continue
		}
		lines, err := m.plan.spectrumOf(l)
		if err != nil {
			return nil, err
		}
		for _, t := range lines {
			if t.order > 1 && t.order < len(some) && t.order%3 != 0 && cmplx.Abs(t.share) >= drawsShare {
				some[t.order] = true
			}
		}
	}
	var list []int
	for h, ok := range some {
		if ok {
			list = append(list, h)
		}
	}
	return list, nil
}

// Brief is the comparison's view of one full evaluation, by which a Quick is
// checked.
func (p *Prepared) Brief(ctx context.Context, on []string, state string) (*Brief, error) {
	return p.BriefOf(ctx, nil, on, state)
}

// BriefOf is the same for a variation of the study.
func (p *Prepared) BriefOf(ctx context.Context, v *Variation, on []string, state string) (*Brief, error) {
	x, err := p.study.state(state)
	if err != nil {
		return nil, err
	}
	s, name := p.study, NormalState
	if v != nil {
		s = v.Study
	}
	if x != nil {
		name = x.Name
	}
	plan, err := p.plan(s.In(x), name, on)
	if err != nil {
		return nil, err
	}
	plan.vary = v
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
