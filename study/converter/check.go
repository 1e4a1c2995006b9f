package converter

import (
	"math"
	"strings"
)

// limits beyond which a value is refused as a slip rather than computed.
const (
	stiffest    = 5e-5 // reactance before a capacitor over the load's impedance
	longestHold = 100  // seconds of load stored in the capacitor
	slightest   = 1e-9 // load over the fault power
)

// check refuses nameplates that cannot be computed.
func (n Nameplate) check(t Terminal) error {
	known := false
	for _, k := range Kinds() {
		known = known || k == n.Kind
	}
	if !known {
		return condition(BadValue, "Kind", "choose one of the kinds", "there is no converter kind %q", n.Kind)
	}
	for _, f := range []struct {
		name  string
		value float64
	}{
		{"VoltageV", n.VoltageV}, {"PowerW", n.PowerW}, {"FiringDeg", n.FiringDeg}, {"ReactorH", n.ReactorH}, {"ReactorOhm", n.ReactorOhm},
		{"ChokeH", n.ChokeH}, {"ChokeOhm", n.ChokeOhm}, {"CapacitorF", n.CapacitorF}, {"DropV", n.DropV}, {"LoadOhm", n.LoadOhm},
		{"DirectA", n.DirectA}, {"ArmatureOhm", n.ArmatureOhm}, {"ArmatureH", n.ArmatureH},
	} {
		if math.IsNaN(f.value) || math.IsInf(f.value, 0) || f.value < 0 {
			return condition(BadValue, f.name, "use zero or a positive value", "the value is %g", f.value)
		}
	}
	if n.VoltageV == 0 {
		return condition(BadValue, "VoltageV", "state the rated line-to-line voltage", "no rated voltage")
	}
	if n.PowerW == 0 && !(n.Load == FixedCurrent && n.DirectA > 0) && !(n.Load == Resistive && n.LoadOhm > 0) {
		return condition(NoLoad, "PowerW", "state the power drawn, or leave the converter out", "without load it draws no current but a trace")
	}
	if err := n.checkConnection(); err != nil {
		return err
	}
	switch n.Kind {
	case KindActiveFrontEnd:
		return nil
	case KindControlledReactor, KindControlledResistor:
		return n.checkController()
	}
	return n.checkRectifier(t)
}

func (n Nameplate) checkConnection() error {
	allowed := []Connection{ABC}
	switch {
	case n.Kind == KindControlledReactor, n.Kind == KindControlledResistor:
		allowed = []Connection{ABC, ABCN, ABCStar, PhaseA, PhaseB, PhaseC, PhaseAB, PhaseBC, PhaseCA}
	case !n.Kind.threePhase():
		allowed = []Connection{ABCN, PhaseA, PhaseB, PhaseC, PhaseAB, PhaseBC, PhaseCA}
	}
	var words []string
	for _, c := range allowed {
		if c == n.Connection {
			return nil
		}
		words = append(words, string(c))
	}
	return condition(BadValue, "Connection", "use one of "+strings.Join(words, ", "), "a %s cannot stand on %q", n.Kind, n.Connection)
}

func (n Nameplate) checkController() error {
	low, high := 0.0, 175.0
	if n.Kind == KindControlledReactor {
		low = 90
	}
	if n.Connection == ABCStar {
		high = 149
	}
	if n.FiringDeg < low || n.FiringDeg > high {
		return condition(BadValue, "FiringDeg", "count it from the zero of the voltage across the valve", "a firing angle of %.4g degrees is outside %g to %g", n.FiringDeg, low, high)
	}
	return nil
}

