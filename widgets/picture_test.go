package widgets

import (
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"
	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/assets"
)

func bars(c draw.Canvas) []Hot {
	p := plot.New()
	p.X.Label.Text = "Order"
	p.Y.Label.Text = "Voltage, %"
	b, _ := plotter.NewBarChart(plotter.Values{1, 5, 3, 2, 0.5, 0.2}, vg.Points(10))
	b.Color = assets.Light.After
	p.Add(plotter.NewGrid(), b)
	p.Draw(c)
	return []Hot{{Rect: vg.Rectangle{Min: vg.Point{X: 100, Y: 60}, Max: vg.Point{X: 110, Y: 160}}, ID: "5", Role: "value", Text: "Order 5\nbefore\t5.2 %\nafter\t1.1 %"}}
}

func TestPictureLooks(t *testing.T) {
	for _, look := range looks {
		w := stage(t, look, fyne.NewSize(480, 300), func() fyne.CanvasObject { return NewPicture(bars) })
		test.MoveMouse(w.Canvas(), fyne.NewPos(140, 150))
		keep(t, "picture-"+look.name, w.Canvas().Capture())
	}
}
