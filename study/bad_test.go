package study

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"quietbus/testdata"
)

// Files that are no studies: each gets a message that says what is wrong.
func TestBadFiles(t *testing.T) {
	good := string(testdata.Demo)
	for name, c := range map[string]struct{ data, want string }{
		"empty":           {"", "the file is empty"},
		"truncated":       {good[:len(good)/2], "ends in the middle"},
		"binary":          {"\x00\x01\x02PK", "binary"},
		"not utf-8":       {"{\"format\": 1, \"title\": \"\xff\"}", "binary"},
		"not json":        {"format = 1", "not JSON"},
		"list":            {"[1, 2]", "one JSON object"},
		"no format":       {`{"title": {"study": "x"}}`, `"format" is missing`},
		"newer":           {`{"format": 2}`, "newer version"},
		"newer with keys": {strings.Replace(good, `"format": 1`, `"format": 7, "phases": []`, 1), "newer version"},
		"format zero":     {`{"format": 0}`, "no version"},
		"format in text":  {`{"format": "1"}`, "no version"},
		"format twice":    {`{"format": 1, "FORMAT": 1}`, `key "FORMAT"`},
		"a number":        {"42", "one JSON object"},
		"only a mark":     {"\xef\xbb\xbf \n", "empty"},
		"utf-16":          {"\xff\xfe{\x00", "UTF-16"},
		"cut in a letter": {"{\"format\": 1, \"title\": {\"study\": \"K\xc3", "ends in the middle"},
		"huge integer":    {`{"format": 1, "maxOrder": 99999999999999999999}`, "maxOrder is 99999999999999999999, which is too large"},
		"huge power":      {strings.Replace(good, `"xOverR": 8`, `"xOverR": 1e999`, 1), "Grid, xOverR is 1e999, which is too large"},
		"unknown key":     {strings.Replace(good, `"faultMVA"`, `"faultGVA"`, 1), `Grid has the key "faultGVA"`},
		"unknown at top":  {`{"format": 1, "bananas": []}`, `study has the key "bananas"`},
		"twice":           {`{"format": 1, "format": 1}`, `key "format" twice`},
		"text for number": {strings.Replace(good, `"xOverR": 8`, `"xOverR": "eight"`, 1),
			"Grid, xOverR is text, but must be a number"},
		"number for text": {`{"format": 1, "title": {"study": 3}}`, "title, study is a number, but must be text"},
		"fraction":        {`{"format": 1, "maxOrder": 49.5}`, "maxOrder is 49.5, but must be a whole number"},
		"NaN":             {`{"format": 1, "frequencyHz": NaN}`, "not JSON"},
		"null":            {`{"format": 1, "frequencyHz": null}`, "frequencyHz is null"},
		"trailing":        {good + "{}", "after the end"},
		"overflow":        {`{"format": 1, "frequencyHz": 1e999}`, "frequencyHz"},
	} {
		_, err := Parse([]byte(c.data))
		if err == nil {
			t.Errorf("%s: no error", name)
		} else if !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %q does not say %q", name, err, c.want)
		}
	}
	if _, err := Parse(make([]byte, maxFile+1)); err == nil || !strings.Contains(err.Error(), "64 MB") {
		t.Errorf("huge: %v", err)
	}
	if _, err := Open(filepath.Join(t.TempDir(), "none.study.json")); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("missing file: %v", err)
	}
}

// The place of an error is the line and column where it stands.
func TestErrorPlace(t *testing.T) {
	_, err := Parse([]byte("{\n  \"format\": 1,\n  \"bananas\": 2\n}"))
	var f *FileError
	if !errors.As(err, &f) || f.Line != 3 || f.Column != 3 {
		t.Errorf("%v, want line 3, column 3", err)
	}
	_, err = Parse([]byte("{\n  \"format\": 1,\n  \"maxOrder\":   true\n}"))
	if !errors.As(err, &f) || f.Line != 3 || f.Column != 17 {
		t.Errorf("%v, want line 3, column 17", err)
	}
}

