package figure

import (
	"testing"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/recorder"
	"gonum.org/v1/plot/vg/vgimg"

	"quietbus/study"
	"quietbus/testdata"
)

// four are the figures of the evidence, made anew as after a flip.
func four(b *testing.B) func() []*Figure {
	s, before, after := demo(b, "Filter 5")
	sel := Selection{Bus: "Compressors"}
	now, was := scans(b, s, "Compressors", "Filter 5"), scans(b, s, "Compressors")
	return func() []*Figure {
		return []*Figure{Spectrum(before, after, sel), Waveform(before, after, sel), Impedance(was, now, nil), Margins(before, after)}
	}
}

// BenchmarkFourFigures is the drawing alone, on a canvas that only takes notes:
// what the figures cost whatever the canvas costs.
func BenchmarkFourFigures(b *testing.B) {
	made := four(b)
	for b.Loop() {
		for _, f := range made() {
			var c recorder.Canvas
			f.Draw(draw.NewCanvas(&c, 330, 200), Light())
		}
	}
}

// BenchmarkFourPictures is the same on the stock picture canvas at 96 dots an
// inch, its making and its background included.
func BenchmarkFourPictures(b *testing.B) {
	made := four(b)
	for b.Loop() {
		for _, f := range made() {
			f.Draw(draw.New(vgimg.NewWith(vgimg.UseWH(330, 200), vgimg.UseDPI(96))), Light())
		}
	}
}

// BenchmarkSingleLine30 draws thirty buses whose places are known.
func BenchmarkSingleLine30(b *testing.B) {
	s, err := study.Parse(testdata.Thirty)
	if err != nil {
		b.Fatal(err)
	}
	o, err := study.Evaluate(b.Context(), s, nil)
	if err != nil {
		b.Fatal(err)
	}
	lay := Tidy(s)
	for b.Loop() {
		var c recorder.Canvas
		f := SingleLine(s, o, o, lay, View{})
		f.Draw(draw.NewCanvas(&c, f.Size.X, f.Size.Y), Light())
	}
}

// BenchmarkTidy30 lays thirty buses out.
func BenchmarkTidy30(b *testing.B) {
	s, err := study.Parse(testdata.Thirty)
	if err != nil {
		b.Fatal(err)
	}
	var size vg.Length
	for b.Loop() {
		size += vg.Length(Tidy(s).W)
	}
}
