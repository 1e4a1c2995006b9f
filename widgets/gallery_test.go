package widgets

import (
	"image"
	"image/color"
	xdraw "image/draw"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// A look is a way to see a widget.
type look struct {
	name         string
	dark         bool
	size, pixels float32 // type scale, pixels a window unit
}

var plain = look{"light", false, 1, 1}

// stage shows what build makes in a window of the test driver, in our theme.
func stage(t testing.TB, l look, size fyne.Size, build func() fyne.CanvasObject) fyne.Window {
	t.Helper()
	test.NewTempApp(t)
	fyne.CurrentApp().Settings().SetTheme(NewTheme(l.dark, l.size))
	w := test.NewTempWindow(t, build())
	w.SetPadded(false)
	w.Canvas().(test.WindowlessCanvas).SetScale(l.pixels)
	w.Resize(size)
	settle(w)
	return w
}

// settle lays out again what grew when text wrapped, as a real window does at
// each frame.
func settle(w fyne.Window) {
	size := w.Canvas().Size()
	w.Resize(size.AddWidthHeight(0, 1))
	w.Resize(size)
}

// golden compares a picture with the one in testdata, which a person has looked
// at. QUIETBUS_GOLDEN=write writes it anew: look at it before it is committed.
func golden(t testing.TB, name string, img image.Image) {
	t.Helper()
	keep(t, name, img)
	if img.Bounds().Dx() > 1280 || strings.HasSuffix(name, "-2x") || strings.HasSuffix(name, "-200") {
		return // large, and little to tell from the others
	}
	path := filepath.Join("testdata", name+".png")
	if os.Getenv("QUIETBUS_GOLDEN") == "write" {
		save(t, path, img)
		return
	}
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	want, err := png.Decode(f)
	if err != nil {
		t.Fatal(err)
	}
	if _, _, far := difference(t, img, want); far > 0.002 {
		t.Errorf("%s: %.2f %% of the pixels differ from the golden picture", name, 100*far)
		save(t, filepath.Join(os.TempDir(), "quietbus-"+name+".png"), img)
	}
}

func save(t testing.TB, path string, img image.Image) {
	t.Helper()
	f, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	e := png.Encoder{CompressionLevel: png.BestCompression}
	if err := e.Encode(f, img); err != nil {
		t.Fatal(err)
	}
}

// top is the upper part of a picture.
func top(img image.Image, height int) image.Image {
	b := img.Bounds()
	b.Max.Y = min(b.Max.Y, b.Min.Y+height)
	return img.(interface {
		SubImage(image.Rectangle) image.Image
	}).SubImage(b)
}

// bottom is the lower part of a picture.
func bottom(img image.Image, height int) image.Image {
	b := img.Bounds()
	b.Min.Y = max(b.Min.Y, b.Max.Y-height)
	return img.(interface {
		SubImage(image.Rectangle) image.Image
	}).SubImage(b)
}

// keep saves a picture for the eye when QUIETBUS_PICTURES names a folder.
func keep(t testing.TB, name string, img image.Image) {
	t.Helper()
	dir := os.Getenv("QUIETBUS_PICTURES")
	if dir == "" {
		return
	}
	save(t, filepath.Join(dir, name+".png"), img)
}

// looks are the ways every widget is looked at.
var looks = []look{
	plain,
	{"dark", true, 1, 1},
	{"light-2x", false, 1, 2},
	{"dark-200", true, 2, 1},
	{"light-200", false, 2, 1},
}

func diamond(c draw.Canvas) {
	var p vg.Path
	m := c.Center()
	r := (c.Max.X - c.Min.X) / 2
	for i := range 4 {
		s, k := math.Sincos(float64(i) * math.Pi / 2)
		q := vg.Point{X: m.X + r*vg.Length(k), Y: m.Y + r*vg.Length(s)}
		if i == 0 {
			p.Move(q)
		} else {
			p.Line(q)
		}
	}
	p.Close()
	c.Fill(p)
}

var black, white = color.Black, color.White

func newCanvas(c vg.Canvas, w, h vg.Length) draw.Canvas { return draw.NewCanvas(c, w, h) }

// grey takes the colour out of a picture.
func grey(m image.Image) image.Image {
	g := image.NewGray(m.Bounds())
	xdraw.Draw(g, g.Rect, m, m.Bounds().Min, xdraw.Src)
	return g
}
