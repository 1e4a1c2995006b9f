package converter

import (
	"math"
	"math/cmplx"

	"quietbus/study/converter/internal/piecewise"
)

// measure fills in what is read on the direct side.
func (p *plant) measure(r *Result, o *piecewise.Orbit) {
	c := p.c
	nb, nv := len(c.X), len(c.Y)
	one := nb + nv
	if len(p.links) == 0 {
		r.Conduction = Fired
		return
	}
	walk := o.Walk()
	for _, l := range p.links {
		var mean float64
		for _, d := range l.direct {
			mean += o.Moments[d][one]
		}
		r.DirectA += mean
		switch {
		case l.capacitor >= 0:
			v := nb + l.capacitor
			r.DirectV += o.Moments[v][one] / float64(len(p.links))
			low, high := math.Inf(1), math.Inf(-1)
			for _, x := range walk[v] {
				low, high = math.Min(low, x), math.Max(high, x)
			}
			if r.RippleV == 0 || low < r.LowestV {
				r.LowestV = low
			}
			r.RippleV = math.Max(r.RippleV, high-low)
			r.CapacitorA = math.Max(r.CapacitorA, p.capacitorCurrent(l, o))
		case l.param >= 0:
			r.DirectV += (o.State[one+1+l.param] + l.ohm*mean) / float64(len(p.links))
		default:
			r.DirectV += l.ohm * mean / float64(len(p.links))
		}
	}
	r.Conduction = Continuous
	for _, q := range p.rectifiers {
		legs := len(q.legs)
		idle := o.Share(q.unit, func(s uint64) bool { return s == 0 })
		shorted := o.Share(q.unit, func(s uint64) bool { return s&(s>>legs)&(1<<legs-1) != 0 })
		busy := o.Share(q.unit, func(s uint64) bool { return ones(s) > 2 })
		r.Overlap = math.Max(r.Overlap, busy)
		if idle > 1e-9 {
			r.Conduction = Discontinuous
		} else if legs == 3 && (shorted > 1e-6 || busy > 1-1e-6) && r.Conduction == Continuous {
			r.Conduction = Overlapping
		}
	}
}

func ones(s uint64) (n int) {
	for ; s != 0; s &= s - 1 {
		n++
	}
	return n
}

// capacitorCurrent is the rms of id - G v - load current.
func (p *plant) capacitorCurrent(l link, o *piecewise.Orbit) float64 {
	c := p.c
	nb, nv := len(c.X), len(c.Y)
	weight := make([]float64, len(o.State))
	v := l.capacitor
	for b := range c.S {
		weight[b] += c.S[b][v]
	}
	weight[nb+v] -= c.G[v]
	for k, d := range c.Draw[v] {
		weight[nb+nv+k] += d
	}
	var sum float64
	for i, a := range weight {
		for j, b := range weight {
			if a != 0 && b != 0 {
				sum += a * b * o.Moments[i][j]
			}
		}
	}
	return math.Sqrt(math.Max(0, sum))
}

// balance compares the power that the EMFs give with what is taken up.
func (p *plant) balance(o *piecewise.Orbit, t Terminal) Balance {
	c := p.c
	nb, nv := len(c.X), len(c.Y)
	one := nb + nv
	var b Balance
	for q := range t.Voltage {
		for h := 1; h < len(t.Voltage[q]); h++ {
			b.InputW += real(t.Voltage[q][h] * cmplx.Conj(o.Lines[q].At(h)))
		}
	}
	for i := 0; i < nb; i++ {
		for j := 0; j < nb; j++ {
			m := o.Moments[i][j]
			b.SourceW += p.source[i][j] * m
			b.LoadW += p.load[i][j] * m
			b.ConverterW += (c.R[i][j] - p.source[i][j] - p.load[i][j]) * m
		}
		b.ConverterW += p.drop[i] * o.Moments[i][one]
		for k, e := range c.EMF[i] {
			if k == 0 {
				e += p.drop[i]
			}
			b.LoadW -= e * o.Moments[i][one+k]
		}
	}
	for v := 0; v < nv; v++ {
		b.LoadW += c.G[v] * o.Moments[nb+v][nb+v]
		for k, d := range c.Draw[v] {
			b.LoadW -= d * o.Moments[nb+v][one+k]
		}
	}
	// of the input, or of 2 % of the apparent power where hardly any power flows
	var apparent float64
	for q := range t.Voltage {
		apparent += absolute(t.Voltage[q].At(1)) * absolute(o.Lines[q].At(1))
	}
	if size := math.Max(math.Abs(b.InputW)+b.SourceW+b.ConverterW, 0.02*apparent); size > 0 {
		b.Error = (b.InputW - b.SourceW - b.ConverterW - b.LoadW) / size
	}
	return b
}
