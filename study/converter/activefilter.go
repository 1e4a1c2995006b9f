package converter

import (
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// ActiveFilter injects the opposite of the harmonic current that it senses in
// a load. Behaviour, not circuit: what its control can follow, what its delay
// leaves or amplifies, what its rating allows.
//
// At order h it delivers -Share e^(-jhw Delay) / (1 + jhw / (2 pi Bandwidth)) of
// the sensed current up to MaxOrder, so the line keeps |1 - that factor| of
// it: with full share a delay angle above 60 degrees leaves more than there
// was. Selective control predicts the periodic current and so removes the
// delay in steady state. When the sum exceeds the rms or crest rating every
// order is scaled down alike. Common practice, no source; the arithmetic is
// derived.
type ActiveFilter struct {
	RatedA      float64         // rms, each line
	CrestA      float64         // largest instantaneous current; zero: sqrt(2) RatedA times 1.5
	MaxOrder    int             // highest order compensated
	Share       float64         // of the sensed current, 0 to 1
	Shares      map[int]float64 // orders whose share differs
	DelayS      float64
	Selective   bool    // the control predicts, so DelayS does not show in steady state
	BandwidthHz float64 // of its current control; zero: not limited

	// the switched bridge and its own filter, for the switching lines; zero
	// SwitchingHz: not asked for
	SwitchingHz float64
	DirectV     float64
	InductorH   float64 // bridge side
	FilterF     float64 // each phase, star
	DampingOhm  float64
	LineH       float64 // line side, with the supply's inductance
}

// Compensation is what an active filter does to a load current.
type Compensation struct {
	Injected   [3]phasor.Spectrum // drawn by the filter, A rms, positive into it
	Line       [3]phasor.Spectrum // load and filter together
	RequestedA float64            // rms asked for in the busiest line
	DeliveredA float64            // rms delivered there
	Scale      float64            // 1, or less when saturated
	Saturated  bool
	Amplified  []int // orders that leave larger than they came
	Switching  []SwitchingLine
}

// Compensate returns the filter's current for a load's, at the fundamental
// frequency hz and, for the switching lines, the line voltage (V rms).
func (a ActiveFilter) Compensate(load [3]phasor.Spectrum, hz, lineV float64) (*Compensation, error) {
	switch {
	case !(a.RatedA > 0):
		return nil, condition(BadValue, "RatedA", "state the rated current", "the rated current is %g A", a.RatedA)
	case a.MaxOrder < 2:
		return nil, condition(BadValue, "MaxOrder", "state the highest order that it compensates", "the order ceiling is %d", a.MaxOrder)
	case !(a.Share >= 0 && a.Share <= 1):
		return nil, condition(BadValue, "Share", "use a share from 0 to 1", "the share is %g", a.Share)
	case !(a.DelayS >= 0) || !(a.BandwidthHz >= 0) || !(hz > 0):
		return nil, condition(BadValue, "DelayS", "use zero or positive values", "delay %g s, bandwidth %g Hz at %g Hz", a.DelayS, a.BandwidthHz, hz)
	}
	c := &Compensation{Scale: 1}
	crest := a.CrestA
	if crest == 0 {
		crest = 1.5 * math.Sqrt2 * a.RatedA
	}
	for q := range load {
		c.Injected[q] = phasor.New(load[q].Order())
		for h := 2; h < len(load[q]) && h <= a.MaxOrder; h++ {
			c.Injected[q][h] = -a.factor(h, hz) * load[q][h]
		}
		rms := phasor.RMS(c.Injected[q])
		c.RequestedA = math.Max(c.RequestedA, rms)
		if peak := phasor.Peak(c.Injected[q]); peak > crest {
			c.Scale = math.Min(c.Scale, crest/peak)
		}
		if rms > a.RatedA {
			c.Scale = math.Min(c.Scale, a.RatedA/rms)
		}
	}
	c.Saturated = c.Scale < 1
	c.DeliveredA = c.RequestedA * c.Scale
	larger := map[int]bool{}
	for q := range load {
		c.Line[q] = phasor.New(load[q].Order())
		for h, z := range load[q] {
			c.Injected[q][h] *= complex(c.Scale, 0)
			c.Line[q][h] = z + c.Injected[q][h]
			if cmplx.Abs(c.Line[q][h]) > cmplx.Abs(z)*(1+1e-9) {
				larger[h] = true
			}
		}
	}
	for h := 2; h <= a.MaxOrder; h++ {
		if larger[h] {
			c.Amplified = append(c.Amplified, h)
		}
	}
	c.Switching = a.switching(hz, lineV)
	return c, nil
}

// factor is the share of the sensed current delivered at an order, with the
// phase error of delay and bandwidth.
func (a ActiveFilter) factor(h int, hz float64) complex128 {
	share := a.Share
	if s, ok := a.Shares[h]; ok {
		share = s
	}
	f := complex(share, 0)
	x := 2 * math.Pi * hz * float64(h)
	if !a.Selective {
		f *= cmplx.Rect(1, -x*a.DelayS)
		if a.BandwidthHz > 0 {
			f /= complex(1, x/(2*math.Pi*a.BandwidthHz))
		}
	}
	return f
}

// switching returns the lines about the carrier behind the filter's own filter.
func (a ActiveFilter) switching(hz, lineV float64) []SwitchingLine {
	if a.SwitchingHz <= 0 || a.DirectV <= 0 || a.InductorH <= 0 {
		return nil
	}
	w := 2 * math.Pi * hz
	m := &frontState{w: w, zx: w * a.LineH, f: FrontEnd{
		SwitchingHz: a.SwitchingHz, InductorH: a.InductorH, FilterF: a.FilterF, DampingOhm: a.DampingOhm, DirectV: a.DirectV,
	}}
	return m.switching(math.Min(1, lineV/sqrt3*math.Sqrt2/(a.DirectV/2)), hz)
}
