package piecewise

import "errors"

// What can go wrong, apart from a cancelled context.
var (
	// ErrInconsistent: valves switch for ever at one instant, or none of the
	// states they try can hold.
	ErrInconsistent = errors.New("no consistent state of the valves")
	// ErrDiverged: the state left every bound.
	ErrDiverged = errors.New("the state grew without bound")
	// ErrNotPeriodic: the shooting iteration found no periodic state.
	ErrNotPeriodic = errors.New("no periodic state found")
)
