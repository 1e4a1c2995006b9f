package widgets

import (
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/test"
)

func someMeasures() []Measure {
	return []Measure{
		{ID: "F5", Name: "Filter at main board", Kind: "single-tuned filter", Place: "main board", Facts: "C 412 uF, L 0.63 mH, R 0.02 ohm",
			Cost: "18 400", Worth: "Alone: worst share 1.4 to 0.8. On top of what is on: 0.9 to 0.7.", On: true, Mark: diamond},
		{ID: "D7", Name: "Detune bank B1", Kind: "detuning reactor", Place: "bank B1", Facts: "7 %, order 3.78", Cost: "6 200",
			Conflict: "Cannot stand with \"Remove bank B1\": both change bank B1.", Mark: diamond},
		{ID: "A", Name: "A measure with a rather long name that does not fit", Kind: "active filter", Place: "board 2", Facts: "300 A, to order 25", Worth: "Alone: 1.4 to 1.1."},
		{ID: "R", Name: "Remove bank B1", Kind: "removal", Place: "bank B1", Worth: "Alone: 1.4 to 1.0."},
	}
}

// showMeasures shows the strip at the foot of a window.
func showMeasures(t *testing.T, l look, size fyne.Size, measures []Measure) (*MeasureRow, fyne.Window) {
	t.Helper()
	var m *MeasureRow
	w := stage(t, l, size, func() fyne.CanvasObject {
		m = NewMeasureRow()
		m.OnEdit, m.OnAdd = func(string) {}, func() {}
		m.SetMeasures(measures)
		return container.NewBorder(nil, m, nil, nil)
	})
	settle(w)
	return m, w
}

func TestMeasureRowLooks(t *testing.T) {
	for _, l := range looks {
		for _, height := range []float32{800 * l.size, 500 * l.size} {
			m, w := showMeasures(t, l, fyne.NewSize(1280, height), someMeasures())
			assertFits(t, l.name, w)
			name := "measures-"
			if height == 500*l.size {
				name = "measures-low-"
			}
			strip := w.Canvas().Capture()
			golden(t, name+l.name, bottom(strip, int(m.Size().Height*l.pixels)))
		}
		_, w := showMeasures(t, l, fyne.NewSize(900, 160*l.size), nil)
		assertFits(t, l.name+" empty", w)
		keep(t, "measures-empty-"+l.name, w.Canvas().Capture())
	}
}

// Cards leave the window its height: at most about a fifth of it, also with the
// largest type in the smallest window.
func TestMeasureRowLeavesRoom(t *testing.T) {
	for _, c := range []struct {
		size    float32
		height  float32
		compact bool
	}{{1, 800, false}, {1, 500, true}, {1.4, 800, true}, {2, 800, true}, {2, 1600, false}} {
		m, w := showMeasures(t, look{"", false, c.size, 1}, fyne.NewSize(1280, c.height), someMeasures())
		if m.Card("F5").compact != c.compact {
			t.Errorf("type %g in a window %g high: compact %v", c.size, c.height, !c.compact)
		}
		if h := m.MinSize().Height; h > 0.22*c.height {
			t.Errorf("type %g: the strip takes %g of %g", c.size, h, c.height)
		}
		w.Resize(fyne.NewSize(1280, 2000))
		settle(w)
		if m.Card("F5").compact {
			t.Error("the cards stay compact in a high window")
		}
	}
}

