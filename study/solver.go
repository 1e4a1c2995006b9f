package study

import (
	"context"

	"quietbus/study/grid"
	"quietbus/study/phasor"
)

// solver is what solves a model: the whole network, or a variant of one that
// was reduced to its ports. Fundamental comes first, then what loads draw, then
// Harmonics, then the results.
type solver interface {
	Fundamental(ctx context.Context) error
	Voltage(b grid.BusID) [3]complex128 // order 1
	Current(e grid.ElementID) [3]complex128
	Harmonics(ctx context.Context, injections []grid.Injection) error
	BusVoltage(b grid.BusID) (phase, seq [3]phasor.Spectrum)
	Ends(id grid.ElementID) []grid.End
}

// whole solves the whole network, each order checked.
type whole struct {
	sys   *grid.System
	order int
	base  *grid.Fundamental
	*grid.Solution
}

func (w *whole) Fundamental(ctx context.Context) (err error) {
	w.base, err = w.sys.Fundamental(ctx)
	return err
}

func (w *whole) check() grid.Check { return w.Solution.Check }

func (w *whole) Voltage(b grid.BusID) [3]complex128     { return w.base.Voltage(b) }
func (w *whole) Current(e grid.ElementID) [3]complex128 { return w.base.Current(e) }

func (w *whole) Harmonics(ctx context.Context, injections []grid.Injection) (err error) {
	w.Solution, err = w.sys.Harmonics(ctx, w.base, w.order, injections)
	return err
}
