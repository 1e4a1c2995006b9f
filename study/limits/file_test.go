package limits

import (
	"errors"
	"strings"
	"testing"
)

const letter = `{
 "format": 1, "id": "letter", "title": "Letter of 3 March (invented)", "document": "invented letter", "about": "An invented example.",
 "voltage": {"of": "nominal", "classes": [{"aboveKV": 1, "toKV": 36, "totalPercent": 4, "rows": [
   {"orders": "5", "percent": 3}, {"orders": 7, "percent": 2.5},
   {"orders": "17-49", "kind": "odd non-triplen", "formula": "1.9*(17/h) - 0.2"}]}]},
 "current": {"of": "demand", "classes": [
   {"toRatio": 20, "totalPercent": 5, "rows": [{"orders": "2-50", "kind": "odd", "percent": 2}]},
   {"fromRatio": 20, "rows": [{"orders": "2-50", "kind": "odd", "percent": 3, "mark": "derived"}]}]}
}`

func TestParseSet(t *testing.T) {
	s, err := ParseSet(strings.NewReader(letter))
	if err != nil {
		t.Fatal(err)
	}
	rows, err := s.Voltage(Point{NominalV: 11000, Voltage: flat(50, 1)})
	l := limitsOf(t, rows, err)
	if len(rows) != 15 || l[5] != 3 || l[7] != 2.5 || l[0] != 4 || l[19] != 1.5 {
		t.Errorf("%d rows, limits %v", len(rows), l)
	}
	if r := rows[0]; r.Mark != Given || r.Rule != "Letter of 3 March (invented), above 1 to 36 kV, every order, of the nominal voltage" {
		t.Errorf("row %+v", r)
	}
	rows, err = s.Current(Point{NominalV: 11000, Current: flat(50, 1), IscA: 300, DemandA: 10})
	if err != nil || len(rows) != 24 || rows[0].Limit != 3 || rows[0].Mark != Derived {
		t.Errorf("%d rows, first %+v, error %v; want 24 odd orders and no total", len(rows), rows[0], err)
	}
	if _, err := s.Voltage(Point{NominalV: 400, Voltage: flat(50, 1)}); err == nil || !strings.Contains(err.Error(), "above 1 to 36 kV") {
		t.Errorf("at 0.4 kV: %v; want the range it covers", err)
	}
}

