package widgets

import (
	"image"
	"image/color"
	"image/draw"
	"math"
	"math/rand/v2"
	"testing"

	"golang.org/x/image/vector"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/vg"
	vgdraw "gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
)

// difference compares two pictures channel by channel: the mean and the
// greatest difference, 0..255, and the part of pixels that differ by more than
// a sixteenth.
func difference(t testing.TB, a, b image.Image) (mean, most, far float64) {
	t.Helper()
	if a.Bounds().Size() != b.Bounds().Size() {
		t.Fatalf("sizes differ: %v, %v", a.Bounds(), b.Bounds())
	}
	toRGBA := func(m image.Image) *image.RGBA {
		r := image.NewRGBA(image.Rect(0, 0, m.Bounds().Dx(), m.Bounds().Dy()))
		draw.Draw(r, r.Rect, m, m.Bounds().Min, draw.Src)
		return r
	}
	p, q := toRGBA(a).Pix, toRGBA(b).Pix
	pixels := float64(len(p) / 4)
	for i := 0; i < len(p); i += 4 {
		worst := 0.0
		for j := range 4 {
			d := math.Abs(float64(p[i+j]) - float64(q[i+j]))
			mean += d / pixels / 4
			worst = max(worst, d)
		}
		most = max(most, worst)
		if worst > 16 {
			far += 1 / pixels
		}
	}
	return mean, most, far
}

// both draws the same on our canvas and on gonum/plot's stock one, the
// reference throughout this file.
func both(w, h vg.Length, scale int, f func(c vg.Canvas)) (ours, stock image.Image) {
	px := func(l vg.Length) int { return int(Units(l)*float32(scale) + 0.5) }
	r := NewRaster(px(w), px(h), float64(UnitDPI*scale))
	r.Reset(px(w), px(h), float64(UnitDPI*scale), color.White)
	f(r)
	s := vgimg.NewWith(vgimg.UseWH(w, h), vgimg.UseDPI(UnitDPI*scale))
	f(s)
	return r.Image(), s.Image()
}

