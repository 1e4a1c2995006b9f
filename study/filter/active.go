package filter

import (
	"math"

	"quietbus/study/phasor"
)

// Active is an active filter: it injects the opposite of a share of the
// harmonic current that it senses, up to an order ceiling, and scales all
// orders alike when that would take more than its rated current in any phase.
type Active struct {
	RatedA    float64                 // rms current in each line
	MaxOrder  int                     // highest order it works on
	Share     func(order int) float64 // share removed, 0 to 1; nil removes all
	ThreeWire bool                    // has no neutral, so it leaves the zero sequence alone
}

// Compensation is what an active filter does for one sensed current.
type Compensation struct {
	Drawn     [3]phasor.Spectrum // from the bus, by phase: minus the removed share
	Requested float64            // A rms of the worst phase before scaling
	Delivered float64            // A rms of the worst phase
	Scale     float64            // of every order, below 1 when saturated
	Saturated bool
}

// Compensate returns the filter's current for the sensed load current by
// phase, A rms. Orders 0 and 1 are left alone. The result holds as many orders
// as the sensed current.
func (a *Active) Compensate(load [3]phasor.Spectrum) Compensation {
	c := Compensation{Scale: 1}
	for p, s := range load {
		c.Drawn[p] = make(phasor.Spectrum, len(s))
	}
	for h := 2; h <= a.MaxOrder; h++ {
		share := 1.0
		if a.Share != nil {
			share = a.Share(h)
		}
		var zero complex128
		if a.ThreeWire {
			zero = (load[0].At(h) + load[1].At(h) + load[2].At(h)) / 3
		}
		for p, s := range load {
			if h < len(s) {
				c.Drawn[p][h] = -(s[h] - zero) * complex(share, 0)
			}
		}
	}
	for _, s := range c.Drawn {
		c.Requested = math.Max(c.Requested, phasor.RMS(s))
	}
	c.Delivered = c.Requested
	if c.Requested > a.RatedA {
		c.Saturated, c.Delivered = true, max(a.RatedA, 0)
		c.Scale = c.Delivered / c.Requested
		for _, s := range c.Drawn {
			for h := range s {
				s[h] *= complex(c.Scale, 0)
			}
		}
	}
	return c
}
