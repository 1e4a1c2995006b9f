package main

import (
	"errors"
	"os"
	"path/filepath"
	"slices"
	"testing"
	"time"

	"quietbus/study"
)

// small is a study of two buses with one measure.
func small() *study.Study {
	s := blankStudy()
	s.Title.Study = "Small site (invented)"
	s.Title.Invented = true
	s.Buses = []study.Bus{{Named: study.Named{Name: "MV"}, NominalKV: 11}, {Named: study.Named{Name: "LV"}, NominalKV: 0.4}}
	s.Supplies = []study.Supply{{Named: study.Named{Name: "Grid"}, Bus: "MV", FaultMVA: 200, XOverR: 10}}
	s.Transformers = []study.Transformer{{Named: study.Named{Name: "T1"}, HVBus: "MV", LVBus: "LV", RatedKVA: 1000,
		HVKV: 11, LVKV: 0.4, ImpedancePercent: 6, XOverR: 6, VectorGroup: "Dyn11"}}
	s.NonlinearLoads = []study.NonlinearLoad{{Named: study.Named{Name: "Drives"}, Bus: "LV", KW: 300, Displacement: 0.95, Spectrum: "six-pulse"}}
	s.Banks = []study.Bank{{Named: study.Named{Name: "C1"}, Bus: "LV", Kvar: 250}}
	s.Measures = []study.Measure{
		{Named: study.Named{Name: "Detune C1"}, Kind: study.DetuneBank, Target: "C1", Percent: 7},
		{Named: study.Named{Name: "Remove C1"}, Kind: study.RemoveBank, Target: "C1"},
	}
	s.Assessments = []study.Assessment{{Named: study.Named{Name: "LV board"}, Bus: "LV", Set: "iec61000-2-4-class2"}}
	return s
}

func saved(t *testing.T) (*Project, string) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "small.study.json")
	if err := study.Save(path, small()); err != nil {
		t.Fatal(err)
	}
	p, err := OpenProject(path)
	if err != nil {
		t.Fatal(err)
	}
	return p, path
}

func TestProjectUndoRedo(t *testing.T) {
	p := NewProject(small())
	first := p.Study()
	base := p.Base()
	edit := func(kw float64) func(*study.Study) error {
		return func(s *study.Study) error { s.NonlinearLoads[0].KW = kw; return nil }
	}
	if err := p.Do("change Drives", edit(400)); err != nil {
		t.Fatal(err)
	}
	if first.NonlinearLoads[0].KW != 300 || p.Study().NonlinearLoads[0].KW != 400 {
		t.Fatal("an edit changed an older snapshot, or not the newest")
	}
	if p.Base() == base {
		t.Error("the base did not change with an edit")
	}
	p.Do("change Drives again", edit(500))
	if !p.Dirty() || p.CanUndo() != "change Drives again" || p.CanRedo() != "" {
		t.Fatalf("dirty %v, undo %q, redo %q", p.Dirty(), p.CanUndo(), p.CanRedo())
	}
	if name := p.Undo(); name != "change Drives again" || p.Study().NonlinearLoads[0].KW != 400 {
		t.Fatalf("undo of %q left %g kW", name, p.Study().NonlinearLoads[0].KW)
	}
	p.Undo()
	if p.Study() != first || p.Base() != base || p.Dirty() {
		t.Fatal("undo to the start does not bring the first study back, clean")
	}
	if p.Undo() != "" {
		t.Error("undo beyond the start")
	}
	p.Redo()
	p.Redo()
	if p.Study().NonlinearLoads[0].KW != 500 || p.Redo() != "" {
		t.Fatal("redo does not reach the last edit")
	}
	p.Undo()
	p.Do("another", edit(1))
	if p.CanRedo() != "" {
		t.Error("an edit after undo leaves a redo that would lose it")
	}
}

func TestProjectFailedEditChangesNothing(t *testing.T) {
	p := NewProject(small())
	was := p.Study()
	wrong := errors.New("no")
	if err := p.Do("x", func(s *study.Study) error { s.Buses = nil; return wrong }); err != wrong {
		t.Fatalf("error %v", err)
	}
	if p.Study() != was || len(p.Study().Buses) != 2 || p.CanUndo() != "" {
		t.Fatal("a failed edit left a trace")
	}
}

func TestProjectSwitchKeepsBase(t *testing.T) {
	p := NewProject(small())
	base := p.Base()
	p.Switch("Detune C1 on", []string{"Detune C1"})
	if p.Base() != base {
		t.Error("a switch changed the base: the before would be computed anew")
	}
	if on := p.Study().OnMeasures(); !slices.Equal(on, []string{"Detune C1"}) {
		t.Errorf("on: %v", on)
	}
	if p.Undo(); len(p.Study().OnMeasures()) != 0 {
		t.Error("undo left the switch on")
	}
}

