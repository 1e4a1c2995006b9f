package study

import (
	"context"
	"math"

	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// assessEquipment holds one non-linear load against a set for equipment. The
// assessment's bus is where the short-circuit ratio is taken; its demand
// current, when stated, is the rated current Iref.
func (m *model) assessEquipment(ctx context.Context, a *Assessment, o *Outcome, set *limits.Set, p *PointResult) error {
	e := o.Element(a.Current)
	if e == nil || e.Kind != KindNonlinearLoad {
		p.NotAssessed = append(p.NotAssessed, "currents: "+a.Current+" is not supplied, so it draws no current")
		return nil
	}
	load := m.plan.nonlinear(a.Current)
	at := o.Bus(load.Bus)
	isc, _, err := m.shortCircuit(ctx, a)
	if err != nil {
		return err
	}
	watt, apparent := powerOf(at.Phase, e.Ends[0].Phase)
	q := limits.Equipment{NominalV: at.NominalV, Current: e.Ends[0].Phase, Wires: wiresOf(load.Connection), ReferenceA: a.DemandA,
		PowerW: watt, IscA: isc * m.volts[a.Bus] / at.NominalV}
	if apparent > 0 {
		q.PowerFactor = watt / apparent
	}
	return p.take(set.Equipment(q))
}

// nonlinear returns the non-linear load of a name, nil when there is none.
func (p *plan) nonlinear(name string) *NonlinearLoad {
	for i := range p.study.NonlinearLoads {
		if p.study.NonlinearLoads[i].Name == name {
			return &p.study.NonlinearLoads[i]
		}
	}
	return nil
}

func wiresOf(c Connection) limits.Wires {
	switch c {
	case "", ThreePhase:
		return limits.ThreePhase
	case PhaseA, PhaseB, PhaseC:
		return limits.PhaseNeutral
	}
	return limits.PhasePhase
}

// powerOf returns the active power, W, and the apparent power, VA, of three
// phases together, the latter as the sum of the phases' own.
func powerOf(v, i [3]phasor.Spectrum) (watt, apparent float64) {
	for p := range v {
		for h := range i[p] {
			a, b := v[p].At(h), i[p][h]
			watt += real(a)*real(b) + imag(a)*imag(b)
		}
		apparent += phasor.RMS(v[p]) * phasor.RMS(i[p])
	}
	return math.Abs(watt), apparent
}
