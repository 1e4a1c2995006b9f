//go:build !headless

package main

import (
	"errors"
	"fmt"
	"image"
	"image/png"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/storage"
	"fyne.io/fyne/v2/test"
	"fyne.io/fyne/v2/widget"

	"quietbus/study"
	"quietbus/study/handout"
	"quietbus/widgets"
)

// bed is a window on the toolkit's test driver, whose main routine is the
// test's own.
type bed struct {
	t *testing.T
	*Window
	queue chan func()
}

func newBed(t *testing.T) *bed {
	t.Helper()
	t.Setenv("QUIETBUS_HOME", t.TempDir())
	b := &bed{t: t, queue: make(chan func(), 1000)}
	a := test.NewTempApp(t)
	a.Preferences().SetBool("guided", true)
	b.Window = NewWindow(a, func(f func()) { b.queue <- f })
	t.Cleanup(func() {
		b.eval.Stop()
		b.sets.Stop()
		b.keeper.Close()
	})
	b.win.Resize(fyne.NewSize(1280, 780))
	b.Start("")
	b.settle()
	return b
}

// settle runs what comes in until the picture of the newest switch position is
// there.
func (b *bed) settle() {
	b.t.Helper()
	timeout := time.After(10 * time.Second)
	for {
		s := b.project.Study()
		if p := b.picture; p != nil && p.Study == b.project.Base() && slices.Equal(p.On, s.OnMeasures()) && p.ScanBus == b.sel.Bus && !b.listsStale {
			return
		}
		select {
		case f := <-b.queue:
			f()
		case <-timeout:
			b.t.Fatal("no picture came")
		}
	}
}

// overlay returns the object that lies over the window, nil for none.
func (b *bed) overlay() fyne.CanvasObject { return b.win.Canvas().Overlays().Top() }

// find returns the first object of type T under the overlay, else under the
// window's content, for which ok holds.
func find[T fyne.CanvasObject](b *bed, ok func(T) bool) (found T) {
	b.t.Helper()
	root := b.overlay()
	if root == nil {
		root = b.win.Content()
	}
	if !search(root, ok, &found) {
		b.t.Fatalf("no %T on the screen", found)
	}
	return found
}

func search[T fyne.CanvasObject](o fyne.CanvasObject, ok func(T) bool, found *T) bool {
	if v, is := o.(T); is && ok(v) {
		*found = v
		return true
	}
	var children []fyne.CanvasObject
	switch c := o.(type) {
	case *fyne.Container:
		children = c.Objects
	case fyne.Widget:
		children = test.WidgetRenderer(c).Objects()
	}
	for _, c := range children {
		if search(c, ok, found) {
			return true
		}
	}
	return false
}

// press taps the button of a label.
func (b *bed) press(label string) {
	b.t.Helper()
	test.Tap(find(b, func(w *keyButton) bool { return w.Text == label && w.Visible() }))
	b.settle()
}

func (b *bed) sheet() *widgets.Sheet {
	b.t.Helper()
	return find(b, func(*widgets.Sheet) bool { return true })
}

// said returns every text on the overlay.
func (b *bed) said() string {
	var text strings.Builder
	var none *widget.Entry
	if o := b.overlay(); o != nil {
		search(o, func(*widget.Entry) bool { return false }, &none)
		var walk func(o fyne.CanvasObject)
		walk = func(o fyne.CanvasObject) {
			if l, ok := o.(*widget.Label); ok {
				text.WriteString(l.Text + "\n")
			}
			switch c := o.(type) {
			case *fyne.Container:
				for _, k := range c.Objects {
					walk(k)
				}
			case fyne.Widget:
				for _, k := range test.WidgetRenderer(c).Objects() {
					walk(k)
				}
			}
		}
		walk(o)
	}
	return text.String()
}

