package main

import (
	"bytes"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"quietbus/study"
)

// command runs a command line and returns its exit code and what it printed.
func command(args ...string) (code int, stdout, stderr string) {
	var out, err bytes.Buffer
	code = run(args, &out, &err)
	return code, out.String(), err.String()
}

func written(t *testing.T, s *study.Study) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "x.study.json")
	if err := study.Save(path, s); err != nil {
		t.Fatal(err)
	}
	return path
}

func TestCheckExitCodes(t *testing.T) {
	bad := small() // the bank resonates with the transformer near order 8
	good := small()
	good.NonlinearLoads[0].KW = 5
	path := written(t, bad)
	code, out, errs := command("check", path)
	if code != exitOver || !strings.Contains(out, "its limit") || errs != "" {
		t.Errorf("a study over its limits: code %d\n%s%s", code, out, errs)
	}
	if code, out, errs = command("check", written(t, good)); code != exitOK || !strings.Contains(out, "meets") {
		t.Errorf("a study within its limits: code %d\n%s%s", code, out, errs)
	}
	code, out, _ = command("check", path, "--measures", "Detune C1")
	if !strings.Contains(out, "Measures on: Detune C1") || !strings.Contains(out, "Before:") {
		t.Errorf("check with a measure: code %d\n%s", code, out)
	}
}

func TestBadInputNamesItemAndField(t *testing.T) {
	nowhere := small()
	nowhere.NonlinearLoads[0].Bus = "nowhere"
	zero := small()
	zero.Transformers[0].RatedKVA = 0
	twins := small()
	twins.Banks[0].Name = "Drives"
	text := func(data string) string {
		path := filepath.Join(t.TempDir(), "x.study.json")
		os.WriteFile(path, []byte(data), 0o644)
		return path
	}
	good := written(t, small())
	for name, c := range map[string]struct {
		args []string
		want []string
	}{
		"no such file":     {[]string{"check", filepath.Join(t.TempDir(), "none.json")}, []string{"none.json"}},
		"truncated":        {[]string{"check", text(`{"format": 1, "title": {"stu`)}, nil},
		"binary":           {[]string{"check", text("\x00\x01\x02\x7fELF")}, nil},
		"newer format":     {[]string{"check", text(`{"format": 99, "title": {"study": "x"}, "frequencyHz": 50}`)}, []string{"99"}},
		"unknown key":      {[]string{"check", text(`{"format": 1, "title": {"study": "x"}, "frequencyHz": 50, "bussbars": []}`)}, []string{"bussbars"}},
		"unknown bus":      {[]string{"check", written(t, nowhere)}, []string{"Drives", "bus", "nowhere"}},
		"zero rating":      {[]string{"check", written(t, zero)}, []string{"T1", "ratedKVA"}},
		"one name twice":   {[]string{"check", written(t, twins)}, []string{"Drives", "name"}},
		"no such measure":  {[]string{"check", good, "--measures", "Magic"}, []string{"Magic", "Detune C1"}},
		"no study":         {[]string{"check"}, []string{"name the study file"}},
		"two studies":      {[]string{"check", good, good}, []string{"one study"}},
		"no folder":        {[]string{"handout", good}, []string{"-o DIR"}},
		"odd paper":        {[]string{"handout", good, "-o", t.TempDir(), "--paper", "a0"}, []string{"a0", "letter"}},
		"unknown option":   {[]string{"check", good, "--fast"}, []string{"fast"}},
		"two that clash":   {[]string{"check", good, "--measures", "Detune C1,Remove C1"}, []string{"Detune C1", "Remove C1"}},
		"unknown command":  {[]string{"chekc", good}, []string{"chekc"}},
		"option for study": {[]string{"--fast"}, []string{"--fast"}},
	} {
		code, out, errs := command(c.args...)
		if code != exitBadInput || errs == "" || out != "" {
			t.Errorf("%s: code %d, stdout %q, stderr %q", name, code, out, errs)
		}
		for _, want := range c.want {
			if !strings.Contains(errs, want) {
				t.Errorf("%s: %q does not name %q", name, errs, want)
			}
		}
		if strings.Contains(errs, "goroutine") {
			t.Errorf("%s: a panic reached the user: %s", name, errs)
		}
	}
}

func TestHandoutCommand(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "out", "deep")
	code, out, errs := command("handout", "-o", dir, written(t, small()), "--paper", "letter", "--measures", "Remove C1")
	if code > exitOver || errs != "" || !strings.Contains(out, dir) {
		t.Fatalf("code %d\n%s%s", code, out, errs)
	}
	pdf, err := os.ReadFile(filepath.Join(dir, "handout.pdf"))
	if err != nil || !bytes.HasPrefix(pdf, []byte("%PDF-")) {
		t.Errorf("handout.pdf: %v", err)
	}
	data, err := os.ReadFile(filepath.Join(dir, "results.json"))
	if err != nil || !json.Valid(data) {
		t.Errorf("results.json: %v", err)
	}
}

func TestHandoutIntoAFile(t *testing.T) {
	file := filepath.Join(t.TempDir(), "file")
	os.WriteFile(file, nil, 0o644)
	if code, _, errs := command("handout", written(t, small()), "-o", file); code != exitBadInput || !strings.Contains(errs, "folder") {
		t.Errorf("code %d, %q", code, errs)
	}
}

func TestHelpAndVersion(t *testing.T) {
	if code, out, _ := command("help"); code != 0 || !strings.Contains(out, "licensed practitioner") {
		t.Errorf("help: %d %q", code, out)
	}
	t.Chdir("..") // the root, where FyneApp.toml is
	if code, out, _ := command("version"); code != 0 || strings.TrimSpace(out) != "Quietbus 0.1.0" {
		t.Errorf("version: %d %q", code, out)
	}
}

func TestPanicIsAnExitCode(t *testing.T) {
	var out panicking
	var errs bytes.Buffer
	if code := run([]string{"help"}, out, &errs); code != exitInternal || !strings.Contains(errs.String(), "internal failure") {
		t.Errorf("code %d, %q", code, errs.String())
	}
}

// panicking is a writer that stands for a mistake of ours.
type panicking struct{}

func (panicking) Write([]byte) (int, error) { panic("a mistake of ours") }

// A file of limits is checked without a display; its gaps are said.
func TestCheckLimits(t *testing.T) {
	x, err := study.PasteLimits("5\t3\n7\tsee annex")
	if err != nil {
		t.Fatal(err)
	}
	x.Name, x.Document = "Invented letter", "No. 17"
	path := filepath.Join(t.TempDir(), "letter"+study.LimitFile)
	if err := study.SaveLimitSet(path, x); err != nil {
		t.Fatal(err)
	}
	code, out, errs := command("check", path)
	if code != exitOK || !strings.Contains(out, "The limits are valid: Invented letter, 2 orders.") || !strings.Contains(out, `Not assessed: 7th harmonic voltage: the document says "see annex"`) {
		t.Errorf("code %d, %q, %q", code, out, errs)
	}
	os.WriteFile(path, []byte(`{"format": 1, "limitSet": {"name": "x"}}`), 0o644)
	if code, _, errs := command("check", path); code != exitBadInput || !strings.Contains(errs, "there is no limit in it") {
		t.Errorf("code %d, %q", code, errs)
	}
}
