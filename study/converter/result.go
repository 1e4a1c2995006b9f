package converter

import (
	"quietbus/study/converter/internal/piecewise"
	"quietbus/study/phasor"
)

// Options of Solve.
type Options struct {
	Order int    // highest order of the result; zero: phasor.DefaultOrder
	Warm  *State // State of an earlier Result to start from; may be nil
}

// Conduction says how the direct current flows.
type Conduction string

// Never zero; zero for a part of the period; never zero and two commutations
// at a time (overlap above 60 degrees, or the direct side shorted for a part
// of the period); ac controllers: as fired; switched many times a period.
const (
	Continuous    Conduction = "continuous"
	Discontinuous Conduction = "discontinuous"
	Overlapping   Conduction = "overlapping"
	Fired         Conduction = "fired"
	Modulated     Conduction = "modulated"
)

// Balance is the energy balance over one period, W. Source is lost in the
// Terminal's own resistance.
type Balance struct {
	InputW, SourceW, ConverterW, LoadW float64
	Error                              float64 // what is missing, of InputW (at least 2 % of the apparent power)
}

// Result is the steady state of one converter.
type Result struct {
	Current    [3]phasor.Spectrum // A rms, positive into the load, orders 0..Order
	DirectV    float64            // mean direct voltage at the load (mean over the links), V
	DirectA    float64            // mean direct current of all links, A
	LowestV    float64            // lowest instantaneous voltage of a capacitor, V
	RippleV    float64            // largest peak-to-peak voltage of a capacitor, V
	CapacitorA float64            // largest rms current of a capacitor, A
	Conduction Conduction
	Overlap    float64 // share of the period in which a commutation goes on
	Iterations int     // periods stepped
	Residual   float64 // last correction of the state, relative
	Multiplier float64 // growth of a disturbance in one period; below 1 is stable
	Balance    Balance
	Switching  []SwitchingLine // lines about the switching frequency, active front end only
	State      *State          // to start a later solution from

	plant   *plant
	orbit   *piecewise.Orbit
	front   *frontState
	order   int
	voltage [3]phasor.Spectrum
}
