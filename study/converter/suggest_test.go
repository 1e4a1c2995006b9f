package converter

import (
	"context"
	"math"
	"testing"
)

// Every kind can be computed from type, voltage and power alone.
func TestSuggestedNameplatesSolve(t *testing.T) {
	for _, kind := range Kinds() {
		for _, load := range []LoadKind{"", Motor, Resistive, FixedCurrent} {
			n := Nameplate{Kind: kind, VoltageV: 480, PowerW: 30e3, Load: load}
			if !kind.threePhase() {
				n.PowerW = 2e3
			}
			if kind == KindControlledReactor {
				n.FiringDeg = 110
			}
			if kind == KindThyristorBridge {
				n.FiringDeg, n.PowerW = 20, 25e3
			}
			got, assumed := Suggest(n, 60)
			if kind != KindControlledReactor && kind != KindControlledResistor && len(assumed) == 0 {
				t.Errorf("%s: nothing assumed", kind)
			}
			for _, a := range assumed {
				if a.Field == "" || a.Text == "" {
					t.Errorf("%s: %+v", kind, a)
				}
			}
			r, err := Solve(context.Background(), got, Balanced(480, 60, 0.002, Inductance(2, 480, 30e3, 60)), Options{})
			if err != nil {
				t.Errorf("%s, load %q: %v", kind, load, err)
				continue
			}
			if absolute(r.Current[0][1]) == 0 {
				t.Errorf("%s draws nothing", kind)
			}
			if again, more := Suggest(got, 60); kind != KindActiveFrontEnd && len(more) > 0 {
				t.Errorf("%s: assumes again %v for %+v", kind, more, again)
			}
		}
	}
}

// 3 % of 100 kW at 400 V, 50 Hz is 0.1528 mH (mark: derived).
func TestPercent(t *testing.T) {
	l := Inductance(3, 400, 100e3, 50)
	if math.Abs(l-0.152789e-3) > 1e-9 || math.Abs(Percent(l, 400, 100e3, 50)-3) > 1e-12 {
		t.Errorf("%g H, %g %%", l, Percent(l, 400, 100e3, 50))
	}
}
