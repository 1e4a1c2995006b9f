package study

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
)

func num(v float64) *float64 { return &v }

// letter is an invented letter with a gap, words, and a line that names no order.
const letter = "Order\tVoltage (%)\tCurrent (% of IL)\n" +
	"5\t3,0\t6\n7\t≤ 2.5 %\t4\n11\tsee annex\t2\n13\t\t1,5\n17-19\t1\t1\neleventh\t2\t2\nTHD\t5\t\nTDD\t\t8\n"

func TestPasteLimits(t *testing.T) {
	x, err := PasteLimits(letter)
	if err != nil {
		t.Fatal(err)
	}
	want := []LimitLine{
		{Order: 5, VoltagePercent: num(3), CurrentPercent: num(6)},
		{Order: 7, VoltagePercent: num(2.5), CurrentPercent: num(4)},
		{Order: 11, CurrentPercent: num(2), Says: "see annex"},
		{Order: 13, CurrentPercent: num(1.5)},
		{Order: 17, VoltagePercent: num(1), CurrentPercent: num(1)},
		{Order: 18, VoltagePercent: num(1), CurrentPercent: num(1)},
		{Order: 19, VoltagePercent: num(1), CurrentPercent: num(1)},
	}
	if !reflect.DeepEqual(x.Rows, want) || x.THDPercent != 5 || x.TDDPercent != 8 {
		t.Errorf("rows %+v, THD %g, TDD %g", x.Rows, x.THDPercent, x.TDDPercent)
	}
	if len(x.NotReadable) != 1 || x.NotReadable[0].Reason != `"eleventh" names no order` {
		t.Errorf("not readable: %+v", x.NotReadable)
	}
}

// The same table by other separators; every way has to give the same rows.
func TestPasteSeparators(t *testing.T) {
	for name, text := range map[string]string{
		"tab":               "5\t3,5\n7\t2\nTHD\t5",
		"tab, crlf":         "5\t3,5\r\n7\t2\r\nTHD\t5\r\n",
		"semicolon":         "5;3,5\n7;2\nTHD;5",
		"comma":             "5,3.5\n7,2\nTHD,5",
		"comma and blank":   "5, 3.5\n7, 2\nTHD, 5",
		"blanks":            "5 3,5\n7   2\nTHD 5",
		"heading":           "h;Uh in %\n5;3,5\n7;2\nTHD;5",
		"ordinals":          "5th 3.5\n7th 2\nTHD 5",
		"units":             "h=5;3,5 %\nh=7;2 %\nTHDu;5 %",
		"trailing columns":  "5\t3,5\t\n7\t2\t\nTHD\t5\t",
		"blank lines":       "\n\n5\t3,5\n\n7\t2\n\nTHD\t5\n\n",
		"non-breaking gaps": "5\u00a03,5\n7\u00a02\nTHD\u00a05",
	} {
		x, err := PasteLimits(text)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		want := []LimitLine{{Order: 5, VoltagePercent: num(3.5)}, {Order: 7, VoltagePercent: num(2)}}
		if !reflect.DeepEqual(x.Rows, want) || x.THDPercent != 5 || len(x.NotReadable) != 0 {
			t.Errorf("%s: %+v, THD %g, not readable %v", name, x.Rows, x.THDPercent, x.NotReadable)
		}
	}
}

func TestPasteColumns(t *testing.T) {
	x, err := PasteLimits("5;12\n7;8,5\n", CurrentAmpereColumn)
	if err != nil || len(x.Rows) != 2 || *x.Rows[1].CurrentA != 8.5 || x.Rows[1].VoltagePercent != nil {
		t.Errorf("%+v, %v", x, err)
	}
	x, err = PasteLimits("Harmonic;Remark;Current (A)\n5;winter;12\n", VoltageColumn)
	if err != nil || len(x.Rows) != 1 || *x.Rows[0].CurrentA != 12 || x.Rows[0].VoltagePercent != nil || x.Rows[0].Says != "" {
		t.Errorf("%+v, %v", x, err)
	}
}