func TestRasterMatchesStockCanvas(t *testing.T) {
	red := color.NRGBA{0x90, 0x20, 0x10, 0xff}
	glass := color.NRGBA{0x10, 0x60, 0x90, 0x80}
	star := func(c vg.Canvas, x, y, r vg.Length) (p vg.Path) {
		for i := range 5 {
			s, k := math.Sincos(float64(i) * 4 * math.Pi / 5)
			q := vg.Point{X: x + r*vg.Length(k), Y: y + r*vg.Length(s)}
			if i == 0 {
				p.Move(q)
			} else {
				p.Line(q)
			}
		}
		p.Close()
		return p
	}
	cases := []struct {
		name            string
		mean, most, far float64 // allowed
		draw            func(c vg.Canvas)
	}{
		{"fill", 0.2, 24, 0.001, func(c vg.Canvas) {
			c.SetColor(red)
			c.Fill(star(c, 60, 60, 50))
			c.SetColor(glass)
			c.Fill(star(c, 90, 70, 40))
		}},
		{"rectangle at odd places", 0.1, 4, 0, func(c vg.Canvas) {
			c.SetColor(glass)
			var p vg.Path
			p.Move(vg.Point{X: 10.3, Y: 11.7})
			p.Line(vg.Point{X: 80.9, Y: 11.7})
			p.Line(vg.Point{X: 80.9, Y: 50.2})
			p.Line(vg.Point{X: 10.3, Y: 50.2})
			p.Close()
			c.Fill(p)
		}},
		{"arcs and curves", 0.2, 40, 0.002, func(c vg.Canvas) {
			c.SetColor(red)
			var p vg.Path
			p.Move(vg.Point{X: 90, Y: 60})
			p.Arc(vg.Point{X: 60, Y: 60}, 30, 0, 2*math.Pi)
			p.Close()
			c.Fill(p)
			c.SetColor(glass)
			p = nil
			p.Move(vg.Point{X: 10, Y: 10})
			p.CubeTo(vg.Point{X: 40, Y: 150}, vg.Point{X: 90, Y: -60}, vg.Point{X: 140, Y: 100})
			p.QuadTo(vg.Point{X: 140, Y: 10}, vg.Point{X: 60, Y: 10})
			p.Close()
			c.Fill(p)
		}},
		{"strokes", 0.5, 110, 0.006, func(c vg.Canvas) {
			for i, w := range []vg.Length{0.5, 1, 2, 5, 9} {
				c.SetLineWidth(w)
				c.SetColor(red)
				var p vg.Path
				x := vg.Length(i)*28 + 8
				p.Move(vg.Point{X: x, Y: 10})
				p.Line(vg.Point{X: x + 18, Y: 50})
				p.Line(vg.Point{X: x, Y: 90})
				p.Line(vg.Point{X: x + 20, Y: 110.5})
				c.Stroke(p)
			}
		}},
		{"upright lines", 0.2, 8, 0, func(c vg.Canvas) {
			c.SetColor(red)
			for i, w := range []vg.Length{0.3, 0.75, 1, 2.2} {
				c.SetLineWidth(w)
				x := vg.Length(i)*30 + 10.4
				c.Stroke(vg.Path{{Type: vg.MoveComp, Pos: vg.Point{X: x, Y: 10.2}}, {Type: vg.LineComp, Pos: vg.Point{X: x, Y: 90.7}}})
				c.Stroke(vg.Path{{Type: vg.MoveComp, Pos: vg.Point{X: 10, Y: x}}, {Type: vg.LineComp, Pos: vg.Point{X: 140, Y: x}}})
			}
		}},
		{"dashes", 0.3, 40, 0.003, func(c vg.Canvas) {
			c.SetColor(red)
			c.SetLineWidth(2)
			c.SetLineDash([]vg.Length{6, 3, 1, 3}, 4)
			var p vg.Path
			p.Move(vg.Point{X: 5, Y: 5})
			p.Line(vg.Point{X: 140, Y: 70})
			p.Line(vg.Point{X: 20, Y: 110})
			c.Stroke(p)
		}},
		{"a dense curve", 0.5, 60, 0.006, func(c vg.Canvas) {
			c.SetColor(red)
			c.SetLineWidth(1.5)
			var p vg.Path
			for i := range 1500 {
				x := float64(i) / 10
				q := vg.Point{X: vg.Length(x), Y: vg.Length(60 + 40*math.Sin(x/6) + 10*math.Sin(x/1.3))}
				if i == 0 {
					p.Move(q)
				} else {
					p.Line(q)
				}
			}
			c.Stroke(p)
		}},
		{"moved, turned, scaled", 0.3, 60, 0.004, func(c vg.Canvas) {
			c.SetColor(red)
			c.Push()
			c.Translate(vg.Point{X: 70, Y: 50})
			c.Rotate(0.4)
			c.Scale(1.5, 0.5)
			c.Fill(star(c, 0, 0, 30))
			c.Pop()
			c.Fill(star(c, 20, 20, 15))
		}},
		{"an image", 1, 255, 0.02, func(c vg.Canvas) {
			m := image.NewRGBA(image.Rect(0, 0, 40, 20))
			for y := range 20 {
				for x := range 40 {
					m.Set(x, y, color.NRGBA{uint8(x * 6), uint8(y * 12), 90, 255})
				}
			}
			c.DrawImage(vg.Rectangle{Min: vg.Point{X: 15, Y: 30}, Max: vg.Point{X: 135, Y: 90}}, m)
		}},
	}
	for _, c := range cases {
		for _, scale := range []int{1, 2} {
			ours, stock := both(150, 120, scale, c.draw)
			mean, most, far := difference(t, ours, stock)
			t.Logf("%s at %dx: mean %.3f, most %.0f, far %.4f", c.name, scale, mean, most, far)
			if mean > c.mean || most > c.most || far > c.far {
				t.Errorf("%s at %dx: mean %.3f, most %.0f, far %.4f; allowed %v, %v, %v", c.name, scale, mean, most, far, c.mean, c.most, c.far)
				keep(t, "raster-ours", ours)
				keep(t, "raster-stock", stock)
			}
		}
	}
}

func sansFace(size vg.Length) font.Face {
	return font.NewCache(liberation.Collection()).Lookup(font.Font{Typeface: "Liberation", Variant: "Sans"}, size)
}

// Text at whole pixels, where the stock canvas and ours agree on the place, and
// without pairs that are set closer: the stock canvas moves those by the same
// number of pixels at every size, while we keep to what font.Face.Width says.
func TestRasterTextMatchesStockCanvas(t *testing.T) {
	for _, scale := range []int{1, 2} {
		ours, stock := both(150, 120, scale, func(c vg.Canvas) {
			c.SetColor(color.Black)
			c.FillString(sansFace(9), vg.Point{X: 9, Y: 90}, "5th harmonic, 2.5 %")
			c.FillString(sansFace(18), vg.Point{X: 9, Y: 60}, "Bändung 0.63 mH")
			c.Push()
			c.Translate(vg.Point{X: 30, Y: 6})
			c.Rotate(math.Pi / 2)
			c.FillString(sansFace(9), vg.Point{}, "turned")
			c.Pop()
		})
		mean, most, far := difference(t, ours, stock)
		t.Logf("text at %dx: mean %.3f, most %.0f, far %.4f", scale, mean, most, far)
		if mean > 0.4 || far > 0.01 {
			t.Errorf("text at %dx: mean %.3f, far %.4f", scale, mean, far)
			keep(t, "raster-text-ours", ours)
			keep(t, "raster-text-stock", stock)
		}
	}
}

