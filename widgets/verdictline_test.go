package widgets

import (
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"
)

var someVerdicts = []Verdict{
	{State: Meets, Text: "PCC: meets the limits with 18 % to spare.", Before: "Before: 11th harmonic voltage at 1.4 times its limit."},
	{State: Fails, Text: "Board 2: 7th harmonic voltage at 1.12 times its limit.", Before: "Before: 1.9 times."},
	{State: NotAssessed, Text: "Board 3 is not assessed: no limit set is chosen for it."},
}

func TestVerdictLineLooks(t *testing.T) {
	for _, look := range looks {
		w := stage(t, look, fyne.NewSize(1280, 220*look.size), func() fyne.CanvasObject {
			v := NewVerdictLine(func(int) {})
			v.SetVerdicts(someVerdicts)
			return v
		})
		keep(t, "verdict-"+look.name, w.Canvas().Capture())
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
	if len(tapped) != 2 || tapped[0] != 1 || tapped[1] != 0 {
		t.Fatalf("tapped %v, want [1 0]", tapped)
	}
}
