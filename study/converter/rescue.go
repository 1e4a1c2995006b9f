package converter

import (
	"context"
	"errors"
	"math"

	"quietbus/study/converter/internal/piecewise"
	"quietbus/study/phasor"
)

// judge names a solution that is none: collapsed, oscillating, shorted, or
// without current.
func (p *plant) judge(n Nameplate, r *Result, o *piecewise.Orbit) error {
	if len(p.links) == 0 {
		return nil
	}
	if r.DirectA < 1e-6*p.c.Amp {
		return condition(NoConduction, "", "check the firing angle and the voltage of the load", "the load's voltage is above what the supply offers at this firing angle, so no valve ever conducts")
	}
	if n.Smoothing == ByChoke && (r.Conduction == Overlapping || r.Overlap > 0.999) && r.DirectV < 0.02*n.idealDirect() {
		return condition(FullOverlap, "", "raise the load's resistance or lower the reactance", "commutations run into each other until the valves short the supply: the current is limited by its reactance alone and the direct voltage is %.2g V", r.DirectV)
	}
	if r.LowestV < 0 {
		return tooSmall(n)
	}
	for _, l := range p.links {
		if l.capacitor >= 0 && l.param >= 0 && l.armature < 0 && o.Yield[l.param] < 0 {
			return condition(WeakSupply, "", "", "the direct voltage of %.0f V lies on the branch where more current brings less power, so it collapses", r.DirectV)
		}
	}
	if r.Multiplier > growth {
		if n.Load == TightPower {
			return condition(Unstable, "CapacitorF", "use a larger capacitor or less choke", "the constant-power load makes the direct link oscillate: a disturbance grows to %.3g times in one period", r.Multiplier)
		}
		return condition(Unstable, "", "check firing angle and inductances", "a disturbance grows to %.3g times in one period", r.Multiplier)
	}
	if alternates(n, r) {
		return condition(Unstable, "CapacitorF", "use a larger capacitor, more reactance or more damping", "line reactance and capacitor swing at half the pulse frequency, so large and small current pulses alternate")
	}
	return nil
}

// tooSmall names a capacitor that is empty before the next crest.
func tooSmall(n Nameplate) error {
	return condition(NoCapacitor, "CapacitorF", "use a larger capacitor", "%.3g uF cannot carry the load from one crest of the voltage to the next: it would be empty in between", 1e6*n.CapacitorF)
}

// holdsGap reports whether the capacitor's charge lasts for the gap between
// crests: a sixth of a period for three phases, a half for one, all of it for
// a single diode.
func holdsGap(n Nameplate, t Terminal) bool {
	gap := 1 / t.FrequencyHz
	switch {
	case n.Kind.threePhase():
		gap /= 6
	case n.Kind != KindHalfWave:
		gap /= 2
	}
	watts, volts := n.PowerW, math.Sqrt2*n.volts()
	c := n.CapacitorF
	if n.Connection == ABCN {
		watts /= 3
	}
	if n.SeparateLink {
		watts /= float64(len(n.Sections))
	}
	return 0.5*c*volts*volts > 0.5*watts*gap
}

// alternates reports even orders where neither the supply nor the converter
// has any.
func alternates(n Nameplate, r *Result) bool {
	if n.Kind == KindHalfWave {
		return false
	}
	for _, v := range r.voltage {
		for h := 2; h <= v.Order(); h += 2 {
			if absolute(v[h]) > 0 {
				return false
			}
		}
	}
	for _, i := range r.Current {
		for h := 2; h <= i.Order(); h += 2 {
			if absolute(i[h]) > 1e-3*absolute(i[1]) {
				return true
			}
		}
	}
	return false
}

// rescue tries again from a direct voltage found with the direct side held, and
// says whether the supply is too weak for the power.
func rescue(ctx context.Context, n Nameplate, t Terminal, o Options, cause error) (*Result, error) {
	var named *ConditionError
	if !errors.As(cause, &named) {
		return nil, cause
	}
	if named.Condition != NotSettled && named.Condition != WeakSupply || n.Kind == KindControlledReactor || n.Kind == KindControlledResistor {
		return nil, cause
	}
	switch {
	case n.Load == Resistive:
		return nil, cause
	case n.Smoothing != ByCapacitor:
		return rescueChoke(ctx, n, t, o, cause)
	case n.Load == FixedCurrent:
		return nil, cause
	}
	if !holdsGap(n, t) && !n.Kind.threePhase() {
		return nil, tooSmall(n)
	}
	volts, most, err := holding(ctx, n, t)
	if err != nil {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		return nil, cause
	}
	if most < n.PowerW {
		return nil, &ConditionError{
			Condition: WeakSupply, Field: "PowerW", AvailableW: most,
			Reason: "with this reactance the rectifier can deliver " + power(most) + " at most, not " + power(n.PowerW),
			Remedy: "lower the power or the reactance",
		}
	}
	s := &State{plate: n, source: t}
	s.source.Voltage = [3]phasor.Spectrum{}
	_, links := rectifiersOf(n, t.omega())
	at := make([]float64, links)
	for i := range at {
		at[i] = volts
	}
	s.build(t, at)
	start := append([]float64(nil), s.plant.start...)
	for _, l := range s.plant.links {
		start[len(s.plant.c.X)+l.capacitor] = volts
	}
	s.solver.Start(start)
	r, err := s.run(ctx, t, o.Order)
	if err != nil && ctx.Err() == nil {
		return nil, cause
	}
	return r, err
}

