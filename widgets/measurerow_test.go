package widgets

import (
	"testing"

	"fyne.io/fyne/v2"
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

func TestMeasureRowLooks(t *testing.T) {
	for _, look := range looks {
		w := stage(t, look, fyne.NewSize(1280, 190*look.size), func() fyne.CanvasObject {
			m := NewMeasureRow()
			m.SetMeasures(someMeasures())
			return m
		})
		keep(t, "measures-"+look.name, w.Canvas().Capture())
		w = stage(t, look, fyne.NewSize(900, 190*look.size), func() fyne.CanvasObject { return NewMeasureRow() })
		keep(t, "measures-empty-"+look.name, w.Canvas().Capture())
	}
}