func TestWindowFlipFollowsSwitch(t *testing.T) {
	b := newBed(t)
	if len(b.verdict.Verdicts()) == 0 {
		t.Fatal("the demo opens without a verdict")
	}
	was := b.verdict.Verdicts()[0].Text
	name := b.project.Study().Measures[0].Name
	test.Tap(b.measures.row.Card(name).Switch())
	b.settle()
	if on := b.picture.After.On; !slices.Equal(on, []string{name}) {
		t.Errorf("the picture belongs to %v", on)
	}
	now := b.verdict.Verdicts()[0]
	if now.Text == was || now.Before == "" {
		t.Errorf("verdict after the flip: %q, %q", now.Text, now.Before)
	}
	if !strings.Contains(b.win.Title(), "unsaved") {
		t.Errorf("title %q", b.win.Title())
	}
	b.undo()
	b.settle()
	if b.verdict.Verdicts()[0].Text != was || b.project.Dirty() {
		t.Error("undo does not bring the verdict back")
	}
}

func TestWindowFlipTakesTheOtherOff(t *testing.T) {
	b := newBed(t)
	b.adopt(NewProject(small()))
	b.settle()
	b.flip("Detune C1")
	b.settle()
	b.flip("Remove C1")
	b.settle()
	if on := b.project.Study().OnMeasures(); !slices.Equal(on, []string{"Remove C1"}) {
		t.Errorf("on: %v", on)
	}
	if _, said := b.status.Texts(); !strings.Contains(said, "Detune C1 went off") {
		t.Errorf("the status line says %q", said)
	}
}

// TestWindowBuildFromNothing builds a study by hand, item by item, with the
// sheets, as far as a verdict.
func TestWindowBuildFromNothing(t *testing.T) {
	b := newBed(t)
	b.adopt(NewProject(blankStudy()))
	b.settle()
	add := func(kind study.Kind, fields ...string) {
		t.Helper()
		b.add(kind, "")
		s := b.sheet()
		for i := 0; i < len(fields); i += 2 {
			s.SetText(fields[i], fields[i+1])
			if p := s.Problem(fields[i]); p != "" {
				t.Fatalf("%s, %s %q: %s", kind, fields[i], fields[i+1], p)
			}
		}
		s.Apply()
		if b.overlay() != nil {
			t.Fatalf("the sheet of the new %s stays open: %v", kind, s.Problems())
		}
		b.settle()
	}
	add(study.KindBus, "name", "Intake", "nominalKV", "11")
	add(study.KindBus, "name", "Board", "nominalKV", "0.4")
	add(study.KindSupply, "bus", "Intake", "faultMVA", "200")
	add(study.KindTransformer, "hvBus", "Intake", "lvBus", "Board", "ratedKVA", "1000")
	add(study.KindNonlinearLoad, "name", "Drives", "bus", "Board", "kW", "300", "spectrum", titleOf(study.KindNonlinearLoad, "spectrum", "six-pulse"))
	add(study.KindBank, "name", "C1", "bus", "Board", "kvar", "250")
	add(study.KindAssessment, "bus", "Board")
	if b.picture.Err != nil {
		t.Fatalf("not solved: %v", b.picture.Err)
	}
	if v := b.verdict.Verdicts(); len(v) != 1 || v[0].State != widgets.Fails {
		t.Fatalf("verdict %+v", v)
	}
	add(study.KindMeasure, "name", "Detune", "kind", kindWord(study.DetuneBank), "target", "C1", "percent", "7")
	b.flip("Detune")
	b.settle()
	if b.picture.Err != nil {
		t.Fatalf("not solved with the measure on: %v", b.picture.Err)
	}
	share := worstShare(b.picture.After)
	if !(share < worstShare(b.picture.Before)) {
		t.Errorf("detuning changes the worst limit from %.3g to %.3g", worstShare(b.picture.Before), share)
	}
	n := 0
	for b.project.CanUndo() != "" {
		b.undo()
		n++
	}
	b.settle()
	if n != 9 || len(b.project.Study().Buses) != 0 {
		t.Errorf("%d steps back, %d buses left", n, len(b.project.Study().Buses))
	}
}

func TestSheetNamesWhatIsWrong(t *testing.T) {
	b := newBed(t)
	b.adopt(NewProject(small()))
	b.settle()
	was := b.project.Study()
	for _, c := range []struct{ item, field, text string }{
		{"T1", "ratedKVA", "0"},
		{"T1", "ratedKVA", "-5"},
		{"T1", "ratedKVA", "lots"},
		{"T1", "ratedKVA", ""},
		{"T1", "vectorGroup", "Xyz"},
		{"T1", "name", "Drives"},
		{"T1", "name", ""},
		{"Grid", "xOverR", "NaN"},
	} {
		b.edit(c.item)
		s := b.sheet()
		s.SetText(c.field, c.text)
		if s.Problem(c.field) == "" {
			t.Errorf("%s, %s %q is taken", c.item, c.field, c.text)
		}
		s.Apply()
		if b.overlay() == nil {
			t.Errorf("%s, %s %q can be applied", c.item, c.field, c.text)
		} else {
			s.OnCancel()
		}
		if b.project.Study() != was {
			t.Fatal("a sheet that was not applied changed the study")
		}
	}
}

