package study

import (
	"context"
	"math"
	"math/cmplx"
	"testing"

	"quietbus/study/phasor"
)

// small is an 11 kV supply, a 1000 kVA transformer, a six-pulse drive and a
// bank on its low-voltage board.
func small() *Study {
	return &Study{Format: 1, Title: Title{Study: "small"}, FrequencyHz: 50,
		Supplies:     []Supply{{Named: Named{"SUP"}, Bus: "HV", FaultMVA: 500, XOverR: 10}},
		Buses:        []Bus{{Named: Named{"HV"}, NominalKV: 11}, {Named: Named{"LV"}, NominalKV: 0.4}},
		Transformers: []Transformer{{Named: Named{"T1"}, HVBus: "HV", LVBus: "LV", RatedKVA: 1000, HVKV: 11, LVKV: 0.4, ImpedancePercent: 6, XOverR: 6, VectorGroup: "Dyn11"}},
		Loads: []Load{{Named: Named{"L1"}, Bus: "LV", KW: 100, Kvar: 40},
			{Named: Named{"S1"}, Bus: "LV", KW: 3, Connection: PhaseB}},
		Motors:         []Motor{{Named: Named{"M1"}, Bus: "LV", RatedKVA: 120, KW: 90, Kvar: 50}},
		NonlinearLoads: []NonlinearLoad{{Named: Named{"D1"}, Bus: "LV", KW: 200, Displacement: 0.95, Spectrum: "six-pulse-3pct"}, {Named: Named{"LED"}, Bus: "LV", Connection: PhaseA, KW: 10, Spectrum: "led-lighting"}},
		Banks:          []Bank{{Named: Named{"C1"}, Bus: "LV", Kvar: 300}},
		Measures: []Measure{{Named: Named{"F5"}, Kind: SingleTuned, Bus: "LV", Kvar: 200, Order: 4.7, Q: 30, Replaces: []string{"C1"}},
			{Named: Named{"DET"}, Kind: DetuneBank, Target: "C1", Percent: 7},
			{Named: Named{"AF"}, Kind: ActiveFilter, Bus: "LV", RatedA: 100},
			{Named: Named{"LP"}, Kind: LowPassRC, Target: "S1", ROhm: 1, CUF: 100},
			{Named: Named{"LR"}, Kind: LineReactor, Target: "D1", Percent: 2}},
		Assessments: []Assessment{{Named: Named{"PCC"}, Bus: "HV", Set: "ieee519-2022", Current: "SUP", DemandA: 40}, {Named: Named{"Board"}, Bus: "LV", Set: "iec61000-2-4-class2"}},
	}
}

func TestEvaluateFundamental(t *testing.T) {
	o, err := Evaluate(context.Background(), small(), nil)
	if err != nil {
		t.Fatal(err)
	}
	lv := o.Bus("LV")
	if got := cmplx.Abs(lv.Seq[phasor.Positive][1]) * math.Sqrt(3); got < 380 || got > 405 {
		t.Errorf("LV voltage %.1f V", got)
	}
	// Dyn11: the low-voltage side leads by 30 degrees (IEC 60076-1, common practice).
	if deg := cmplx.Phase(lv.Seq[phasor.Positive][1]) * 180 / math.Pi; deg < 25 || deg > 30 {
		t.Errorf("LV angle %.2f deg, want a little under +30", deg)
	}
	for _, s := range Verdict(nil, o) {
		t.Log(s.Text)
	}
	t.Logf("THD LV %.3f HV %.4f check %+v", lv.THD(), o.Bus("HV").THD(), o.Check)
	for _, on := range [][]string{{"F5"}, {"DET"}, {"AF"}, {"LP"}, {"LR"}, {"F5", "AF", "LP", "LR"}} {
		after, err := Evaluate(context.Background(), small(), on)
		if err != nil {
			t.Fatal(on, err)
		}
		t.Log(on, after.Bus("LV").THD(), after.Check)
		for _, m := range after.Measures {
			t.Logf("%+v %+v", m.Duty, m.Notes)
		}
	}
	scan, err := (&Prepared{study: small()}).Impedance(context.Background(), nil, "LV", phasor.Positive, 1, 25)
	if err != nil {
		t.Fatal(err)
	}
	t.Log(scan.Peaks, len(scan.Orders))
}

func BenchmarkSmall(b *testing.B) {
	p, _ := Prepare(small())
	for b.Loop() {
		if _, err := p.Evaluate(context.Background(), []string{"F5"}); err != nil {
			b.Fatal(err)
		}
	}
}