func TestMeasureRowSwitches(t *testing.T) {
	type flip struct {
		id string
		on bool
	}
	var flips []flip
	var edited, tapped []string
	added := 0
	var m *MeasureRow
	w := stage(t, plain, fyne.NewSize(1280, 200), func() fyne.CanvasObject {
		m = NewMeasureRow()
		m.OnChanged = func(id string, on bool) { flips = append(flips, flip{id, on}) }
		m.OnEdit = func(id string) { edited = append(edited, id) }
		m.OnTapped = func(id string) { tapped = append(tapped, id) }
		m.OnAdd = func() { added++ }
		return m
	})
	test.TapCanvas(w.Canvas(), fyne.CurrentApp().Driver().AbsolutePositionForObject(m.empty.button).AddXY(5, 5))
	if added != 1 {
		t.Fatalf("the empty state's button added %d", added)
	}
	m.SetMeasures(someMeasures())
	settle(w)
	middle := func(o fyne.CanvasObject) fyne.Position {
		return fyne.CurrentApp().Driver().AbsolutePositionForObject(o).AddXY(o.Size().Width/2, o.Size().Height/2)
	}
	sw := m.Card("R").Switch()
	if s := sw.Size(); s.Width < Target || s.Height < Target {
		t.Errorf("the switch is %v, a target is %v", s, Target)
	}
	test.TapCanvas(w.Canvas(), middle(sw))
	test.TapCanvas(w.Canvas(), middle(m.Card("F5").Switch()))
	if len(flips) != 2 || flips[0] != (flip{"R", true}) || flips[1] != (flip{"F5", false}) {
		t.Fatalf("flips %v", flips)
	}
	if !m.Card("R").Measure().On {
		t.Error("the card does not know that it is on")
	}

	// The same cards stay, with the focus, when only their words change.
	next := someMeasures()
	next[3].On, next[3].Worth = true, "On."
	card := m.Card("R")
	m.SetMeasures(next)
	if m.Card("R") != card || w.Canvas().Focused() != fyne.Focusable(m.Card("F5").Switch()) {
		t.Error("cards or focus changed with the words")
	}
	if len(flips) != 2 {
		t.Error("setting a switch from outside told OnChanged")
	}

	// By keyboard: from switch to edit button to the next switch.
	w.Canvas().Focused().TypedRune(' ')
	test.FocusNext(w.Canvas())
	w.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	test.FocusNext(w.Canvas())
	w.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	if len(flips) != 4 || flips[2] != (flip{"F5", false}) || flips[3] != (flip{"D7", true}) {
		t.Errorf("flips by keyboard %v", flips)
	}
	if len(edited) != 1 || edited[0] != "F5" {
		t.Errorf("edited %v", edited)
	}
	test.TapCanvas(w.Canvas(), middle(m.Card("A").name))
	if len(tapped) != 1 || tapped[0] != "A" {
		t.Errorf("tapped %v", tapped)
	}
	// A card reached by keyboard comes into view.
	w.Resize(fyne.NewSize(500, 200))
	w.Canvas().Focus(m.Card("R").Switch())
	at := fyne.CurrentApp().Driver().AbsolutePositionForObject(m.Card("R"))
	if at.X < 0 || at.X+m.Card("R").Size().Width > 500 {
		t.Errorf("the card with the focus is at %v of a strip 500 wide", at)
	}
	m.SetMeasures(next[:1])
	if m.Card("R") != nil || m.Card("F5") == nil {
		t.Error("the wrong card went away")
	}
}

func TestSwitchTellsByShape(t *testing.T) {
	var s *Switch
	w := stage(t, plain, fyne.NewSize(64, 40), func() fyne.CanvasObject {
		s = NewSwitch(false, nil)
		return s
	})
	off := w.Canvas().Capture()
	s.SetOn(true)
	on := w.Canvas().Capture()
	keep(t, "switch-off", off)
	keep(t, "switch-on", on)
	if _, _, far := difference(t, grey(off), grey(on)); far < 0.15 {
		t.Errorf("without colour on and off differ in %.0f %% of the pixels", 100*far)
	}
	s.Disable()
	s.Tapped(&fyne.PointEvent{})
	if !s.On {
		t.Error("a disabled switch flipped when tapped")
	}
	s.TypedRune(' ')
	if !s.On {
		t.Error("a disabled switch flipped by keyboard")
	}
	if s.Cursor() != desktop.DefaultCursor {
		t.Error("a disabled switch invites a tap")
	}
}
