package study

import (
	"context"

	"quietbus/study/grid"
	"quietbus/study/phasor"
)

// scan looks into a live bus, or from it to another one.
func (m *model) scan(ctx context.Context, name, bus, at string, seq phasor.Sequence, from, to float64) (*ScanResult, error) {
	if at == bus {
		at = ""
	}
	r, err := m.curve(ctx, bus, at, seq, from, to)
	if err != nil {
		return nil, m.named(err)
	}
	s := &ScanResult{Name: name, Bus: bus, At: at, Sequence: seq, Orders: r.Orders, Z: r.Z, Peaks: peaks(r.Peaks), Valleys: peaks(r.Valleys)}
	scanner := m.system.NewScanner(m.bus[bus], seq)
	for i := range s.Peaks {
		p := &s.Peaks[i]
		list, err := scanner.Participants(p.Order)
		if err != nil {
			return nil, m.named(err)
		}
		p.Capacitive, p.Inductive = m.sides(list)
		if p.mode = m.system.ModeAt(m.bus[bus], seq, p.Order); p.mode != nil {
			p.Buses = m.shares(p.mode)
		}
	}
	return s, nil
}

func (m *model) curve(ctx context.Context, bus, at string, seq phasor.Sequence, from, to float64) (*grid.ScanCurve, error) {
	if at == "" {
		return m.system.ScanAdaptive(ctx, m.bus[bus], seq, from, to)
	}
	return m.system.TransferAdaptive(ctx, m.bus[bus], m.bus[at], seq, from, to)
}

func peaks(list []grid.Extremum) []Peak {
	out := make([]Peak, len(list))
	for i, p := range list {
		out[i] = Peak{Order: p.Order, Ohm: p.Ohm, Q: p.Q}
	}
	return out
}

// sides names the items that make a resonance: on each side the largest, and a
// second one that has at least a quarter of the swing.
func (m *model) sides(list []grid.Participation) (capacitive, inductive []string) {
	name := make(map[grid.ElementID]string, len(m.element))
	for item, id := range m.element {
		name[id] = item
	}
	add := func(side []string, p grid.Participation, share float64) []string {
		if len(side) == 0 || len(side) == 1 && share > 0.25 {
			return append(side, name[p.Element])
		}
		return side
	}
	for _, p := range list {
		if p.Share > 0 {
			inductive = add(inductive, p, p.Share)
		} else {
			capacitive = add(capacitive, p, -p.Share)
		}
	}
	return capacitive, inductive
}