// holding returns the direct voltage at which a rectifier with an endless
// capacitor delivers its power, and the most that it can deliver. Links are
// taken to be alike.
func holding(ctx context.Context, n Nameplate, t Terminal) (volts, most float64, err error) {
	top := 0.0
	list, _ := rectifiersOf(n, t.omega())
	for _, r := range list {
		top = math.Max(top, crest(r.legs, n.Kind == KindHalfWave, t.Voltage)-2*n.DropV)
	}
	deliver := func(v float64) (float64, error) {
		w, _, _, err := held(ctx, n, t, v)
		most = math.Max(most, w)
		return w, err
	}
	// down from the crest until the power is passed or begins to fall
	const steps = 24
	above, last := top, 0.0
	for i := 1; i < steps; i++ {
		v := top * (1 - float64(i)/steps)
		w, err := deliver(v)
		if err != nil {
			return 0, most, err
		}
		if w >= n.PowerW {
			below := v
			for j := 0; j < 12; j++ {
				mid := (above + below) / 2
				if w, err = deliver(mid); err != nil {
					return 0, most, err
				}
				if w >= n.PowerW {
					below = mid
				} else {
					above = mid
				}
			}
			return (above + below) / 2, math.Max(most, n.PowerW), nil
		}
		if w < 0.98*last {
			break
		}
		above, last = v, w
	}
	return 0, most, nil
}

// held returns the power and the direct current of links held at v, and the
// orbit.
func held(ctx context.Context, n Nameplate, t Terminal, v float64) (watts, amps float64, o *piecewise.Orbit, err error) {
	if n.Smoothing == ByCapacitor {
		n.Load, n.Smoothing = FixedCurrent, ByChoke
	}
	p := buildRectifier(n, t, nil)
	c := p.c
	// the back EMF takes the voltage; its parameter is not free any more
	nb := len(c.X)
	for b := range c.EMF {
		c.EMF[b] = []float64{c.EMF[b][0]}
	}
	for _, l := range p.links {
		for _, d := range l.direct {
			c.EMF[d][0] -= v
		}
	}
	c.Controls = nil
	s := piecewise.NewSolver(c)
	s.Start(p.start[:nb+1])
	o, err = s.Solve(ctx, t.Voltage, 1)
	if err != nil {
		return 0, 0, nil, err
	}
	for _, l := range p.links {
		for _, d := range l.direct {
			amps += o.Moments[d][nb]
		}
	}
	return v * amps, amps, o, nil
}

// rescueChoke finds the back EMF at which a rectifier without capacitor gives
// the power or current asked for, coming down from the highest, and says
// whether it can give that much.
func rescueChoke(ctx context.Context, n Nameplate, t Terminal, o Options, cause error) (*Result, error) {
	s := &State{plate: n, source: t}
	s.source.Voltage = [3]phasor.Spectrum{}
	s.build(t, nil)
	target, most := 0.0, 0.0
	var crest float64
	for _, l := range s.plant.links {
		crest = math.Max(crest, l.crest)
		target += l.watts
	}
	if n.Load == FixedCurrent {
		target = 0
		for _, c := range s.plant.c.Controls {
			target += c.Target
		}
	}
	var orbit *piecewise.Orbit
	deliver := func(e float64) (float64, error) {
		watts, amps, found, err := held(ctx, n, t, e)
		if err != nil {
			return 0, err
		}
		orbit = found
		if n.Load == FixedCurrent {
			watts = amps
		}
		most = math.Max(most, watts)
		return watts, nil
	}
	const steps = 40
	above, low := crest, 0.0
	if n.Load == FixedCurrent {
		low = -crest
	}
	for i := 1; i < steps; i++ {
		e := crest - (crest-low)*float64(i)/steps
		x, err := deliver(e)
		switch {
		case ctx.Err() != nil:
			return nil, ctx.Err()
		case err != nil:
			continue
		case x < target:
			above = e
			continue
		}
		below := e
		for j := 0; j < 30; j++ {
			if x, err = deliver((above + below) / 2); err != nil {
				return nil, cause
			}
			if x < target {
				above = (above + below) / 2
			} else {
				below = (above + below) / 2
			}
		}
		parameters := make([]float64, len(s.plant.c.Controls))
		for k := range parameters {
			parameters[k] = (above + below) / 2
		}
		s.solver.Continue(orbit, parameters)
		if r, err := s.run(ctx, t, o.Order); err == nil || ctx.Err() != nil {
			return r, err
		}
		return nil, cause
	}
	if most < 1e-6*n.PowerW && n.Load != FixedCurrent {
		return nil, condition(WeakSupply, "FiringDeg", "fire earlier", "at a firing angle of %.4g degrees the rectifier can deliver no power to its load", n.FiringDeg)
	}
	if n.Load != FixedCurrent {
		return nil, &ConditionError{
			Condition: WeakSupply, Field: "PowerW", AvailableW: most,
			Reason: "at this firing angle and reactance the rectifier can deliver " + power(most) + " at most, not " + power(n.PowerW),
			Remedy: "lower the power, the firing angle or the reactance",
		}
	}
	return nil, cause
}