func TestParseSetNamesRowAndColumn(t *testing.T) {
	edit := func(from, to string) string {
		if !strings.Contains(letter, from) {
			t.Fatalf("no %q to change", from)
		}
		return strings.Replace(letter, from, to, 1)
	}
	row := "limit file: voltage, class 1, row 1, column "
	for _, c := range []struct{ name, text, want string }{
		{"empty", "", "limit file: line 1: is not JSON"},
		{"not an object", "[1]", "limit file: file: is not a JSON object"},
		{"null", "null", "is not a JSON object"},
		{"cut off", letter[:200], "is not JSON"},
		{"binary", "\x00\x01PNG", "is not JSON"},
		{"two documents", letter + letter, "is not JSON"},
		{"other format", edit(`"format": 1`, `"format": 2`), "file, column format: is not a format"},
		{"no format", edit(`"format": 1,`, ``), "file, column format: is missing"},
		{"bad id", edit(`"letter"`, `"My letter"`), "column id: \"My letter\" is no identifier"},
		{"taken id", edit(`"letter"`, `"ieee519-2022"`), "is the identifier of a published set"},
		{"no title", edit(`"Letter of 3 March (invented)"`, `""`), "column title: is empty"},
		{"text for a number", edit(`{"orders": "5", "percent": 3}`, `{"orders": "5", "percent": "3 %"}`), row + `percent: is "3 %"; write a number without a unit`},
		{"null for a number", edit(`{"orders": "5", "percent": 3}`, `{"orders": "5", "percent": null}`), row + `percent: is empty`},
		{"no number", edit(`{"orders": "5", "percent": 3}`, `{"orders": "5"}`), row + "percent: is missing"},
		{"zero", edit(`{"orders": "5", "percent": 3}`, `{"orders": "5", "percent": 0}`), row + "percent: is 0"},
		{"negative", edit(`{"orders": "5", "percent": 3}`, `{"orders": "5", "percent": -1}`), row + "percent: is -1"},
		{"no orders", edit(`{"orders": "5", "percent": 3}`, `{"percent": 3}`), row + "orders: is missing"},
		{"order 1", edit(`{"orders": "5", "percent": 3}`, `{"orders": "1", "percent": 3}`), row + "orders: is 1"},
		{"order as words", edit(`{"orders": "5", "percent": 3}`, `{"orders": "fifth", "percent": 3}`), row + `orders: is "fifth"`},
		{"backward range", edit(`{"orders": "5", "percent": 3}`, `{"orders": "9-5", "percent": 3}`), row + "orders: is 9-5"},
		{"huge range", edit(`{"orders": "5", "percent": 3}`, `{"orders": "5-900000000", "percent": 3}`), row + "orders: is 5-900000000"},
		{"unknown key", edit(`{"orders": "5", "percent": 3}`, `{"orders": "5", "percent": 3, "precent": 4}`), row + "precent: is not a key"},
		{"unknown top key", edit(`"about"`, `"abuot"`), "file, column abuot: is not a key"},
		{"repeated order", edit(`{"orders": 7, "percent": 2.5}`, `{"orders": "5-7", "percent": 2.5}`), "voltage, class 1, row 2, column orders: repeats order 5"},
		{"bad kind", edit(`"odd non-triplen"`, `"prime"`), "row 3, column kind: is \"prime\""},
		{"bad formula", edit(`1.9*(17/h) - 0.2`, `17/h`), `row 3, column formula: "17/h" is not of the form`},
		{"formula below zero", edit(`1.9*(17/h) - 0.2`, `1.9*(17/h)-1`), "row 3, column formula: gives"},
		{"formula and percent", edit(`"formula": "1.9`, `"percent": 1, "formula": "1.9`), "row 3, column formula: stands beside a percent"},
		{"bad mark", edit(`"mark": "derived"`, `"mark": "sure"`), "current, class 2, row 1, column mark: is \"sure\""},
		{"bad base", edit(`"of": "nominal"`, `"of": "rated"`), "voltage, column of: is \"rated\""},
		{"bounds", edit(`"aboveKV": 1, "toKV": 36`, `"aboveKV": 36, "toKV": 1`), "voltage, class 1, column toKV: is not above"},
		{"ratios", edit(`"fromRatio": 20`, `"fromRatio": 50, "toRatio": 20`), "current, class 2, column toRatio: is not above"},
		{"no class", `{"format": 1, "id": "x", "title": "x", "voltage": {"classes": []}}`, "voltage, column classes: is empty"},
		{"no rows", `{"format": 1, "id": "x", "title": "x", "voltage": {"classes": [{}]}}`, "voltage, class 1: limits nothing"},
		{"nothing", `{"format": 1, "id": "x", "title": "x"}`, "file: limits nothing"},
		{"list for an object", `{"format": 1, "id": "x", "title": "x", "voltage": []}`, "file, column voltage: is []"},
	} {
		s, err := ParseSet(strings.NewReader(c.text))
		var typed *ParseError
		if s != nil || !errors.As(err, &typed) || !strings.Contains(err.Error(), c.want) || typed.Remedy == "" {
			t.Errorf("%s: set %v, error %v; want %q", c.name, s != nil, err, c.want)
		}
	}
	if _, err := ParseSet(strings.NewReader(strings.Repeat(" ", maxFile+2))); err == nil || !strings.Contains(err.Error(), "1 MB") {
		t.Errorf("a huge file gives %v", err)
	}
}

func TestPublishedSets(t *testing.T) {
	if len(Sets()) != len(published) {
		t.Fatalf("%d sets", len(Sets()))
	}
	for i, s := range Sets() {
		if s.ID != published[i] || s.Title == "" || s.Document == "" || s.Edition == "" || !strings.Contains(s.About, "to be confirmed") {
			t.Errorf("set %d: %q lacks its document, edition or caution", i, s.ID)
		}
		for _, part := range []*section{s.volts, s.amperes} {
			if part == nil {
				continue
			}
			for _, c := range part.classes {
				if c.totalMark == "" || c.totalMark == Given {
					t.Errorf("%s: a published class has mark %q", s.ID, c.totalMark)
				}
				for h, v := range c.limit {
					if v > 0 && (c.rule[h] == "" || c.mark[h] == "" || c.mark[h] == Given) {
						t.Errorf("%s order %d: rule %q, mark %q", s.ID, h, c.rule[h], c.mark[h])
					}
				}
			}
		}
	}
	if _, ok := Lookup("nothing"); ok {
		t.Error("Lookup finds a set that is not there")
	}
}

func FuzzParseSet(f *testing.F) {
	f.Add(letter)
	for _, id := range published {
		text, err := data.ReadFile("data/" + id + ".json")
		if err != nil {
			f.Fatal(err)
		}
		f.Add(strings.Replace(string(text), id, "own", 1))
	}
	f.Fuzz(func(t *testing.T, text string) {
		s, err := ParseSet(strings.NewReader(text))
		if (s == nil) == (err == nil) {
			t.Fatalf("set %v with error %v", s != nil, err)
		}
		if s == nil {
			return
		}
		for _, v := range []float64{400, 11000, 110e3} {
			p := Point{NominalV: v, Voltage: flat(50, 1), Current: flat(50, 1), IscA: 1000, DemandA: 30}
			for _, rows := range [][]Row{first(s.Voltage(p)), first(s.Current(p))} {
				for _, r := range rows {
					if !(r.Share >= 0) || r.Rule == "" {
						t.Fatalf("row %+v", r)
					}
				}
			}
		}
	})
}

func first(rows []Row, _ error) []Row { return rows }