func TestProjectSave(t *testing.T) {
	p, path := saved(t)
	if p.Dirty() || p.Path() != path || p.Name() != "small.study.json" {
		t.Fatalf("opened: dirty %v, path %s, name %s", p.Dirty(), p.Path(), p.Name())
	}
	if err := NewProject(small()).Save(false); !errors.Is(err, ErrNoPath) {
		t.Errorf("saving without a path: %v", err)
	}
	p.Do("title", func(s *study.Study) error { s.Title.Client = "A client (invented)"; return nil })
	if err := p.Save(false); err != nil || p.Dirty() {
		t.Fatalf("save: %v, dirty %v", err, p.Dirty())
	}
	again, err := OpenProject(path)
	if err != nil || again.Study().Title.Client != "A client (invented)" {
		t.Fatalf("read back: %v", err)
	}

	// Another program writes the file.
	if err := study.Save(path, small()); err != nil {
		t.Fatal(err)
	}
	p.Do("title", func(s *study.Study) error { s.Title.Client = "Ours"; return nil })
	var outside *ChangedOutside
	if err := p.Save(false); !errors.As(err, &outside) || !p.Dirty() {
		t.Fatalf("save over a changed file: %v", err)
	}
	if err := p.Save(true); err != nil {
		t.Fatal(err)
	}
	if err := p.Save(false); err != nil {
		t.Errorf("save after a forced save: %v", err)
	}

	other := filepath.Join(t.TempDir(), "other.study.json")
	if err := p.SaveAs(other); err != nil || p.Path() != other {
		t.Fatalf("save as: %v, path %s", err, p.Path())
	}
	if err := p.SaveAs(filepath.Join(other, "no", "such.json")); err == nil || p.Path() != other {
		t.Error("a failed save as changed the path")
	}
}

func TestProjectOpenWithMistakes(t *testing.T) {
	s := small()
	s.NonlinearLoads[0].Bus = "nowhere"
	path := filepath.Join(t.TempDir(), "bad.study.json")
	if err := study.Save(path, s); err != nil {
		t.Fatal(err)
	}
	p, err := OpenProject(path)
	var mistakes study.FieldErrors
	if !errors.As(err, &mistakes) || p == nil {
		t.Fatalf("project %v, error %v", p, err)
	}
	if mistakes[0].Item != "Drives" || mistakes[0].Field != "bus" {
		t.Errorf("the mistake is said to be in %s, field %s", mistakes[0].Item, mistakes[0].Field)
	}
	os.WriteFile(path, []byte(`{"format": 1, "tit`), 0o644)
	if p, err := OpenProject(path); err == nil || p != nil {
		t.Errorf("a truncated file opened: %v %v", p, err)
	}
}

func TestRecent(t *testing.T) {
	dir := t.TempDir()
	r := NewRecent(dir)
	if len(r.Files()) != 0 {
		t.Fatal("a new list is not empty")
	}
	var paths []string
	for _, name := range []string{"a", "b", "c", "d", "e", "f", "g", "h", "i", "j", "k", "l"} {
		path := filepath.Join(dir, name+".study.json")
		os.WriteFile(path, []byte("{}"), 0o644)
		paths = append(paths, path)
		if err := r.Add(path); err != nil {
			t.Fatal(err)
		}
	}
	r.Add(paths[11])
	files := r.Files()
	if len(files) != maxRecent || files[0] != paths[11] || files[1] != paths[10] {
		t.Errorf("recent files %v", files)
	}
	os.Remove(paths[10])
	if slices.Contains(r.Files(), paths[10]) {
		t.Error("a file that is gone is still offered")
	}
	os.WriteFile(filepath.Join(dir, "recent.json"), []byte("not json"), 0o644)
	if len(NewRecent(dir).Files()) != 0 {
		t.Error("a damaged list is not taken as empty")
	}
}

func TestKeeperAndLeftoversRace(t *testing.T) {
	dir := t.TempDir()
	k := NewKeeper(dir)
	s := small()
	for i := range 20 {
		next := s.Clone()
		next.NonlinearLoads[0].KW = float64(100 + i)
		k.Keep("/somewhere/small.study.json", next)
	}
	if err := k.Close(); err != nil {
		t.Fatal(err)
	}
	left := Leftovers(dir)
	if len(left) != 1 {
		t.Fatalf("%d studies left over, want 1", len(left))
	}
	if kw := left[0].Study.NonlinearLoads[0].KW; kw != 119 {
		t.Errorf("kept %g kW, want the last edit's 119", kw)
	}
	if left[0].Path != "/somewhere/small.study.json" || time.Since(left[0].When) > time.Minute {
		t.Errorf("kept path %s at %s", left[0].Path, left[0].When)
	}
	if p := left[0].Project(); !p.Dirty() || p.Path() != left[0].Path {
		t.Error("recovered work is not marked as unsaved on its own file")
	}

	k = NewKeeper(dir)
	k.Keep("", s)
	k.Drop()
	if err := k.Close(); err != nil {
		t.Fatal(err)
	}
	if left := Leftovers(dir); len(left) != 0 {
		t.Errorf("%d studies left over after they were given up", len(left))
	}

	// Work of a process that still runs is not ours to take.
	os.WriteFile(filepath.Join(dir, "unsaved-1.json"), []byte(`{"study": {}}`), 0o644)
	if left := Leftovers(dir); len(left) != 0 {
		t.Errorf("work of a running process is offered: %v", left)
	}
}

func TestKeeperReportsFailure(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "file")
	os.WriteFile(dir, nil, 0o644) // a file where the folder should be
	k := NewKeeper(dir)
	k.Keep("", small())
	if err := k.Close(); err == nil {
		t.Error("a recovery file that cannot be written goes unnoticed")
	}
}