// Studies that cannot be evaluated: each problem names item and field and says
// what to do, and evaluating one is an error, never a panic.
func TestBadStudies(t *testing.T) {
	for name, c := range map[string]struct {
		change            func(s *Study)
		item, field, want string
	}{
		"zero fault level":        {func(s *Study) { s.Supplies[0].FaultMVA = 0 }, "SUP", "faultMVA", "neither"},
		"both fault levels":       {func(s *Study) { s.Supplies[0].FaultKA = 5 }, "SUP", "faultMVA", "both"},
		"negative power":          {func(s *Study) { s.NonlinearLoads[0].KW = -5 }, "D1", "kW", "out of range"},
		"absurd rating":           {func(s *Study) { s.Transformers[0].RatedKVA = 1e12 }, "T1", "ratedKVA", "out of range"},
		"zero rating":             {func(s *Study) { s.Transformers[0].RatedKVA = 0 }, "T1", "ratedKVA", "zero or missing"},
		"unknown bus":             {func(s *Study) { s.Banks[0].Bus = "nowhere" }, "C1", "bus", `no item "nowhere"`},
		"bus of another kind":     {func(s *Study) { s.Banks[0].Bus = "T1" }, "C1", "bus", "is a transformer"},
		"one name twice":          {func(s *Study) { s.Motors[0].Name = "L1" }, "L1", "name", "have this name"},
		"no name":                 {func(s *Study) { s.Loads[0].Name = " " }, "loads[0]", "name", "empty"},
		"no supply":               {func(s *Study) { s.Supplies = nil; s.Assessments = nil }, "study", "supplies", "no supply"},
		"bad vector group":        {func(s *Study) { s.Transformers[0].VectorGroup = "Dyn4" }, "T1", "vectorGroup", "1, 3, 5, 7, 9, 11"},
		"no vector group":         {func(s *Study) { s.Transformers[0].VectorGroup = "star" }, "T1", "vectorGroup", "Dyn11"},
		"loss above impedance":    {func(s *Study) { s.Transformers[0].XOverR, s.Transformers[0].LoadLossKW = 0, 80 }, "T1", "loadLossKW", "more than the whole"},
		"winding off":             {func(s *Study) { s.Transformers[0].LVKV = 4 }, "T1", "lvKV", "0.4 kV"},
		"self loop":               {func(s *Study) { s.Transformers[0].LVBus = "HV" }, "T1", "lvBus", "both ends"},
		"repeated order":          {func(s *Study) { typed(s, 5, 5) }, "D1", "lines", "order 5 stands twice"},
		"no lines":                {func(s *Study) { typed(s) }, "D1", "lines", "no lines"},
		"unknown spectrum":        {func(s *Study) { s.NonlinearLoads[0].Spectrum = "noise" }, "D1", "spectrum", "no typical spectrum"},
		"tuned to nothing":        {func(s *Study) { s.Measures[0].Order = 0 }, "F5", "order", "missing"},
		"tuned below one":         {func(s *Study) { s.Measures[0].Order = 0.8 }, "F5", "order", "out of range"},
		"field of other kind":     {func(s *Study) { s.Measures[0].RatedA = 3 }, "F5", "ratedA", "does not belong"},
		"reactor on LED":          {func(s *Study) { s.Measures[4].Target = "LED" }, "LR", "target", "line reactor"},
		"low-pass on a drive":     {func(s *Study) { s.Measures[3].Target = "D1" }, "LP", "target", "linear load"},
		"low-pass between phases": {func(s *Study) { s.Loads[1].Connection = PhaseAB }, "LP", "target", "between two phases"},
		"cable of no length": {func(s *Study) {
			s.Buses = append(s.Buses, Bus{Named: Named{"X"}, NominalKV: 0.4})
			s.Cables = []Cable{{Named: Named{"W"}, From: "LV", To: "X", LengthM: 0.04, ROhmPerKm: 0.2, XOhmPerKm: 0.08}}
		}, "W", "lengthM", "out of range"},
		"cable of no resistance": {func(s *Study) {
			s.Buses = append(s.Buses, Bus{Named: Named{"X"}, NominalKV: 0.4})
			s.Cables = []Cable{{Named: Named{"W"}, From: "LV", To: "X", LengthM: 10, ROhmPerKm: 1e-6, XOhmPerKm: 0.08}}
		}, "W", "rOhmPerKm", "out of range"},
		"no zero sequence": {func(s *Study) { s.Supplies[0].ZeroSequenceRatio = 1e-300 }, "SUP", "zeroSequenceRatio", "out of range"},
		"senses nothing":   {func(s *Study) { s.Measures[2].Bus = "HV" }, "AF", "senses", "no non-linear load"},
		"unknown set":      {func(s *Study) { s.Assessments[0].Set = "mine" }, "PCC", "set", "no limit set"},
		"conflict":         {func(s *Study) { s.Measures[0].On, s.Measures[1].On = true, true }, "DET", "on", "both on"},
		"provenance key":   {func(s *Study) { SetProvenance(&s.Banks[0], "colour", Provenance{Origin: Given}) }, "C1", "provenance", `"colour"`},
		"scan reversed":    {func(s *Study) { s.Scans = []ScanRequest{{Named: Named{"Z"}, Bus: "LV", From: 20, To: 5}} }, "Z", "fromOrder", "20 to 5"},
		"groups that disagree": {func(s *Study) {
			t := s.Transformers[0]
			t.Name, t.VectorGroup = "T2", "Dyn5"
			s.Transformers = append(s.Transformers, t)
		}, "study", "", "disagree"},
		"neutral without earth": {func(s *Study) { s.Transformers[0].VectorGroup = "Dy11" }, "S1", "connection", "no neutral is earthed"},
	} {
		s := small()
		c.change(s)
		found := s.Validate()
		hit := false
		for _, f := range found {
			if f.Item == c.item && f.Field == c.field && strings.Contains(f.Problem, c.want) {
				hit = true
				if f.Remedy == "" {
					t.Errorf("%s: %v says nothing to do", name, f)
				}
			}
		}
		if !hit {
			t.Errorf("%s: no problem at %s, %s with %q; found %v", name, c.item, c.field, c.want, FieldErrors(found))
		}
		if _, err := Evaluate(context.Background(), s, nil); err == nil {
			t.Errorf("%s: evaluated all the same", name)
		}
	}
}