// The advance of a drawn string is what gonum/plot lays out with.
func TestRasterTextKeepsWidth(t *testing.T) {
	for _, s := range []string{"11", "AV To", "11th harmonic, 12.5 %", "Y,"} {
		face := sansFace(24)
		r := NewRaster(400, 60, UnitDPI)
		r.FillString(face, vg.Point{X: 8, Y: 12}, s+"|")
		right := 0
		b := r.Image().Rect
		for x := range b.Dx() {
			for y := range b.Dy() {
				if r.Image().RGBAAt(x, y).A > 100 {
					right = x
				}
			}
		}
		// The bar's ink lies within its advance, which starts at the width of s.
		from, to := Units(8+face.Width(s)), Units(8+face.Width(s+"|"))
		if float32(right) < from || float32(right) > to {
			t.Errorf("%q: the bar after it ends at pixel %d, want between %g and %g", s, right, from, to)
		}
	}
}

// Whole figures: the differences are those of text placed on the pixel.
func TestRasterPanelsMatchStockCanvas(t *testing.T) {
	for i, p := range fourPanels() {
		for _, scale := range []int{1, 2} {
			p.BackgroundColor = color.White
			ours, stock := both(Points(benchWidth), Points(benchHeight), scale, func(c vg.Canvas) {
				p.Draw(vgdraw.NewCanvas(c, Points(benchWidth), Points(benchHeight)))
			})
			mean, most, far := difference(t, ours, stock)
			t.Logf("panel %d at %dx: mean %.3f, most %.0f, far %.4f", i, scale, mean, most, far)
			if mean > 1.5 || far > 0.03 {
				t.Errorf("panel %d at %dx: mean %.3f, far %.4f", i, scale, mean, far)
			}
			if scale == 2 {
				keep(t, "panel-ours-"+string(rune('0'+i)), ours)
				keep(t, "panel-stock-"+string(rune('0'+i)), stock)
			}
		}
	}
}

// Random polygons, partly outside, against golang.org/x/image/vector.
func TestCoverageMatchesVector(t *testing.T) {
	rnd := rand.New(rand.NewPCG(1, 2))
	const w, h = 61, 47
	for n := range 120 {
		var c coverage
		c.resize(w, h)
		// The reference has no border of its own: draw it with room around.
		const room = 300 // so large a picture that the reference counts in floating point
		ref := vector.NewRasterizer(w+2*room, h+2*room)
		pts := make([]pixelPoint, 3+rnd.IntN(4))
		for i := range pts {
			pts[i] = pixelPoint{rnd.Float64()*(w+120) - 60, rnd.Float64()*(h+120) - 60}
			if n%3 == 0 { // whole pixels and upright edges
				pts[i] = pixelPoint{math.Round(pts[i].x), math.Round(pts[i].y)}
			}
		}
		for i, p := range pts {
			q := pts[(i+1)%len(pts)]
			c.edge(p.x, p.y, q.x, q.y)
			if i == 0 {
				ref.MoveTo(float32(p.x+room), float32(p.y+room))
			}
			ref.LineTo(float32(q.x+room), float32(q.y+room))
		}
		ref.ClosePath()
		want := image.NewAlpha(image.Rect(0, 0, w+2*room, h+2*room))
		ref.Draw(want, want.Rect, image.Opaque, image.Point{})
		got := image.NewAlpha(image.Rect(0, 0, w, h))
		c.spans(func(y, x0, x1 int, v float32) {
			for x := x0; x < x1; x++ {
				got.Pix[y*got.Stride+x] = uint8(v*255 + 0.5)
			}
		})
		for y := range h {
			for x := range w {
				a, b := int(got.AlphaAt(x, y).A), int(want.AlphaAt(x+room, y+room).A)
				if a-b > 2 || b-a > 2 {
					t.Fatalf("polygon %d %v at (%d, %d): %d, reference %d", n, pts, x, y, a, b)
				}
			}
		}
		for i, v := range c.cells {
			if v != 0 {
				t.Fatalf("polygon %d: cell %d is left at %g", n, i, v)
			}
		}
	}
}

