package converter

import (
	"quietbus/study/converter/internal/piecewise"
	"quietbus/study/phasor"
)

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
