package study

import (
	"reflect"
	"strings"
	"testing"
)

func TestRenameFollowsReferences(t *testing.T) {
	s := small()
	s.Drawing = map[string]Point{"LV": {X: 3, Y: 4}}
	for _, step := range [][2]string{{"LV", "Main board"}, {"C1", "Bank"}, {"SUP", "Grid"}} {
		if err := s.Rename(step[0], step[1]); err != nil {
			t.Fatal(err)
		}
	}
	if s.Banks[0].Bus != "Main board" || s.Measures[0].Replaces[0] != "Bank" || s.Measures[1].Target != "Bank" || s.Assessments[0].Current != "Grid" || s.Drawing["Main board"].X != 3 {
		t.Errorf("references were left behind: %+v", s)
	}
	if problems := s.Validate(); len(problems) > 0 {
		t.Error(FieldErrors(problems))
	}
	if err := s.Rename("Main board", "HV"); err == nil {
		t.Error("renamed onto another bus")
	}
}

func TestRemoveRefusesWhatIsUsed(t *testing.T) {
	s := small()
	if err := s.Remove("C1"); err == nil || !strings.Contains(err.Error(), "F5 and DET") {
		t.Errorf("%v", err)
	}
	if err := s.Remove("LED"); err != nil || len(s.NonlinearLoads) != 1 {
		t.Errorf("%v", err)
	}
}

func TestCloneSharesNothing(t *testing.T) {
	s := small()
	deg := 30.0
	s.Supplies[0].Background = []BackgroundLine{{Order: 5, Percent: 1, AngleDeg: &deg}}
	c := s.Clone()
	if !reflect.DeepEqual(s, c) {
		t.Fatal("the clone differs")
	}
	c.Measures[0].Replaces[0] = "x"
	*c.Supplies[0].Background[0].AngleDeg = 1
	SetProvenance(&c.Banks[0], "kvar", Provenance{Origin: Given})
	if s.Measures[0].Replaces[0] != "C1" || deg != 30 || s.Banks[0].Provenance != nil {
		t.Error("the clone shares with the original")
	}
}

// Every field of every kind takes back the text that it gives out.
func TestFieldsRoundTrip(t *testing.T) {
	s := demo(t)
	n := 0
	for _, k := range Kinds() {
		for _, item := range s.Items(k.Kind) {
			copy := CloneItem(item)
			for _, f := range Describe(k.Kind) {
				if err := SetField(copy, f.Key, GetField(item, f.Key)); err != nil && !f.Need {
					t.Errorf("%s, %s: %v", NameOf(item), f.Key, err)
				}
				n++
			}
			if !reflect.DeepEqual(item, copy) {
				t.Errorf("%s does not come back from its own texts", NameOf(item))
			}
		}
	}
	if n < 200 {
		t.Errorf("only %d fields seen", n)
	}
}

func TestSetField(t *testing.T) {
	l := NewItem(KindNonlinearLoad).(*NonlinearLoad)
	l.Name = "D"
	for _, c := range []struct{ key, text, want string }{
		{"kW", "12,5", ""},
		{"kW", "1.234,5", "not a number"},
		{"kW", "-3", "out of range"},
		{"kW", "many", "not a number"},
		{"displacementFactor", "1.2", "out of range"},
		{"connection", "abcd", "none of its words"},
		{"connection", "ab", ""},
		{"lines", "5\t20\t180\n7\t14,3\t0\n", ""},
		{"lines", "5;20\n7;x", "row 2"},
		{"lines", "5 20 1 7", "4 columns"},
		{"colour", "red", "no such field"},
	} {
		err := SetField(l, c.key, c.text)
		switch {
		case c.want == "" && err != nil:
			t.Errorf("%s %q: %v", c.key, c.text, err)
		case c.want != "" && (err == nil || !strings.Contains(err.Error(), c.want)):
			t.Errorf("%s %q: %v, want %q", c.key, c.text, err, c.want)
		}
	}
	if l.KW != 12.5 || l.Connection != PhaseAB || len(l.Lines) != 2 || l.Lines[1].Percent != 14.3 {
		t.Errorf("%+v", l)
	}
}

// A new item of any kind is marked as assumed and valid once named and placed.
func TestNewItems(t *testing.T) {
	for _, k := range Kinds() {
		item := NewItem(k.Kind)
		if item == nil || KindOf(item) != k.Kind {
			t.Errorf("%s: %v", k.Kind, item)
			continue
		}
		for key, p := range ProvenanceOf(item) {
			if p.Origin != Assumed || FieldOf(k.Kind, key) == nil {
				t.Errorf("%s, %s: %v", k.Kind, key, p)
			}
		}
	}
}

func TestSwitched(t *testing.T) {
	s := small()
	on, taken := s.Switched([]string{"DET"}, "F5")
	if len(on) != 1 || on[0] != "F5" || len(taken) != 1 {
		t.Errorf("%v %v", on, taken)
	}
	if on, _ = s.Switched(on, "F5"); len(on) != 0 {
		t.Errorf("%v", on)
	}
}