// What cannot be read is kept with its reason, whatever it is.
func TestPasteKeepsWhatItCannotRead(t *testing.T) {
	for _, c := range []struct{ line, want string }{
		{"1\t3", "is no order from 2 to 100"},
		{"250\t3", "is no order from 2 to 100"},
		{"19-17\t3", "is no order from 2 to 100"},
		{"fifth\t3", "names no order"},
		{"5\t9", "order 5 stands twice"},
		{"THD\tlow", `"low" is no number`},
		{"TDD\t", "no limit of the total"},
	} {
		x, err := PasteLimits("5\t3\n" + c.line)
		if err != nil || len(x.NotReadable) != 1 || !strings.Contains(x.NotReadable[0].Reason, c.want) || len(x.Rows) != 1 {
			t.Errorf("%q: %+v, %v; want %q", c.line, x, err, c.want)
		}
	}
	for _, value := range []string{"0", "-3", "n/a", "3.000,5", "1e999", "NaN", "∞"} {
		x, err := PasteLimits("7\t2\n5\t" + value)
		if err != nil || len(x.Rows) != 2 || x.Rows[1].VoltagePercent != nil || x.Rows[1].Says != value {
			t.Errorf("%q: %+v, %v; want a row that says so", value, x, err)
		}
	}
	for _, text := range []string{"", "  \n\t\n", "\r\n"} {
		var e *FieldError
		if _, err := PasteLimits(text); !errors.As(err, &e) || e.Remedy == "" {
			t.Errorf("%q: %v", text, err)
		}
	}
	x, err := PasteLimits("Dear Sir,\nthe limits are as follows.")
	if err != nil || len(x.NotReadable) != 2 {
		t.Errorf("words alone: %+v, %v", x, err)
	}
}

func FuzzPasteLimits(f *testing.F) {
	f.Add(letter)
	f.Add("5,3,5\n7;2")
	f.Fuzz(func(t *testing.T, text string) {
		x, err := PasteLimits(text)
		if (x == nil) == (err == nil) {
			t.Fatalf("%v with %v", x, err)
		}
		if x == nil {
			return
		}
		x.Name = "Letter"
		for _, e := range x.Validate() {
			if e.Field != "rows" || !strings.Contains(e.Problem, "no limit in it") {
				t.Fatalf("a pasted table does not validate: %v", e)
			}
		}
	})
}

// letterStudy assesses an invented site against the letter.
func letterStudy(t *testing.T) *Study {
	x, err := PasteLimits(letter)
	if err != nil {
		t.Fatal(err)
	}
	x.Name, x.Document, x.Date, x.Remark = "Letter of the network operator", "Invented letter 17", "3 March 2026", "For the new intake."
	load := NonlinearLoad{CurrentA: 40, Spectrum: Typed, Lines: []SpectrumLine{{Order: 5, Percent: 20}, {Order: 7, Percent: 10}, {Order: 11, Percent: 5}}}
	s := applianceStudy(load, Assessment{Set: x.Name, Current: "T1", DemandA: 60})
	s.LimitSets = []LimitSet{*x}
	return s
}

func TestOwnLimitsAreAssessed(t *testing.T) {
	p := onePoint(t, letterStudy(t))
	byName := map[string]int{}
	for i, r := range p.Rows {
		byName[RowName(r)] = i
		if r.Mark != "given" || !strings.HasPrefix(r.Rule, "Letter of the network operator (Invented letter 17, 3 March 2026), ") {
			t.Errorf("row %+v", r)
		}
	}
	// voltages 5, 7, 17, 18, 19 and THD; currents 5, 7, 11, 13, 17, 18, 19 and TDD
	if len(p.Rows) != 14 {
		t.Errorf("%d rows: %v", len(p.Rows), byName)
	}
	r := p.Rows[byName["5th harmonic current"]]
	if r.Limit != 6 || r.Value < 100*8/60.0-0.2 || r.Value > 100*8/60.0+0.2 {
		t.Errorf("5th current: %+v, want about 8 A of 60 A against 6 %%", r)
	}
	said := strings.Join(p.NotAssessed, "\n")
	for _, want := range []string{`11th harmonic voltage: the document says "see annex" instead of a limit`, "13th harmonic voltage: the document states no limit", `the line "eleventh 2 2": "eleventh" names no order`} {
		if !strings.Contains(said, want) {
			t.Errorf("not assessed: %s\nlacks %q", said, want)
		}
	}
}

