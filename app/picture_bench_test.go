//go:build !headless

package main

import (
	"context"
	"testing"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
	"quietbus/study/figure"
	"quietbus/study/phasor"
	"quietbus/testdata"
	"quietbus/widgets"
)

// BenchmarkFlipToPicture30 is the time from a flipped switch to four finished
// panels of 640 x 380 pixels: 30 buses, 50 orders, the impedance scanned anew.
// The toolkit's own repaint of the window comes on top.
func BenchmarkFlipToPicture30(b *testing.B) {
	s, err := study.Parse(testdata.Thirty)
	if err != nil {
		b.Fatal(err)
	}
	p, err := study.Prepare(s)
	if err != nil {
		b.Fatal(err)
	}
	ctx, sel := context.Background(), figure.Selection{Bus: "B0"}
	before, err := p.Evaluate(ctx, nil)
	if err != nil {
		b.Fatal(err)
	}
	was, err := p.Impedance(ctx, nil, sel.Bus, phasor.Positive, 1, 50)
	if err != nil {
		b.Fatal(err)
	}
	var panels [4]widgets.Raster
	sets := [][]string{{"FB0"}, {"FB0", "FB3"}}
	for i := 0; b.Loop(); i++ {
		on := sets[i%2]
		after, err := p.Evaluate(ctx, on)
		if err != nil {
			b.Fatal(err)
		}
		now, err := p.Impedance(ctx, on, sel.Bus, phasor.Positive, 1, 50)
		if err != nil {
			b.Fatal(err)
		}
		for k, f := range []*figure.Figure{
			figure.Spectrum(before, after, sel), figure.Waveform(before, after, sel),
			figure.Impedance([]*study.ScanResult{was}, []*study.ScanResult{now}, []int{5, 7, 11, 13}), figure.Margins(before, after),
		} {
			panels[k].Reset(640, 380, widgets.UnitDPI, figure.Light().Ground)
			w, h := panels[k].Size()
			f.Draw(draw.NewCanvas(&panels[k], vg.Length(w), vg.Length(h)), figure.Light())
		}
	}
}