// The ink of a filled polygon is its area, by the shoelace formula.
func TestCoverageIsArea(t *testing.T) {
	pts := []pixelPoint{{3.2, 4.1}, {50.7, 9.9}, {41.3, 44.4}, {12.8, 30.6}}
	var c coverage
	c.resize(64, 64)
	area := 0.0
	for i, p := range pts {
		q := pts[(i+1)%4]
		c.edge(p.x, p.y, q.x, q.y)
		area += (p.x*q.y - q.x*p.y) / 2
	}
	sum := 0.0
	c.spans(func(_, x0, x1 int, v float32) { sum += float64(v) * float64(x1-x0) })
	if math.Abs(sum-area) > 1e-2 {
		t.Errorf("ink %g, area %g", sum, area)
	}
}

// A thinned line is nowhere farther from a point left out than it says.
func TestThinKeepsTheLine(t *testing.T) {
	rnd := rand.New(rand.NewPCG(3, 4))
	for n := range 200 {
		pts := make([]pixelPoint, 2+rnd.IntN(200))
		for i := range pts {
			x := float64(i) * (0.05 + 0.5*float64(n%5))
			pts[i] = pixelPoint{x, 20*math.Sin(x/7) + rnd.Float64()*float64(n%4)*0.1}
			if n%7 == 0 { // there and back again
				pts[i].x = 10 * math.Sin(x)
			}
		}
		in := append([]pixelPoint(nil), pts...)
		out := thin(pts, thinness)
		if out[0] != in[0] || out[len(out)-1] != in[len(in)-1] {
			t.Fatalf("line %d: ends moved", n)
		}
		for _, p := range in {
			least := math.Inf(1)
			for i := 1; i < len(out); i++ {
				least = min(least, distance(p, out[i-1], out[i]))
			}
			if least > 2*thinness {
				t.Fatalf("line %d: %v is %g from the thinned line", n, p, least)
			}
		}
	}
}

func distance(p, a, b pixelPoint) float64 {
	dx, dy := b.x-a.x, b.y-a.y
	t := 0.0
	if l := dx*dx + dy*dy; l > 0 {
		t = min(max(((p.x-a.x)*dx+(p.y-a.y)*dy)/l, 0), 1)
	}
	return math.Hypot(p.x-a.x-t*dx, p.y-a.y-t*dy)
}

// What is not a number, or far away, draws nothing and breaks nothing.
func TestRasterSurvivesNonsense(t *testing.T) {
	r := NewRaster(40, 30, UnitDPI)
	nan, inf := vg.Length(math.NaN()), vg.Length(math.Inf(1))
	for _, bad := range []vg.Length{nan, inf, -inf, 1e300, -1e12} {
		p := vg.Path{}
		p.Move(vg.Point{X: bad, Y: 5})
		p.Line(vg.Point{X: 5, Y: bad})
		p.Arc(vg.Point{X: 5, Y: 5}, bad, 0, 7)
		p.CubeTo(vg.Point{X: bad}, vg.Point{Y: bad}, vg.Point{X: 3, Y: 3})
		p.QuadTo(vg.Point{X: bad}, vg.Point{X: 3, Y: bad})
		p.Close()
		r.Fill(p)
		r.Stroke(p)
		r.SetLineDash([]vg.Length{bad, 1}, bad)
		r.Stroke(p)
		r.SetLineDash([]vg.Length{0, 0}, 0)
		r.Stroke(p)
		r.SetLineDash([]vg.Length{1e-9, 1e-9}, 3)
		r.Stroke(p)
		r.SetLineDash(nil, 0)
		r.SetLineWidth(bad)
		r.Stroke(p)
		r.SetLineWidth(1)
		r.FillString(sansFace(9), vg.Point{X: bad, Y: 3}, "x")
		r.FillString(sansFace(bad), vg.Point{X: 3, Y: 3}, "x")
		r.FillString(font.Face{}, vg.Point{}, "x")
		r.DrawImage(vg.Rectangle{Max: vg.Point{X: bad, Y: 5}}, r.Image())
	}
	r.Pop()
	r.Reset(0, -3, -1, nil)
}

// A picture drawn twice on the same buffer is the same: text from the cache too.
func TestRasterRepeats(t *testing.T) {
	p := fourPanels()[3]
	r := &Raster{}
	var first []uint8
	for range 3 {
		r.Reset(300, 200, UnitDPI, color.White)
		p.Draw(vgdraw.New(r))
		if first == nil {
			first = append(first, r.Image().Pix...)
			continue
		}
		if string(first) != string(r.Image().Pix) {
			t.Fatal("the second drawing differs from the first")
		}
	}
}