func TestSheetRenamesReferences(t *testing.T) {
	b := newBed(t)
	b.adopt(NewProject(small()))
	b.settle()
	b.edit("LV")
	s := b.sheet()
	s.SetText("name", "Board")
	s.Apply()
	b.settle()
	now := b.project.Study()
	if now.Transformers[0].LVBus != "Board" || now.Assessments[0].Bus != "Board" || b.picture.Err != nil {
		t.Errorf("after renaming: LV bus %q, assessed %q, %v", now.Transformers[0].LVBus, now.Assessments[0].Bus, b.picture.Err)
	}
	if b.sel.Bus != "Board" {
		t.Errorf("selected is %q", b.sel.Bus)
	}
}

func TestRemoveNamesWhatStillUsesIt(t *testing.T) {
	b := newBed(t)
	b.adopt(NewProject(small()))
	b.settle()
	b.remove("LV")
	if said := b.said(); !strings.Contains(said, "T1") || !strings.Contains(said, "LV") {
		t.Errorf("said: %q", said)
	}
	b.press("OK")
	b.remove("Detune C1")
	b.settle()
	if len(b.project.Study().Measures) != 1 {
		t.Error("a measure could not be removed")
	}
	b.undo()
	b.settle()
	if len(b.project.Study().Measures) != 2 {
		t.Error("undo does not bring it back")
	}
}

func TestBadFileLeavesStudyUntouched(t *testing.T) {
	b := newBed(t)
	b.adopt(NewProject(small()))
	b.settle()
	was := b.project
	dir := t.TempDir()
	for name, data := range map[string]string{
		"truncated.json": `{"format": 1, "title": {"stu`,
		"binary.json":    "\x00\x01\x7fELF",
		"version.json":   `{"format": 77, "title": {"study": "x"}, "frequencyHz": 50}`,
	} {
		path := filepath.Join(dir, name)
		os.WriteFile(path, []byte(data), 0o644)
		b.dropped(fyne.Position{}, []fyne.URI{storage.NewFileURI(path)})
		if said := b.said(); b.overlay() == nil || len(said) < 20 {
			t.Errorf("%s: said %q", name, said)
		}
		b.press("OK")
		if b.project != was {
			t.Fatalf("%s replaced the open study", name)
		}
	}
	s := small()
	s.NonlinearLoads[0].Bus = "nowhere"
	path := written(t, s)
	b.open(path)
	if said := b.said(); !strings.Contains(said, "Drives") || !strings.Contains(said, "bus") {
		t.Errorf("said %q", said)
	}
	b.press("Leave it closed")
	if b.project != was {
		t.Error("a study with mistakes replaced the open one")
	}
	b.open(path)
	b.press("Open it to mend")
	if b.project == was || b.picture.Err == nil {
		t.Error("the study is not open to be mended")
	}
	b.edit("Drives")
	sheet := b.sheet()
	sheet.SetText("bus", "LV")
	sheet.Apply()
	b.settle()
	if b.picture.Err != nil {
		t.Errorf("mended, but: %v", b.picture.Err)
	}
}

func TestClosingAsksOnlyWhenUnsaved(t *testing.T) {
	b := newBed(t)
	p, path := saved(t)
	b.adopt(p)
	b.settle()
	asked := false
	b.guard(func() { asked = true })
	if !asked || b.overlay() != nil {
		t.Error("a saved study asks before it is closed")
	}
	b.flip("Detune C1")
	b.settle()
	asked = false
	b.guard(func() { asked = true })
	if asked || b.overlay() == nil {
		t.Fatal("an unsaved study does not ask")
	}
	b.press("Save")
	again, err := OpenProject(path)
	if !asked || err != nil || !slices.Equal(again.Study().OnMeasures(), []string{"Detune C1"}) {
		t.Errorf("after Save: asked %v, %v", asked, err)
	}
}