func typed(s *Study, orders ...int) {
	s.NonlinearLoads[0].Spectrum = Typed
	for _, h := range orders {
		s.NonlinearLoads[0].Lines = append(s.NonlinearLoads[0].Lines, SpectrumLine{Order: h, Percent: 10})
	}
}

// A bus without supply is reported and left out; the rest is solved.
func TestIsland(t *testing.T) {
	s := small()
	s.Buses = append(s.Buses, Bus{Named: Named{"far"}, NominalKV: 0.4}, Bus{Named: Named{"farther"}, NominalKV: 0.4})
	s.Cables = []Cable{{Named: Named{"W"}, From: "far", To: "farther", LengthM: 10, ROhmPerKm: 0.2, XOhmPerKm: 0.08}}
	s.Loads = append(s.Loads, Load{Named: Named{"lost"}, Bus: "farther", KW: 10})
	o := solve(t, s)
	if o.Bus("far").Live || !o.Bus("LV").Live {
		t.Error("the wrong buses are live")
	}
	if !strings.Contains(strings.Join(o.Warnings, " "), "far has no supply") {
		t.Errorf("warnings: %v", o.Warnings)
	}
}

// A load far too large is an error that names the bus.
func TestTooWeak(t *testing.T) {
	s := small()
	s.NonlinearLoads[0].KW = 50000
	_, err := Evaluate(context.Background(), s, nil)
	if err == nil || !strings.Contains(err.Error(), "too weak") || !strings.Contains(err.Error(), "LV") {
		t.Errorf("%v", err)
	}
}

