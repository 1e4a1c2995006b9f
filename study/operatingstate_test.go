package study

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
	"slices"
	"strings"
	"testing"

	"quietbus/testdata"
)

func demoStudy(t testing.TB) *Study {
	t.Helper()
	s, err := Parse(testdata.Demo)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func prepared(t testing.TB, s *Study) *Prepared {
	t.Helper()
	p, err := Prepare(s)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// A state equals a study in which the same changes were made by hand.
func TestStateEqualsEditedStudy(t *testing.T) {
	s := demoStudy(t)
	s.Supplies[0].FaultMinMVA = 120
	s.OperatingStates = []OperatingState{{Named: Named{"Night"}, Out: []string{"C2", "Compressor 2", "Pumps"}, FaultLevel: "min", LoadPercent: 40,
		Loads: []LoadShare{{"Fast chargers", 150}, {"Workshop", 0}}}}
	p := prepared(t, s)
	edited := demoStudy(t)
	edited.Supplies[0].FaultMVA = 120
	for _, name := range []string{"C2", "Compressor 2", "Pumps", "Workshop"} {
		for i := range edited.Measures { // nothing may refer to what goes
			m := &edited.Measures[i]
			m.Senses = slices.DeleteFunc(m.Senses, func(n string) bool { return n == name })
		}
		if err := edited.Remove(name); err != nil {
			t.Fatal(err)
		}
	}
	for i := range edited.Loads {
		edited.Loads[i].KW *= 0.4
		edited.Loads[i].Kvar *= 0.4
	}
	for i := range edited.Motors {
		m := &edited.Motors[i]
		m.KW, m.Kvar, m.RatedKVA = m.KW*0.4, m.Kvar*0.4, m.RatedKVA*0.4
	}
	for i := range edited.NonlinearLoads {
		l := &edited.NonlinearLoads[i]
		if l.Name == "Fast chargers" {
			l.KW *= 1.5
		} else {
			l.KW *= 0.4
		}
	}
	edited.Assessments[0].IscKA = 180 / math.Sqrt(3) / 11 // limits rest on the stated level
	for _, on := range [][]string{nil, {"Filter 5", "Active filter"}, {"Detune C1", "Reactor K1", "Recorder filter"}} {
		got, err := p.EvaluateIn(context.Background(), on, "Night")
		if err != nil {
			t.Fatal(err)
		}
		want, err := prepared(t, edited).Evaluate(context.Background(), on)
		if err != nil {
			t.Fatal(err)
		}
		for i := range want.Buses {
			for ph := range want.Buses[i].Phase {
				for h, v := range want.Buses[i].Phase[ph] {
					if g := got.Buses[i].Phase[ph][h]; cmplx.Abs(g-v) > 1e-9*want.Buses[i].NominalV {
						t.Fatalf("%s, order %d: %v in the state, %v edited", want.Buses[i].Name, h, g, v)
					}
				}
			}
		}
		for i := range want.Points {
			for k, r := range want.Points[i].Rows {
				if g := got.Points[i].Rows[k]; math.Abs(g.Share-r.Share) > 1e-9 {
					t.Errorf("%v, %s: share %v in the state, %v edited", on, RowName(r), g.Share, r.Share)
				}
			}
		}
	}
}

// The study as stated is the normal state; its file is never changed by one.
func TestNormalState(t *testing.T) {
	s := demoStudy(t)
	if got := s.States(); !slices.Equal(got, []string{"normal"}) {
		t.Errorf("a study without states has %v", got)
	}
	s.OperatingStates = []OperatingState{{Named: Named{"Weekend"}, LoadPercent: 20}, {Named: Named{"Normal"}, Out: []string{"C2"}}}
	if got := s.States(); !slices.Equal(got, []string{"Normal", "Weekend"}) {
		t.Errorf("the normal state comes first: %v", got)
	}
	before, err := s.Bytes()
	if err != nil {
		t.Fatal(err)
	}
	p := prepared(t, s)
	all, err := p.EvaluateAll(context.Background(), []string{"Detune C1"})
	if err != nil {
		t.Fatal(err)
	}
	if all[0].Element("C2") != nil || all[1].Element("C2") == nil {
		t.Error("C2 is out in the normal state alone")
	}
	o, err := p.Evaluate(context.Background(), nil)
	if err != nil || o.State != "Normal" || o.Element("C2") != nil {
		t.Errorf("Evaluate is the normal state: %v, %v", o.State, err)
	}
	if after, _ := s.Bytes(); string(after) != string(before) {
		t.Error("evaluating states changed the study")
	}
}

// The verdict is that of the worst state and names it.
func TestVerdictNamesWorstState(t *testing.T) {
	s := demoStudy(t)
	s.OperatingStates = []OperatingState{{Named: Named{"Chargers full"}, Loads: []LoadShare{{"Fast chargers", 200}}}, {Named: Named{"Night"}, LoadPercent: 30}}
	p := prepared(t, s)
	all, err := p.EvaluateAll(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	for i, v := range VerdictOver(nil, all) {
		worst, state := 0.0, ""
		for _, o := range all {
			if w := o.Points[i].Worst(); w.Share > worst {
				worst, state = w.Share, o.State
			}
		}
		if v.Worst.Share != worst || v.Operating != state || !strings.Contains(v.Text, "worst of 3 operating states: "+state) {
			t.Errorf("%q; the worst is %g in %s", v.Text, worst, state)
		}
	}
	if MeetsOver(all) {
		t.Error("the demo without measures is over")
	}
}

// A bus without voltage in one state decides nothing there, but a site that is
// never assessed is never met.
func TestDeadPoint(t *testing.T) {
	s := demoStudy(t)
	s.OperatingStates = []OperatingState{{Named: Named{"T3 out"}, Out: []string{"T3"}}}
	all, err := prepared(t, s).EvaluateAll(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	const services = 2
	if all[1].Points[services].State() != NotAssessed {
		t.Fatal("the services board has no voltage without T3")
	}
	if w := WorstOver(all, services); w != 0 {
		t.Errorf("state %d decides at a board that is dead in it", w)
	}
	if MeetsOver(all[1:]) || MeetsOver(nil) {
		t.Error("what is never assessed counts as met")
	}
}

// A branch out of service carries nothing; its current meets every limit.
func TestAssessedBranchOut(t *testing.T) {
	s := demoStudy(t)
	s.Supplies = append(s.Supplies, Supply{Named: Named{"Second"}, Bus: "MV board", FaultMVA: 90, XOverR: 6})
	s.OperatingStates = []OperatingState{{Named: Named{"One feeder"}, Out: []string{"Grid"}}}
	o, err := prepared(t, s).EvaluateIn(context.Background(), nil, "One feeder")
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range o.Points[0].Rows {
		if r.Quantity == "current" && r.Value != 0 {
			t.Errorf("%s %g %% through a supply that is out", RowName(r), r.Value)
		}
	}
}

func TestBadStates(t *testing.T) {
	for name, x := range map[string]struct {
		change func(*Study)
		field  string
		word   string
	}{
		"unknown item":   {func(s *Study) { s.OperatingStates[0].Out = []string{"X9"} }, "out", `no item "X9"`},
		"a bus":          {func(s *Study) { s.OperatingStates[0].Out = []string{"PCC"} }, "out", "is a bus"},
		"no supply left": {func(s *Study) { s.OperatingStates[0].Out = []string{"Grid"} }, "out", "takes every supply out"},
		"not stated":     {func(s *Study) { s.OperatingStates[0].FaultLevel = "min" }, "faultLevel", "Grid does not state"},
		"word":           {func(s *Study) { s.OperatingStates[0].FaultLevel = "weak" }, "faultLevel", "none of its words"},
		"load too high":  {func(s *Study) { s.OperatingStates[0].LoadPercent = 3000 }, "loadPercent", "out of range"},
		"load twice":     {func(s *Study) { s.OperatingStates[0].Loads = []LoadShare{{"Fans", 10}, {"Fans", 20}} }, "loads", "stands twice"},
		"not a load":     {func(s *Study) { s.OperatingStates[0].Loads = []LoadShare{{"T1", 10}} }, "loads", "is a transformer"},
		"two normals": {func(s *Study) {
			s.OperatingStates[0].Name = "Normal"
			s.OperatingStates = append(s.OperatingStates, OperatingState{Named: Named{"normal"}})
		}, "name", "second state"},
		"min above": {func(s *Study) { s.Supplies[0].FaultMinMVA = 500 }, "faultMinMVA", "above the fault level"},
		"max below": {func(s *Study) { s.Supplies[0].FaultMaxMVA = 5 }, "faultMaxMVA", "below the fault level"},
		"generator alone": {func(s *Study) {
			s.Generators = []Generator{{Named: Named{"G"}, Bus: "Services", RatedKVA: 200, KW: 50, Subtransient: 12}}
			s.OperatingStates[0].Out = []string{"T3"}
		}, "out", "generator G alone"},
	} {
		s := demoStudy(t)
		s.OperatingStates = []OperatingState{{Named: Named{"S"}}}
		x.change(s)
		_, err := Prepare(s)
		var f *FieldError
		if !errors.As(err, &f) || f.Field != x.field || !strings.Contains(f.Problem, x.word) || f.Remedy == "" {
			t.Errorf("%s: %v", name, err)
		}
	}
	p := prepared(t, demoStudy(t))
	if _, err := p.EvaluateIn(context.Background(), nil, "Moonlight"); err == nil || !strings.Contains(err.Error(), "Moonlight") {
		t.Errorf("a state that is not there: %v", err)
	}
}

// A renamed load is followed into the rows of a state.
func TestRenameFollowsIntoStates(t *testing.T) {
	s := demoStudy(t)
	s.OperatingStates = []OperatingState{{Named: Named{"S"}, Out: []string{"C1"}, Loads: []LoadShare{{"Fans", 10}}}}
	for old, next := range map[string]string{"Fans": "Ventilators", "C1": "Old bank"} {
		if err := s.Rename(old, next); err != nil {
			t.Fatal(err)
		}
	}
	if x := s.OperatingStates[0]; x.Loads[0].Item != "Ventilators" || x.Out[0] != "Old bank" {
		t.Errorf("left behind: %+v", x)
	}
	if err := s.Remove("Ventilators"); err == nil {
		t.Error("a load that a state names can be removed")
	}
}