func TestNewStudyIsSolvable(t *testing.T) {
	b := newBed(t)
	b.newStudy()
	s := b.sheet()
	s.SetText("title", "A small site (invented)")
	s.SetText("kva", "630")
	s.SetText("kv", "oops")
	s.Apply()
	if b.overlay() == nil {
		t.Fatal("a voltage that is no number is taken")
	}
	s.SetText("kv", "20")
	s.Apply()
	b.settle()
	if b.picture.Err != nil || len(b.verdict.Verdicts()) != 1 {
		t.Fatalf("not solved: %v", b.picture.Err)
	}
	tr := b.project.Study().Transformers[0]
	if tr.RatedKVA != 630 || tr.HVKV != 20 {
		t.Errorf("transformer %+v", tr)
	}
	if tr.Provenance["impedancePercent"].Origin != study.Assumed || tr.Provenance["ratedKVA"].Origin == study.Assumed {
		t.Errorf("provenance %+v: what was answered is not assumed, what was not asked is", tr.Provenance)
	}
}

func TestDragMovesBus(t *testing.T) {
	b := newBed(t)
	base := b.project.Base()
	panel := b.line.panel
	var bus widgets.Hot
	for _, h := range panel.Hots() {
		if h.Role == "bus" {
			bus = h
		}
	}
	panel.OnDragged(bus, 36, -24)
	panel.OnDragged(bus, 12, 0)
	panel.OnDragEnd(bus)
	b.settle()
	at, ok := b.project.Study().Drawing[bus.ID]
	if !ok || b.project.CanUndo() != "Move "+bus.ID {
		t.Fatalf("%s is at %v; undo offers %q", bus.ID, at, b.project.CanUndo())
	}
	if b.project.Base() != base {
		t.Error("moving a bus has the study solved anew")
	}
	b.tidy()
	if len(b.project.Study().Drawing) != 0 {
		t.Error("tidy leaves a place given by hand")
	}
}

func TestSelectionTurnsEvidence(t *testing.T) {
	b := newBed(t)
	for _, name := range evidenceNames {
		b.evidence.turn(name)
		if slices.Contains(figureNames, name) && len(b.evidence.single.picture.Hots()) == 0 {
			t.Errorf("%s has no value to read out", name)
		}
	}
	b.verdictTapped(0)
	b.settle()
	first := b.project.Study().Assessments[0]
	if b.sel.Bus != first.Bus {
		t.Errorf("a tap on the verdict shows %+v", b.sel)
	}
	options, current := subjects(b.project.Study(), b.picture, b.sel)
	if !slices.Contains(options, current) {
		t.Errorf("%q is not among %v", current, options)
	}
	for _, option := range options { // every one of them can be looked at
		b.evidence.chosen(option)
		b.settle()
		for _, name := range figureNames {
			if b.evidence.figure(name) == nil {
				t.Errorf("%s: no %s", option, name)
			}
		}
	}
}

func TestEmptyStudySaysWhatToDo(t *testing.T) {
	b := newBed(t)
	b.adopt(NewProject(blankStudy()))
	b.settle()
	for _, name := range figureNames {
		p := b.evidence.panels[name].picture
		p.OnFault = func(err error) { t.Errorf("%s of an empty study: %v", name, err) }
		p.Refresh()
		p.Hots()
	}
	if b.picture.Err == nil {
		t.Error("an empty study is solved")
	}
	if text := unsolved(b.project.Study(), b.picture.Err); !strings.Contains(text, "Add a bus") {
		t.Errorf("the verdict line says %q", text)
	}
	b.export()
	if !strings.Contains(b.said(), "must be solved first") {
		t.Errorf("export of nothing says %q", b.said())
	}
}

func TestDutyPage(t *testing.T) {
	b := newBed(t)
	b.adopt(NewProject(small()))
	b.settle()
	b.evidence.turn(dutyName)
	if !b.evidence.duty.empty.Visible() {
		t.Error("with no measure on the page does not say so")
	}
	b.flip("Detune C1")
	b.settle()
	d := b.picture.After.Measures[0].Duty
	text := strings.Join(b.evidence.duty.shown, "\n")
	for _, want := range []string{"Detune C1: detuning reactor at LV", "Current " + short(d.CurrentA) + " A rms", short(d.PeakV) + " V crest", "of " + short(d.RatedV) + " V rms rated"} {
		if !strings.Contains(text, want) {
			t.Errorf("the duty page does not say %q:\n%s", want, text)
		}
	}
}

