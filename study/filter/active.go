package filter

import (
	"math"

	"quietbus/study/phasor"
)

// Active is an active filter: it injects the opposite of a share of the
// harmonic current that it senses, up to an order ceiling, and scales all
// orders alike when that would take more than its rated current.
type Active struct {
	RatedA   float64
	MaxOrder int
	Share    func(order int) float64 // 0..1
}

// Compensation is what an active filter does for one sensed current.
type Compensation struct {
	Drawn     [3]phasor.Spectrum // from the bus, by phase: minus the removed share
	Requested float64            // A rms of the worst phase before scaling
	Delivered float64            // A rms of the worst phase
	Saturated bool
}

// Compensate returns the filter's current for the sensed load current.
func (a *Active) Compensate(load [3]phasor.Spectrum) Compensation {
	var c Compensation
	for p, s := range load {
		c.Drawn[p] = make(phasor.Spectrum, len(s))
		for h := 2; h < len(s) && h <= a.MaxOrder; h++ {
			c.Drawn[p][h] = -s[h] * complex(a.Share(h), 0)
		}
		c.Requested = math.Max(c.Requested, phasor.RMS(c.Drawn[p]))
	}
	c.Delivered = c.Requested
	if c.Requested > a.RatedA {
		c.Saturated, c.Delivered = true, a.RatedA
		k := complex(a.RatedA/c.Requested, 0)
		for p := range c.Drawn {
			for h := range c.Drawn[p] {
				c.Drawn[p][h] *= k
			}
		}
	}
	return c
}