func (n Nameplate) checkRectifier(t Terminal) error {
	if n.FiringDeg >= 170 {
		return condition(BadValue, "FiringDeg", "stay below 170 degrees", "a firing angle of %.4g degrees leaves no time to commutate", n.FiringDeg)
	}
	if count := n.Kind.sections(); count != len(n.Sections) {
		return condition(BadValue, "Sections", "describe every bridge, or none", "%d bridges are described of %d", len(n.Sections), count)
	}
	for i, s := range n.Sections {
		for _, v := range []float64{s.Ratio, s.LeakageH, s.LeakageOhm, s.ChokeH, s.ChokeOhm, s.Share} {
			if !(v >= 0) || math.IsInf(v, 0) {
				return condition(BadValue, "Sections", "use zero or positive values", "bridge %d has a value of %g", i+1, v)
			}
		}
		if n.SeparateLink && s.Share == 0 {
			return condition(NoLoad, "Sections", "give every bridge a share", "bridge %d carries no load", i+1)
		}
	}
	if s := n.Smoothing; s != ByCapacitor && s != ByChoke {
		return condition(BadValue, "Smoothing", "use capacitor or choke", "there is no smoothing %q", s)
	}
	switch n.Load {
	case ConstantPower, TightPower, Resistive, Motor, FixedCurrent:
	default:
		return condition(BadValue, "Load", "use power, tight-power, resistance, motor or current", "there is no load kind %q", n.Load)
	}
	if n.Load == Motor && n.ArmatureH == 0 {
		return condition(BadValue, "ArmatureH", "state the armature inductance", "a motor without inductance would let its current jump")
	}
	w := t.omega()
	watts := n.PowerW
	if watts == 0 {
		watts = n.idealDirect() * math.Max(n.DirectA, n.idealDirect()/math.Max(n.LoadOhm, 1e-12))
	}
	base := n.VoltageV * n.VoltageV / watts
	if n.Smoothing == ByChoke {
		if n.Kind == KindHalfWave && n.Load != Resistive {
			return condition(BadValue, "Load", "use a resistance or smooth by a capacitor", "a half-wave rectifier without capacitor is computed with a resistive load only")
		}
		if n.Kind != KindHalfWave && n.ChokeH == 0 && n.Load != Resistive && n.ArmatureH == 0 && !n.ownChokes() {
			return condition(BadValue, "ChokeH", "state the smoothing inductance", "nothing smooths the direct current")
		}
		if len(n.Sections) > 0 && !n.SeparateLink && !n.ownChokes() {
			return condition(BadValue, "Sections", "give each bridge its interphase reactor or choke", "bridges in parallel without a capacitor need an inductance each, or one takes all the current")
		}
		return nil
	}
	if n.CapacitorF == 0 {
		return condition(NoCapacitor, "CapacitorF", "state the capacitance, or smooth by a choke", "the direct side has nothing to hold its voltage, so the load could not be fed between two crests")
	}
	if hold := 0.5 * n.CapacitorF * 2 * n.volts() * n.volts() / watts; hold > longestHold {
		return condition(HugeCapacitor, "CapacitorF", "check the unit (uF typed as F?)", "the capacitor would store %.3g seconds of the load", hold)
	}
	line := w * (t.SourceL + n.ReactorH)
	least := math.Inf(1)
	if len(n.Sections) == 0 {
		least = 0
	}
	for _, s := range n.Sections {
		least = math.Min(least, w*s.LeakageH)
	}
	if x := line + least; x < stiffest*base {
		return condition(StiffSupply, "ReactorH", "state the line reactor or the supply's impedance",
			"only %.2g %% of reactance stands before the capacitor, so nothing but the wiring limits its charging current", 100*x/base)
	}
	return nil
}

func (n Nameplate) ownChokes() bool {
	for _, s := range n.Sections {
		if s.ChokeH == 0 {
			return false
		}
	}
	return len(n.Sections) > 0
}

// Kinds returns every kind in the order of a list on screen.
func Kinds() []Kind {
	return []Kind{
		KindDiodeBridge, KindThyristorBridge, KindTwelvePulse, KindEighteenPulse, KindTwentyFourPulse,
		KindSinglePhaseBridge, KindSinglePhaseFired, KindHalfWave, KindControlledReactor, KindControlledResistor, KindActiveFrontEnd,
	}
}
