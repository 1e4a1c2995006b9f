package study

import (
	"context"

	"quietbus/study/phasor"
)

// Impedance is Prepared.Impedance for a study that is scanned once.
func Impedance(ctx context.Context, s *Study, on []string, bus string, seq phasor.Sequence, from, to float64) (*ScanResult, error) {
	p, err := Prepare(s)
	if err != nil {
		return nil, err
	}
	return p.Impedance(ctx, on, bus, seq, from, to)
}
