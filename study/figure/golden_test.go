package figure

import (
	"bytes"
	"flag"
	"image"
	"image/png"
	"os"
	"path/filepath"
	"testing"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
)

var update = flag.Bool("update", false, "rewrite the pictures in testdata, to be looked at before they are kept")

// pictureOf draws on the stock picture canvas.
func pictureOf(f *Figure, st *Style, w, h vg.Length, dpi int) image.Image {
	c := vgimg.NewWith(vgimg.UseWH(w, h), vgimg.UseDPI(dpi))
	f.Draw(draw.New(c), st)
	return c.Image()
}

// Figures look as they did when someone last looked at them: the demonstration
// in the size of a panel, by day, in a dim room and on paper.
func TestPictures(t *testing.T) {
	s, b, a := demo(t, "Filter 7", "Recorder filter")
	sel := Selection{Bus: "Compressors"}
	was, now := scans(t, s, "Compressors"), scans(t, s, "Compressors", "Filter 7")
	line := SingleLine(s, b, a, nil, View{Selected: "Filter 7", Resonances: now[0].Peaks})
	for _, p := range []struct {
		name string
		f    *Figure
		st   *Style
		w, h vg.Length
	}{
		{"spectrum", Spectrum(b, a, sel), Light(), 255, 150},
		{"spectrum-dark", Spectrum(b, a, sel), Dark(), 255, 150},
		{"spectrum-one", Spectrum(nil, a, Selection{Element: "Grid", Bus: "PCC"}), Print(), 320, 200},
		{"waveform", Waveform(b, a, sel), Light(), 255, 150},
		{"impedance", Impedance(was, now, []int{5, 7, 11, 13, 17, 19}), Light(), 255, 150},
		{"margins", Margins(b, a), Dark(), 255, 150},
		{"duty", Duty(b, a), Light(), 255, 150},
		{"response", Response(a, "Recorder filter"), Light(), 255, 150},
		{"single-line", line, Light(), line.Size.X, line.Size.Y},
		{"empty", Spectrum(nil, nil, sel), Light(), 255, 150},
	} {
		path := filepath.Join("testdata", "pictures", p.name+".png")
		got := pictureOf(p.f, p.st, p.w, p.h, 96)
		if *update {
			var out bytes.Buffer
			if err := png.Encode(&out, got); err != nil {
				t.Fatal(err)
			}
			if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(path, out.Bytes(), 0o644); err != nil {
				t.Fatal(err)
			}
			continue
		}
		file, err := os.Open(path)
		if err != nil {
			t.Fatal(err)
		}
		want, err := png.Decode(file)
		file.Close()
		if err != nil {
			t.Fatal(err)
		}
		if share := differs(got, want); share > 0.001 {
			t.Errorf("%s: %.2f %% of the picture is not as it was", p.name, 100*share)
		}
	}
}

// differs returns the share of pixels whose colour is clearly another, 1 when
// the pictures have different sizes. Edges may shift in shade from one machine
// to the next.
func differs(a, b image.Image) float64 {
	r := a.Bounds()
	if r.Size() != b.Bounds().Size() {
		return 1
	}
	const clearly = 0x4000
	n := 0
	for y := r.Min.Y; y < r.Max.Y; y++ {
		for x := r.Min.X; x < r.Max.X; x++ {
			ar, ag, ab, _ := a.At(x, y).RGBA()
			br, bg, bb, _ := b.At(x-r.Min.X+b.Bounds().Min.X, y-r.Min.Y+b.Bounds().Min.Y).RGBA()
			if apart(ar, br) > clearly || apart(ag, bg) > clearly || apart(ab, bb) > clearly {
				n++
			}
		}
	}
	return float64(n) / float64(r.Dx()*r.Dy())
}

func apart(a, b uint32) uint32 { return max(a, b) - min(a, b) }

// A picture with a bar less, or another word, is told from the one with it.
func TestDiffers(t *testing.T) {
	_, b, a := demo(t, "Filter 7")
	sel := Selection{Bus: "Compressors"}
	one := pictureOf(Spectrum(b, a, sel), Light(), 255, 150, 96)
	for name, other := range map[string]image.Image{
		"without before": pictureOf(Spectrum(nil, a, sel), Light(), 255, 150, 96),
		"by night":       pictureOf(Spectrum(b, a, sel), Dark(), 255, 150, 96),
		"another bus":    pictureOf(Spectrum(b, a, Selection{Bus: "Pump house"}), Light(), 255, 150, 96),
	} {
		if d := differs(one, other); d <= 0.001 {
			t.Errorf("%s: only %.3f %% differ", name, 100*d)
		}
	}
	if d := differs(one, one); d != 0 {
		t.Errorf("a picture differs from itself: %g", d)
	}
}