// Saving keeps the previous version, and what is saved reads back the same.
func TestSaveAndPrevious(t *testing.T) {
	path := filepath.Join(t.TempDir(), "a.study.json")
	s := small()
	if err := Save(path, s); err != nil {
		t.Fatal(err)
	}
	first, _ := os.ReadFile(path)
	s.Title.Client = "another"
	if err := Save(path, s); err != nil {
		t.Fatal(err)
	}
	kept, err := os.ReadFile(Previous(path))
	if err != nil || !bytes.Equal(kept, first) {
		t.Errorf("the previous version is not kept: %v", err)
	}
	back, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	a, _ := s.Bytes()
	b, _ := back.Bytes()
	if !bytes.Equal(a, b) {
		t.Error("what was saved reads back differently")
	}
	if err := Save(filepath.Join(t.TempDir(), "no", "such", "dir", "x"), s); err == nil {
		t.Error("saving into a missing folder succeeds")
	}
}

// Saving keeps a file's permissions, follows a link, and leaves alone what is
// set read-only; a study made in code is written with the present format.
func TestSaveIsPolite(t *testing.T) {
	dir := t.TempDir()
	path, link := filepath.Join(dir, "a.study.json"), filepath.Join(dir, "link.study.json")
	s := small()
	s.Format = 0
	if err := Save(path, s); err != nil {
		t.Fatal(err)
	}
	if back, err := Open(path); err != nil || back.Format != Format {
		t.Errorf("what was made in code does not read back: %v", err)
	}
	if err := errors.Join(os.Chmod(path, 0o600), os.Symlink(path, link)); err != nil {
		t.Fatal(err)
	}
	s.Title.Client = "through the link"
	if err := Save(link, s); err != nil {
		t.Fatal(err)
	}
	if back, err := Open(path); err != nil || back.Title.Client != s.Title.Client {
		t.Errorf("the link was not followed: %v", err)
	}
	for _, kept := range []string{path, Previous(link)} {
		if info, err := os.Stat(kept); err != nil || info.Mode().Perm() != 0o600 {
			t.Errorf("%s: %v %v, want 0600", filepath.Base(kept), info.Mode(), err)
		}
	}
	if err := os.Chmod(path, 0o400); err != nil {
		t.Fatal(err)
	}
	s.Title.Client = "too late"
	if err := Save(path, s); err == nil || !strings.Contains(err.Error(), "read-only") {
		t.Errorf("a read-only file was written: %v", err)
	}
	s.Supplies[0].XOverR = math.NaN()
	if err := Save(path, s); err == nil {
		t.Error("a study with NaN was written")
	}
}

func FuzzParse(f *testing.F) {
	f.Add(testdata.Demo)
	f.Add([]byte(`{"format": 1, "buses": [{"name": "A", "nominalKV": 0.4}], "supplies": [{"name": "S", "bus": "A", "faultMVA": 1, "xOverR": 1}], "frequencyHz": 50, "title": {"study": "x"}}`))
	f.Add([]byte(`{"format": 1, "drawing": {"A": {"x": 1, "y": 2}}}`))
	f.Add([]byte(`{"format": 1, "loads": [{"name": "L", "provenance": {"kW": {"origin": "given"}}}]}`))
	f.Fuzz(func(t *testing.T, data []byte) {
		s, err := Parse(data)
		if err != nil {
			return
		}
		out, err := s.Bytes()
		if err != nil {
			t.Fatal(err)
		}
		if again, err := Parse(out); err != nil {
			t.Fatalf("what was written does not read: %v", err)
		} else if twice, _ := again.Bytes(); !bytes.Equal(out, twice) {
			t.Fatal("writing is not stable")
		}
		if len(s.Buses) > 50 || s.MaxOrder > 100 {
			return
		}
		if problems := s.Validate(); len(problems) == 0 {
			if o, err := Evaluate(context.Background(), s, s.OnMeasures()); err == nil {
				if _, err := json.Marshal(o.Check); err != nil {
					t.Fatalf("the check is no number: %v", err)
				}
			}
		}
	})
}
