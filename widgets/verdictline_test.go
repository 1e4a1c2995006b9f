package widgets

import (
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/test"
	"fyne.io/fyne/v2/widget"
)

var someVerdicts = []Verdict{
	{State: Meets, Text: "PCC: meets the limits with 18 % to spare; closest is the 11th harmonic voltage.", Before: "Before: 11th harmonic voltage at 1.4 x its limit."},
	{State: Fails, Text: "Board 2: 7th harmonic voltage at 1.12 x its limit (5.6 % against 5 %) and 2 more over, which is a long sentence that has to wrap on most windows and goes on.", Before: "Before: 1.9 x."},
	{State: NotAssessed, Text: "Board 3 is not assessed: no limit set is chosen for it."},
}

func TestVerdictLineLooks(t *testing.T) {
	for _, look := range looks {
		for _, width := range []float32{1280, 640} {
			w := stage(t, look, fyne.NewSize(width, 800), func() fyne.CanvasObject {
				v := NewVerdictLine(func(int) {})
				v.SetVerdicts(someVerdicts)
				return container.NewBorder(v, nil, nil, nil, widget.NewLabel("What is below."))
			})
			assertFits(t, look.name, w)
			if width == 1280 {
				golden(t, "verdict-"+look.name, top(w.Canvas().Capture(), int(180*look.size*look.pixels)))
			}
		}
	}
}

func TestVerdictLineTapsAndKeys(t *testing.T) {
	var tapped []int
	var v *VerdictLine
	w := stage(t, plain, fyne.NewSize(900, 200), func() fyne.CanvasObject {
		v = NewVerdictLine(func(i int) { tapped = append(tapped, i) })
		v.SetVerdicts(someVerdicts)
		return v
	})
	test.TapCanvas(w.Canvas(), fyne.NewPos(300, v.rows[1].Position().Y+10))
	test.FocusNext(w.Canvas())
	w.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	test.FocusNext(w.Canvas())
	w.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: fyne.KeySpace})
	if len(tapped) != 3 || tapped[0] != 1 || tapped[1] != 0 || tapped[2] != 1 {
		t.Fatalf("tapped %v, want [1 0 1]", tapped)
	}
	v.SetNote("Not solved: bus LV2 has no supply.")
	w.Canvas().Unfocus()
	test.FocusNext(w.Canvas())
	if w.Canvas().Focused() != nil {
		t.Error("a note takes the focus")
	}
	test.TapCanvas(w.Canvas(), fyne.NewPos(300, 10))
	if len(tapped) != 3 {
		t.Error("a note can be tapped")
	}
}

// A flip that shortens a sentence leaves what is below where it is.
func TestVerdictLineDoesNotJump(t *testing.T) {
	var v *VerdictLine
	w := stage(t, plain, fyne.NewSize(500, 900), func() fyne.CanvasObject {
		v = NewVerdictLine(nil)
		v.SetVerdicts(someVerdicts)
		return container.NewBorder(v, nil, nil, nil, widget.NewLabel("below"))
	})
	before := v.MinSize().Height
	short := append([]Verdict(nil), someVerdicts...)
	short[1].Text, short[1].Before = "Board 2: meets.", ""
	v.SetVerdicts(short)
	if after := v.MinSize().Height; after != before {
		t.Errorf("height went from %g to %g", before, after)
	}
	v.SetVerdicts(short[:1])
	settle(w)
	if after := v.MinSize().Height; after >= before {
		t.Errorf("height stays at %g for one sentence", after)
	}
	long := make([]Verdict, 40)
	for i := range long {
		long[i] = someVerdicts[0]
	}
	v.SetVerdicts(long)
	settle(w)
	if h := v.MinSize().Height; h > 0.29*900 {
		t.Errorf("40 sentences take %g of 900", h)
	}
}

// The three states differ without colour: drawn in one ink, their marks are
// far apart.
func TestStateMarksDifferByShape(t *testing.T) {
	pictures := make([]*Raster, 3)
	for s := range pictures {
		r := NewRaster(40, 40, UnitDPI)
		w, h := r.Size()
		DrawState(newCanvas(r, w, h), State(s), black, black, black, white)
		pictures[s] = r
	}
	for i := range pictures {
		for j := range i {
			_, _, far := difference(t, pictures[i].Image(), pictures[j].Image())
			if far < 0.2 {
				t.Errorf("marks %d and %d differ in %.0f %% of their pixels", i, j, 100*far)
			}
		}
		for j := range i {
			if State(i).Word() == State(j).Word() {
				t.Errorf("states %d and %d have one word", i, j)
			}
		}
	}
}
