package converter

import (
	"context"

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
	Error                              float64 // what is missing, of InputW
}

// Result is the steady state of one converter.
type Result struct {
	Current    [3]phasor.Spectrum // A rms, positive into the load, orders 0..Order
	DirectV    float64            // mean direct voltage at the load (mean over the links), V
	DirectA    float64            // mean direct current of all links, A
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

// Waveform is one period of what the converter draws, sampled evenly from the
// time origin of the phasors. DirectV, of the first link, is that of its
// capacitor, or behind the valves where only a choke smooths.
type Waveform struct {
	Current [3][]float64 // A
	DirectV []float64    // V
	DirectA []float64    // A, sum over the links; nil for ac controllers
}

// Waveform returns one period of the solution in the time domain.
func (r *Result) Waveform() Waveform {
	var out Waveform
	if r.orbit == nil {
		for q := range out.Current {
			out.Current[q] = phasor.Synthesize(r.Current[q], piecewise.Samples, nil)
		}
		return out
	}
	walk := r.orbit.Walk()
	c := r.plant.c
	for q := range out.Current {
		out.Current[q] = make([]float64, piecewise.Samples)
		for b, k := range c.K {
			if k[q] == 0 {
				continue
			}
			for i, v := range walk[b] {
				out.Current[q][i] += k[q] * v
			}
		}
	}
	if len(r.plant.links) == 0 {
		return out
	}
	out.DirectA = make([]float64, piecewise.Samples)
	for _, l := range r.plant.links {
		for _, d := range l.direct {
			for i, v := range walk[d] {
				out.DirectA[i] += v
			}
		}
	}
	first := r.plant.links[0]
	if first.capacitor >= 0 {
		out.DirectV = walk[len(c.X)+first.capacitor]
		return out
	}
	d := first.direct[0]
	out.DirectV = make([]float64, piecewise.Samples)
	if len(r.plant.rectifiers[0].legs) == 0 || c.K[d] != [3]float64{} { // a single diode: at its load
		for i, x := range walk[d] {
			out.DirectV[i] = r.plant.load[d][d] * x
		}
		return out
	}
	// R i + X i' against the constant EMFs, seen from the valves
	rates, one := r.orbit.WalkRates(), len(c.X)
	for i := range out.DirectV {
		for b := range c.X {
			out.DirectV[i] += c.R[d][b]*walk[b][i] + c.X[d][b]*rates[b][i]
		}
		for k, e := range c.EMF[d] {
			out.DirectV[i] -= e * walk[one+k][i]
		}
		out.DirectV[i] -= r.plant.drop[d]
	}
	return out
}

// Norton is the linearisation of a converter about its result, for orders 1 to
// Order, in rms phasors:
//
//	dI_k = sum over h of Direct(k, h) dV_h + Mirror(k, h) conj(dV_h)
//
// Entries are 3 x 3 over the phases, line by voltage. A balanced converter
// couples order h to h + 6m by Direct and to 6m - h by Mirror. V is the
// Terminal's Voltage; constant power and firing angles follow the change.
type Norton struct {
	Order   int
	Voltage [3]phasor.Spectrum // about which it was taken
	Current [3]phasor.Spectrum

	linear *piecewise.Linearisation
	front  *frontState
}

// Norton returns the linearisation about the result, for orders 1..order
// (zero, or above the result's own: the result's own). It costs as much as some
// five solutions.
func (r *Result) Norton(ctx context.Context, order int) (*Norton, error) {
	if order <= 0 || order > r.order {
		order = r.order
	}
	n := &Norton{Order: order, Current: r.Current, Voltage: cloned(r.voltage), front: r.front}
	if r.orbit == nil {
		return n, nil
	}
	var err error
	n.linear, err = r.orbit.Linearise(ctx, order)
	return n, err
}

// Blocks returns Direct and Mirror of current order k by voltage order h.
func (n *Norton) Blocks(k, h int) (direct, mirror [3][3]complex128) {
	if n.linear == nil {
		if k == h {
			return n.front.blocks(h)
		}
		return direct, mirror
	}
	return n.linear.At(k, h)
}

// Admittance returns the diagonal part Direct(h, h) in symmetrical components,
// S: what the converter adds to each sequence network at order h.
func (n *Norton) Admittance(h int) (seq [3]complex128) {
	direct, _ := n.Sequences(h, h)
	for s := range seq {
		seq[s] = direct[s][s]
	}
	return seq
}

// Predict returns the line currents to first order at another voltage.
func (n *Norton) Predict(v [3]phasor.Spectrum) [3]phasor.Spectrum {
	var out [3]phasor.Spectrum
	for p := range out {
		out[p] = phasor.New(n.Order)
		copy(out[p], n.Current[p])
	}
	for h := 1; h <= n.Order; h++ {
		var dv [3]complex128
		still := true
		for q := range dv {
			dv[q] = v[q].At(h) - n.Voltage[q].At(h)
			still = still && dv[q] == 0
		}
		if still {
			continue
		}
		for k := 1; k <= n.Order; k++ {
			direct, mirror := n.Blocks(k, h)
			for p := range out {
				for q, d := range dv {
					out[p][k] += direct[p][q]*d + mirror[p][q]*complex(real(d), -imag(d))
				}
			}
		}
	}
	return out
}
