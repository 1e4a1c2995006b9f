package converter

import (
	"context"

	"quietbus/study/converter/internal/piecewise"
	"quietbus/study/phasor"
)

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
