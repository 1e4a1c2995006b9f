package study

import (
	"context"
	"math"
	"strings"
	"testing"

	"quietbus/study/limits"
)

// applianceStudy is an invented site: one transformer and one load on 400 V.
func applianceStudy(l NonlinearLoad, a Assessment) *Study {
	l.Name, l.Bus = "Appliance", "Board"
	a.Name, a.Bus = "Check", "Board"
	return &Study{Format: 1, Title: Title{Study: "Appliance (invented)"}, FrequencyHz: 50,
		Supplies:       []Supply{{Named: Named{"Grid"}, Bus: "Intake", FaultMVA: 200, XOverR: 10, ZeroSequenceRatio: 1}},
		Buses:          []Bus{{Named: Named{"Intake"}, NominalKV: 11}, {Named: Named{"Board"}, NominalKV: 0.4}},
		Transformers:   []Transformer{{Named: Named{"T1"}, HVBus: "Intake", LVBus: "Board", RatedKVA: 630, HVKV: 11, LVKV: 0.4, ImpedancePercent: 4, XOverR: 6, VectorGroup: "Dyn11"}},
		NonlinearLoads: []NonlinearLoad{l}, Assessments: []Assessment{a}}
}

func onePoint(t *testing.T, s *Study) PointResult {
	t.Helper()
	o, err := Evaluate(context.Background(), s, nil)
	if err != nil {
		t.Fatal(err)
	}
	return o.Points[0]
}

// A single-phase appliance of 10 A whose third harmonic is 3 A stands 2.3 A of
// IEC 61000-3-2 class A over (found): 3/2.3 = 1.304 times (derived).
func TestApplianceAgainstClassA(t *testing.T) {
	load := NonlinearLoad{Connection: PhaseB, CurrentA: 10, Spectrum: Typed, Lines: []SpectrumLine{{Order: 3, Percent: 30}, {Order: 5, Percent: 10}}}
	p := onePoint(t, applianceStudy(load, Assessment{Set: "iec61000-3-2-class-a", Current: "Appliance"}))
	w := p.Worst()
	if p.State() != Fails || w.Order != 3 || w.Unit != "A" || math.Abs(w.Value-3) > 1e-9 || math.Abs(w.Share-3/2.3) > 1e-9 || w.Phase != "b" {
		t.Errorf("state %v, worst %+v", p.State(), w)
	}
	if len(p.Rows) != 39 {
		t.Errorf("%d rows, want the 39 orders from 2 to 40", len(p.Rows))
	}
	s := Verdict(nil, &Outcome{Points: []PointResult{p}})[0]
	if !strings.Contains(s.Text, "3rd harmonic current at 1.30 x its limit (3 A against 2.3 A)") {
		t.Errorf("verdict %q", s.Text)
	}
}

// A balanced 50 A drive on a 630 kVA transformer: Rsce is far above 120, and
// the rule names its own row.
func TestDriveAgainstShortCircuitRatio(t *testing.T) {
	load := NonlinearLoad{CurrentA: 50, Spectrum: Typed, Lines: []SpectrumLine{{Order: 5, Percent: 30}, {Order: 7, Percent: 12}}}
	s := applianceStudy(load, Assessment{Set: "iec61000-3-12-balanced", Current: "Appliance", DemandA: 55})
	p := onePoint(t, s)
	// driving-point impedance at 400 V: supply 0.4^2/200 = 0.8 mohm behind the
	// transformer's 4 % of 0.254 ohm, 10.16 mohm, nearly in phase (derived)
	want := 400 / math.Sqrt(3) / 0.01095 * math.Sqrt(3) * 400 / (math.Sqrt(3) * 400 * 55)
	row := p.Rows[0]
	for _, r := range p.Rows {
		if r.Order == 5 {
			row = r
		}
	}
	if math.Abs(row.Value-100*15/55.0) > 1e-6 || !strings.Contains(row.Rule, "Table 3") || !strings.Contains(row.Rule, "row 350, of Iref") || row.Limit != 40 || want < 350 {
		t.Errorf("row %+v (Rsce about %.0f)", row, want)
	}
	s.Assessments[0].DemandA = 0 // the computed current, then
	if r := onePoint(t, s).Rows[0]; !strings.Contains(r.Rule, "of Iref as computed") {
		t.Errorf("rule %q", r.Rule)
	}
	s.Assessments[0].DemandA = 90
	if p := onePoint(t, s); p.State() != NotAssessed || !strings.Contains(p.NotAssessed[0], "covers above 16 to 75 A") {
		t.Errorf("90 A: %v %v", p.State(), p.NotAssessed)
	}
}

func TestEquipmentSetNeedsItsLoad(t *testing.T) {
	load := NonlinearLoad{CurrentA: 10, Spectrum: "six-pulse-3pct"}
	for _, c := range []struct {
		a    Assessment
		want string
	}{
		{Assessment{Set: "iec61000-3-2-class-a"}, "limits a piece of equipment, and none is named"},
		{Assessment{Set: "iec61000-3-2-class-a", Current: "T1"}, "limits a piece of equipment"},
		{Assessment{Set: "ieee519-2022", Current: "Appliance"}, "Appliance is a load"},
	} {
		found := applianceStudy(load, c.a).Validate()
		if len(found) != 1 || found[0].Item != "Check" || found[0].Field != "current" || !strings.Contains(found[0].Problem, c.want) || found[0].Remedy == "" {
			t.Errorf("%+v: %v; want %q", c.a, found, c.want)
		}
	}
}

// Every published set can be chosen, and none counts a point as met without a
// row.
func TestEverySetIsReachable(t *testing.T) {
	load := NonlinearLoad{CurrentA: 10, Spectrum: "six-pulse-3pct"}
	for _, set := range limits.Sets() {
		a := Assessment{Set: set.ID, Current: "T1", DemandA: 500}
		if set.LimitsEquipment() {
			a.Current, a.DemandA = "Appliance", 0
		}
		p := onePoint(t, applianceStudy(load, a))
		if p.State() == Meets && len(p.Rows) == 0 || len(p.Rows) == 0 && len(p.NotAssessed) == 0 {
			t.Errorf("%s: %v with %d rows, %v", set.ID, p.State(), len(p.Rows), p.NotAssessed)
		}
	}
}