func TestTypedSpectrumInSheet(t *testing.T) {
	b := newBed(t)
	b.adopt(NewProject(small()))
	b.settle()
	b.edit("Drives")
	s := b.sheet()
	if _, shown := s.Text("lines"); shown {
		t.Error("lines are asked for though the spectrum is a typical one")
	}
	s.SetText("spectrum", titleOf(study.KindNonlinearLoad, "spectrum", study.Typed))
	s.SetText("lines", "5\t20\t180\n5\t4\t0")
	if s.Problem("lines") == "" {
		t.Error("an order that stands twice is taken")
	}
	s.SetText("lines", "5\t20\t180\n7\t11\t0")
	s.Apply()
	b.settle()
	l := b.project.Study().NonlinearLoads[0]
	if b.overlay() != nil || l.Spectrum != study.Typed || len(l.Lines) != 2 || l.Lines[1].Percent != 11 {
		t.Errorf("typed %+v; %v", l.Lines, s.Problems())
	}
}

func TestHandoutFromWindow(t *testing.T) {
	b := newBed(t)
	dir := filepath.Join(t.TempDir(), "handout")
	b.writeHandout(b.picture, dir)
	for b.dialog != "Handout written" {
		select {
		case f := <-b.queue:
			f()
		case <-time.After(20 * time.Second):
			t.Fatalf("no word of the handout; said %q", b.said())
		}
	}
	if _, err := os.Stat(filepath.Join(dir, "handout.pdf")); err != nil {
		t.Error(err)
	}
	if !strings.Contains(b.said(), dir) {
		t.Errorf("said %q", b.said())
	}
}

func TestSavedFigures(t *testing.T) {
	b := newBed(t)
	f := b.evidence.figure("Spectrum")
	for ext, head := range map[string]string{".svg": "<?xml", ".png": "\x89PNG", ".pdf": "%PDF"} {
		data, err := handout.EncodeFigure(f, ext, time.Now())
		if err != nil || !strings.HasPrefix(string(data), head) {
			t.Errorf("%s: %v, begins %q", ext, err, data[:min(len(data), 8)])
		}
	}
	if _, err := handout.EncodeFigure(f, ".gif", time.Now()); err == nil || !strings.Contains(err.Error(), ".svg") {
		t.Errorf("a form that is not known: %v", err)
	}
}

func TestRecoveryIsOffered(t *testing.T) {
	b := newBed(t)
	s := small()
	s.Title.Client = "Left behind (invented)"
	b.keeper.Keep("", s)
	if err := b.keeper.Close(); err != nil {
		t.Fatal(err)
	}
	b.keeper = NewKeeper(stateDir())
	b.offerRecovery()
	b.press("Go on with it")
	if b.project.Study().Title.Client != "Left behind (invented)" || !b.project.Dirty() {
		t.Errorf("recovered %+v", b.project.Study().Title)
	}
}

// TestLookAt draws the window by the toolkit's software painter at the least
// size, light and dark and with large type; nothing may reach beyond it.
func TestWindowFits(t *testing.T) {
	b := newBed(t)
	for _, c := range []struct {
		dark  bool
		scale float32
	}{{false, 1}, {true, 1}, {false, 1.2}} {
		b.look.dark, b.look.scale = c.dark, c.scale
		b.look.apply()
		b.settle()
		least := b.win.Content().MinSize()
		if least.Width > 1280 || least.Height > 750 {
			t.Errorf("type %g: the window needs %v, 1280 x 800 must hold it", c.scale, least)
		}
		img := b.win.Canvas().Capture()
		if dir := os.Getenv("QUIETBUS_SHOTS"); dir != "" {
			savePicture(t, filepath.Join(dir, fmt.Sprintf("painted-%v-%g.png", c.dark, c.scale)), img)
		}
	}
}

func savePicture(t *testing.T, path string, img image.Image) {
	f, err := os.Create(path)
	if err == nil {
		err = errors.Join(png.Encode(f, img), f.Close())
	}
	if err != nil {
		t.Error(err)
	}
}
