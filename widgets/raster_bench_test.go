package widgets

import (
	"image/color"
	"math"
	"testing"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/recorder"
	"gonum.org/v1/plot/vg/vgimg"

	"quietbus/assets"
)

// fourPanels are pictures like those of the evidence side: spectrum bars before
// and after with a limit line, waveforms, impedance against frequency, margins.
func fourPanels() []*plot.Plot {
	plot.DefaultFont = font.Font{Typeface: "Liberation", Variant: "Sans"}
	cache := font.NewCache(liberation.Collection())
	pal := assets.Light
	panel := func(x, y string) *plot.Plot {
		p := plot.New()
		p.TextHandler = text.Plain{Fonts: cache}
		for _, style := range []*text.Style{&p.X.Label.TextStyle, &p.Y.Label.TextStyle, &p.X.Tick.Label, &p.Y.Tick.Label, &p.Title.TextStyle} {
			style.Handler = p.TextHandler
		}
		p.X.Label.Text, p.Y.Label.Text = x, y
		grid := plotter.NewGrid()
		grid.Horizontal.Color, grid.Vertical.Color = pal.Grid, pal.Grid
		p.Add(grid)
		return p
	}
	curve := func(p *plot.Plot, n int, f func(t float64) (x, y float64), c color.Color, w vg.Length, dashes ...vg.Length) {
		xy := make(plotter.XYs, n)
		for i := range xy {
			xy[i].X, xy[i].Y = f(float64(i) / float64(n-1))
		}
		l, err := plotter.NewLine(xy)
		if err != nil {
			panic(err)
		}
		l.Color, l.Width, l.Dashes = c, w, dashes
		p.Add(l)
	}
	spectrum := panel("Order", "Voltage, %")
	for k, scale := range []float64{1, 0.5} {
		values := make(plotter.Values, 50)
		for h := range values {
			if h%6 == 4 || h%6 == 0 {
				values[h] = scale * 20 / float64(h+1)
			}
		}
		b, err := plotter.NewBarChart(values, vg.Points(2))
		if err != nil {
			panic(err)
		}
		b.Offset = vg.Points(float64(2*k - 1))
		b.Color = []color.Color{pal.Before, pal.After}[k]
		b.LineStyle.Width = 0
		spectrum.Add(b)
	}
	curve(spectrum, 50, func(t float64) (x, y float64) { return t * 49, 6 - 5*t }, pal.Limit, vg.Points(1))

	wave := panel("Time, ms", "Current, A")
	for k, a := range []float64{20, 5} {
		curve(wave, 512, func(t float64) (x, y float64) {
			w := 2 * math.Pi * t
			return 20 * t, 100*math.Sin(w) + a*math.Sin(5*w) + a*0.7*math.Sin(7*w)
		}, []color.Color{pal.Before, pal.After}[k], vg.Points(1.5))
	}

	scan := panel("Frequency, Hz", "Impedance, ohm")
	for k, at := range []float64{11, 4.2} {
		curve(scan, 800, func(t float64) (x, y float64) {
			h := 1 + 49*t
			d := 1 - h*h/at/at
			return 50 * h, h * 0.02 / math.Sqrt(d*d+h*h*0.0004)
		}, []color.Color{pal.Before, pal.After}[k], vg.Points(1.5), [][]vg.Length{{vg.Points(4), vg.Points(2)}, nil}[k]...)
	}

	margins := panel("Share of the limit, %", "")
	for k := range 2 {
		b, err := plotter.NewBarChart(plotter.Values{140, 96, 80, 71, 60, 52, 33, 21}, vg.Points(4))
		if err != nil {
			panic(err)
		}
		b.Horizontal, b.Offset = true, vg.Points(float64(6*k-3))
		b.Color = []color.Color{pal.Before, pal.After}[k]
		b.LineStyle.Width = 0
		margins.Add(b)
	}
	margins.NominalY("PCC 5th", "PCC 7th", "PCC 11th", "PCC 13th", "Board 1 5th", "Board 1 7th", "Board 2 5th", "Board 2 THD")
	return []*plot.Plot{spectrum, wave, scan, margins}
}

// Panels of 420 by 280 window units, four of which fill the evidence side of a
// window of 1280 by 800.
const benchWidth, benchHeight = 420, 280

func benchRaster(b *testing.B, scale float64) {
	panels := fourPanels()
	r := make([]Raster, len(panels))
	for b.Loop() {
		for i, p := range panels {
			r[i].Reset(int(benchWidth*scale), int(benchHeight*scale), UnitDPI*scale, assets.Light.Ground)
			p.BackgroundColor = nil
			p.Draw(draw.New(&r[i]))
		}
	}
}

func benchStock(b *testing.B, scale float64) {
	panels := fourPanels()
	for b.Loop() {
		for _, p := range panels {
			c := vgimg.NewWith(vgimg.UseWH(Points(benchWidth), Points(benchHeight)), vgimg.UseDPI(int(UnitDPI*scale)), vgimg.UseBackgroundColor(assets.Light.Ground))
			p.BackgroundColor = nil
			p.Draw(draw.New(c))
		}
	}
}

func BenchmarkFourPanelsRaster1x(b *testing.B) { benchRaster(b, 1) }
func BenchmarkFourPanelsRaster2x(b *testing.B) { benchRaster(b, 2) }
func BenchmarkFourPanelsStock1x(b *testing.B)  { benchStock(b, 1) }
func BenchmarkFourPanelsStock2x(b *testing.B)  { benchStock(b, 2) }

// The same strokes, fills and strings without gonum/plot's own work of layout.
func benchReplay(b *testing.B, scale float64) {
	panels := fourPanels()
	var r Raster
	recs := make([]recorder.Canvas, len(panels))
	for i, p := range panels {
		p.BackgroundColor = nil
		p.Draw(draw.NewCanvas(&recs[i], Points(benchWidth), Points(benchHeight)))
	}
	for b.Loop() {
		for i := range recs {
			r.Reset(int(benchWidth*scale), int(benchHeight*scale), UnitDPI*scale, assets.Light.Ground)
			if err := recs[i].ReplayOn(&r); err != nil {
				b.Fatal(err)
			}
		}
	}
}

func BenchmarkFourPanelsRasterOnly1x(b *testing.B) { benchReplay(b, 1) }
func BenchmarkFourPanelsRasterOnly2x(b *testing.B) { benchReplay(b, 2) }
