package handout

import (
	"bytes"
	"image"
	"image/color"
	"image/png"
	"testing"
)

// TestEncodePNG reads pictures back: areas exactly, edges within a shade, and
// pictures of too many colours exactly.
func TestEncodePNG(t *testing.T) {
	few, many := image.NewRGBA(image.Rect(0, 0, 300, 40)), image.NewRGBA(image.Rect(0, 0, 300, 300))
	for y := range 40 {
		for x := range 300 {
			c := color.RGBA{0x0B, 0x5A, 0x6B, 255}
			if x >= 150 {
				c = color.RGBA{uint8(x - 100), uint8(x - 100), uint8(x - 100), 255}
			}
			few.SetRGBA(x, y, c)
		}
	}
	for y := range 300 {
		for x := range 300 {
			many.SetRGBA(x, y, color.RGBA{uint8(x), uint8(y), uint8(x * y), 255})
		}
	}
	for name, c := range map[string]struct {
		img   *image.RGBA
		shade int
	}{"few": {few, 8}, "many": {many, 0}} {
		raw, err := encodePNG(c.img)
		if err != nil {
			t.Fatal(err)
		}
		got, err := png.Decode(bytes.NewReader(raw))
		if err != nil {
			t.Fatal(err)
		}
		worst := 0
		for y := range c.img.Rect.Dy() {
			for x := range c.img.Rect.Dx() {
				r, g, b, _ := got.At(x, y).RGBA()
				want := c.img.RGBAAt(x, y)
				off := max(distance(r, want.R), distance(g, want.G), distance(b, want.B))
				if name == "few" && x < 150 && off > 0 {
					t.Fatalf("an area changes its colour at %d, %d", x, y)
				}
				worst = max(worst, off)
			}
		}
		if worst > c.shade {
			t.Errorf("%s: a pixel is off by %d", name, worst)
		}
	}
}

func distance(got uint32, want uint8) int { return max(int(got>>8)-int(want), int(want)-int(got>>8)) }
