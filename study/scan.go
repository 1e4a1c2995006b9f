package study

import (
	"context"

	"quietbus/study/grid"
	"quietbus/study/phasor"
)

// scan looks into a live bus.
func (m *model) scan(ctx context.Context, name, bus string, seq phasor.Sequence, from, to float64) (*ScanResult, error) {
	r, err := m.system.ScanAdaptive(ctx, m.bus[bus], seq, from, to)
	if err != nil {
		return nil, m.named(err)
	}
	return &ScanResult{Name: name, Bus: bus, Sequence: seq, Orders: r.Orders, Z: r.Z, Peaks: peaks(r.Peaks), Valleys: peaks(r.Valleys)}, nil
}

func peaks(list []grid.Extremum) []Peak {
	out := make([]Peak, len(list))
	for i, p := range list {
		out[i] = Peak(p)
	}
	return out
}