// A table with gaps never counts as met, however small the distortion.
func TestGapsNeverCountAsMet(t *testing.T) {
	s := letterStudy(t)
	s.NonlinearLoads[0].CurrentA = 0.01
	p := onePoint(t, s)
	if p.State() != Partly {
		t.Errorf("state %v", p.State())
	}
	s.LimitSets[0].NotReadable = nil
	for i := range s.LimitSets[0].Rows {
		s.LimitSets[0].Rows[i].VoltagePercent = num(3)
	}
	if p := onePoint(t, s); p.State() != Meets {
		t.Errorf("without gaps: %v, %v", p.State(), p.NotAssessed)
	}
	s.Assessments[0].DemandA = 0
	if p := onePoint(t, s); p.State() != Partly || !strings.Contains(strings.Join(p.NotAssessed, ""), "no maximum demand load current IL") {
		t.Errorf("without IL: %v, %v", p.State(), p.NotAssessed)
	}
	// limits in amperes need no IL
	for i := range s.LimitSets[0].Rows {
		s.LimitSets[0].Rows[i].CurrentPercent, s.LimitSets[0].Rows[i].CurrentA = nil, num(9)
	}
	s.LimitSets[0].TDDPercent = 0
	if p := onePoint(t, s); p.State() != Meets {
		t.Errorf("in amperes: %v, %v", p.State(), p.NotAssessed)
	}
}

// A study that computes fewer orders than a set limits does not meet it.
func TestOrdersBeyondTheStudy(t *testing.T) {
	s := letterStudy(t)
	s.MaxOrder, s.Assessments[0].Set = 25, "iec61000-2-4-class2"
	s.Assessments[0].Current, s.NonlinearLoads[0].CurrentA = "", 0.01
	if p := onePoint(t, s); p.State() != Partly || !strings.Contains(strings.Join(p.NotAssessed, ""), "orders 26 to 50: IEC 61000-2-4:2002 class 2 limits them, but the study computes to order 25") {
		t.Errorf("%v %v", p.State(), p.NotAssessed)
	}
}

func TestLimitSetValidation(t *testing.T) {
	for _, c := range []struct {
		name, field, want string
		change            func(*LimitSet)
	}{
		{"published name", "name", "identifier of a published", func(x *LimitSet) { x.Name = "ieee519-2022" }},
		{"no limits", "rows", "no limit in it", func(x *LimitSet) { *x = LimitSet{Named: x.Named} }},
		{"both units", "rows", "row 1: the current of order 5 is limited twice", func(x *LimitSet) { x.Rows[0].CurrentA = num(3) }},
		{"twice", "rows", "order 5 stands twice", func(x *LimitSet) { x.Rows[1].Order = 5 }},
		{"order 1", "rows", "row 1, order", func(x *LimitSet) { x.Rows[0].Order = 1 }},
		{"negative", "rows", "row 1, voltage", func(x *LimitSet) { x.Rows[0].VoltagePercent = num(-1) }},
		{"base", "voltageOf", "none of its words", func(x *LimitSet) { x.VoltageOf = "rated" }},
		{"THD", "thdPercent", "out of range", func(x *LimitSet) { x.THDPercent = 400 }},
	} {
		x := letterStudy(t).LimitSets[0]
		x.Rows = append([]LimitLine(nil), x.Rows...)
		c.change(&x)
		found := x.Validate()
		if len(found) == 0 || found[0].Item != x.Name || found[0].Field != c.field || !strings.Contains(found[0].Problem, c.want) || found[0].Remedy == "" {
			t.Errorf("%s: %v; want %s with %q", c.name, found, c.field, c.want)
		}
	}
}

