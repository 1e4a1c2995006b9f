package converter

import (
	"fmt"
	"math"
)

// Inductance returns the inductance (H) of a reactor of so many per cent on a
// rating: percent/100 V^2 / (P 2 pi f). A choke's per cent is counted on the
// same base, so that a choke in the direct current of p per cent has the
// inductance of an ac reactor of p per cent (common practice, no source).
func Inductance(percent, voltageV, powerW, hz float64) float64 {
	return percent / 100 * voltageV * voltageV / powerW / (2 * math.Pi * hz)
}

// Percent is the reverse of Inductance.
func Percent(henry, voltageV, powerW, hz float64) float64 {
	return 100 * henry * 2 * math.Pi * hz * powerW / (voltageV * voltageV)
}

// Assumed is one value of a nameplate that was not given.
type Assumed struct {
	Field string // of Nameplate
	Text  string // value with its unit, and why
}

// typical values; common practice, no source, unless a line says otherwise.
const (
	typicalHold      = 0.011 // s of load stored in a three-phase link: 75 uF/kW at 540 V
	typicalHoldOne   = 0.04  // s, single-phase: the gap between crests is longer
	typicalLeakage   = 5     // per cent of each winding's own rating
	typicalSmoothing = 20    // per cent, choke of a thyristor drive
	typicalX         = 3     // per cent, line reactor of a drive
	typicalXOverR    = 20    // of reactors
	typicalDrop      = 0.9   // V a valve, silicon
	typicalArmature  = 3     // per cent of the rated voltage dropped in an armature
	typicalOneOhm    = 2     // per cent of the rating: inrush limiter, filter and leads of a single-phase supply
)

// Suggest fills in what a nameplate leaves open with typical values and lists
// each, so that a sheet can show them as assumed. Kind, VoltageV and PowerW must
// be there. A line reactor is not suggested where a choke is given or where
// none is common.
func Suggest(n Nameplate, hz float64) (Nameplate, []Assumed) {
	given := n
	n = n.withDefaults()
	n.Sections = given.Sections
	if n.VoltageV <= 0 || n.PowerW <= 0 || hz <= 0 {
		return n, nil
	}
	var list []Assumed
	note := func(field, text string, args ...any) {
		list = append(list, Assumed{field, fmt.Sprintf(text, args...)})
	}
	henry := func(percent float64) float64 { return Inductance(percent, n.VoltageV, n.PowerW, hz) }
	ohm := func(percent float64) float64 { return percent / 100 * n.VoltageV * n.VoltageV / n.PowerW }
	switch n.Kind {
	case KindControlledReactor, KindControlledResistor:
		return n, list
	case KindActiveFrontEnd:
		if n.ReactorH == 0 {
			n.ReactorH, n.ReactorOhm = henry(typicalX), ohm(typicalX)/typicalXOverR
			note("ReactorH", "%.3g mH, 3 %% of the rating: line side of the filter", 1e3*n.ReactorH)
		}
		f := n.Front.withDefaults(n, 2*math.Pi*hz)
		if n.Front != f {
			note("Front", "carrier %.0f Hz, delay %.0f us, bandwidth %.0f Hz, bridge inductance %.3g mH, direct voltage %.0f V", f.SwitchingHz, 1e6*f.DelayS, f.BandwidthHz, 1e3*f.InductorH, f.DirectV)
			n.Front = f
		}
		return n, list
	}
	if given.DropV == 0 {
		n.DropV = typicalDrop
		note("DropV", "%.2g V a valve, silicon", n.DropV)
	}
	single := !n.Kind.threePhase()
	fired := n.Kind == KindThyristorBridge || n.Kind == KindSinglePhaseFired
	if given.Smoothing == "" && given.CapacitorF == 0 && fired {
		n.Smoothing = ByChoke
	}
	if count := n.Kind.sections(); count > 0 && len(given.Sections) == 0 {
		for _, shift := range n.Kind.Shifts() {
			n.Sections = append(n.Sections, Section{ShiftDeg: shift, Ratio: 1, Share: 1, LeakageH: henry(typicalLeakage * float64(count)), LeakageOhm: ohm(typicalLeakage*float64(count)) / typicalXOverR})
		}
		note("Sections", "%d windings as designed, leakage %d %% of each one's own rating, equal shares", count, typicalLeakage)
	}
	switch {
	case n.Smoothing == ByChoke && n.ChokeH == 0 && n.Load != Resistive:
		n.ChokeH, n.ChokeOhm = henry(typicalSmoothing), ohm(typicalSmoothing)/typicalXOverR/5
		note("ChokeH", "%.3g mH, %d %% of the rating: smoothing choke", 1e3*n.ChokeH, typicalSmoothing)
	case n.Smoothing == ByCapacitor && n.CapacitorF == 0:
		hold, crest := typicalHold, n.idealDirect()
		if single {
			hold, crest = typicalHoldOne, math.Sqrt2*n.volts()
		}
		n.CapacitorF = 2 * hold * n.PowerW / (crest * crest)
		if n.Connection == ABCN {
			n.CapacitorF /= 3
		}
		note("CapacitorF", "%.3g uF, %.0f ms of the load", 1e6*n.CapacitorF, 1e3*hold)
	}
	if n.ReactorH == 0 && n.ChokeH == 0 && n.Kind == KindDiodeBridge {
		n.ReactorH, n.ReactorOhm = henry(typicalX), ohm(typicalX)/typicalXOverR
		note("ReactorH", "%.3g mH, %d %% of the rating: line reactor; set the supply's own reactance and a choke of 0 for none", 1e3*n.ReactorH, typicalX)
	}
	if single && n.ReactorOhm == 0 && !fired {
		n.ReactorOhm = typicalOneOhm / 100.0 * n.volts() * n.volts() / n.PowerW
		note("ReactorOhm", "%.3g ohm, %d %% of the rating: inrush limiter, filter and leads", n.ReactorOhm, typicalOneOhm)
	}
	if n.Load == Motor && n.ArmatureH == 0 {
		base := n.idealDirect() * n.idealDirect() / n.PowerW
		n.ArmatureH = 0.2 * base / (2 * math.Pi * hz)
		if n.ArmatureOhm == 0 {
			n.ArmatureOhm = typicalArmature / 100.0 * base
		}
		note("ArmatureH", "%.3g mH and %.3g ohm: armature of a direct-current motor", 1e3*n.ArmatureH, n.ArmatureOhm)
	}
	return n, list
}