func TestLimitFileRoundTrip(t *testing.T) {
	x := letterStudy(t).LimitSets[0]
	path := filepath.Join(t.TempDir(), "letter"+LimitFile)
	if err := SaveLimitSet(path, &x); err != nil {
		t.Fatal(err)
	}
	back, err := OpenLimitSet(path)
	if err != nil || !reflect.DeepEqual(*back, x) {
		t.Fatalf("%+v, %v", back, err)
	}
	good, _ := os.ReadFile(path)
	for _, c := range []struct{ text, want string }{
		{"", "the file is empty"},
		{string(good[:len(good)/2]), "ends in the middle"},
		{strings.Replace(string(good), `"format": 1`, `"format": 9`, 1), "format 9"},
		{strings.Replace(string(good), `"tddPercent"`, `"tdd"`, 1), `"tdd", which is not known`},
		{strings.Replace(string(good), `"order": 5`, `"order": "five"`, 1), "must be a whole number"},
		{strings.Replace(string(good), `"thdPercent": 5`, `"thdPercent": -5`, 1), "out of range"},
		{`{"format": 1, "title": {"study": "x"}}`, `"title", which is not known`},
		{"\x00\x01", "binary"},
	} {
		if _, err := ParseLimitSet([]byte(c.text)); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%.30q: %v; want %q", c.text, err, c.want)
		}
	}
}

// Renaming a set follows into the assessments that use it; one in use stays.
func TestRenamedLimitSet(t *testing.T) {
	s := letterStudy(t)
	old := s.LimitSets[0].Name
	if err := s.Remove(old); err == nil || !strings.Contains(err.Error(), "is still used by Check") {
		t.Errorf("removing a set in use: %v", err)
	}
	if err := s.Rename(old, "Letter 2"); err != nil || s.Assessments[0].Set != "Letter 2" {
		t.Errorf("%v, set %q", err, s.Assessments[0].Set)
	}
	if _, err := Evaluate(context.Background(), s, nil); err != nil {
		t.Error(err)
	}
}

// Several sets at several points at once, each assessed by itself.
func TestSeveralSetsAndPoints(t *testing.T) {
	s := letterStudy(t)
	for i, set := range []string{"ieee519-2022", "en50160-lv", "iec61000-2-4-class1", "iec61000-2-4-class3"} {
		a := Assessment{Named: Named{"Point " + string(rune('A'+i))}, Bus: "Board", Set: set, Current: "T1", DemandA: 60}
		if i == 3 {
			a.Bus, a.Current = "Intake", ""
		}
		s.Assessments = append(s.Assessments, a)
	}
	o, err := Evaluate(context.Background(), s, nil)
	if err != nil {
		t.Fatal(err)
	}
	if len(o.Points) != 5 {
		t.Fatalf("%d points", len(o.Points))
	}
	var value [2]float64
	for i, p := range o.Points[2:4] { // EN 50160 and IEC 61000-2-4 class 1 at the same bus: the same value of order 5, another limit
		for _, r := range p.Rows {
			if r.Order == 5 && r.Quantity == "voltage" {
				value[i] = r.Value
				if r.Limit != []float64{6, 3}[i] {
					t.Errorf("%s: limit %g", p.SetTitle, r.Limit)
				}
			}
		}
	}
	if value[0] == 0 || value[0] != value[1] {
		t.Errorf("the same voltage is %g and %g", value[0], value[1])
	}
	if !strings.HasPrefix(o.Points[1].Rows[0].Rule, "IEEE 519-2022") || o.Points[4].Bus != "Intake" {
		t.Error("the points are mixed up")
	}
}
