//go:build ignore

// Mkicon draws the icon: a fundamental and its quietened harmonics standing on
// a bus bar. It writes assets/icon.svg and assets/icon.png from one list of
// boxes. Run it from the root: go run assets/mkicon.go
package main

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"image/png"
	"log"
	"os"

	"golang.org/x/image/vector"

	"quietbus/assets"
)

const side = 512

// A box is a rounded rectangle; with a line width it is hollow.
type box struct {
	x, y, w, h, r float32
	line          float32
	fill          color.NRGBA
}

func icon() []box {
	p := assets.Light
	return []box{
		{0, 0, side, side, 96, 0, p.Ground},
		{0, 0, side, side, 96, 10, p.Grid},
		{72, 376, 368, 36, 18, 0, p.Ink}, // the bus
		{100, 104, 76, 260, 10, 0, p.After},
		{212, 220, 56, 144, 8, 14, p.Before},
		{212, 308, 56, 56, 8, 0, p.After},
		{296, 268, 56, 96, 8, 14, p.Before},
		{296, 328, 56, 36, 8, 0, p.After},
		{372, 312, 44, 52, 8, 14, p.Before},
	}
}

func main() {
	var svg bytes.Buffer
	fmt.Fprintf(&svg, "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 %d %d\">\n", side, side)
	img := image.NewNRGBA(image.Rect(0, 0, side, side))
	for _, b := range icon() {
		c := fmt.Sprintf("#%02x%02x%02x", b.fill.R, b.fill.G, b.fill.B)
		if b.line > 0 {
			in := b.line / 2
			fmt.Fprintf(&svg, "  <rect x=\"%g\" y=\"%g\" width=\"%g\" height=\"%g\" rx=\"%g\" fill=\"none\" stroke=\"%s\" stroke-width=\"%g\"/>\n",
				b.x+in, b.y+in, b.w-b.line, b.h-b.line, max(b.r-in, 0), c, b.line)
		} else {
			fmt.Fprintf(&svg, "  <rect x=\"%g\" y=\"%g\" width=\"%g\" height=\"%g\" rx=\"%g\" fill=\"%s\"/>\n", b.x, b.y, b.w, b.h, b.r, c)
		}
		z := vector.NewRasterizer(side, side)
		outline(z, b.x, b.y, b.w, b.h, b.r, false)
		if b.line > 0 {
			outline(z, b.x+b.line, b.y+b.line, b.w-2*b.line, b.h-2*b.line, max(b.r-b.line, 0), true)
		}
		z.Draw(img, img.Bounds(), image.NewUniform(b.fill), image.Point{})
	}
	svg.WriteString("</svg>\n")
	var out bytes.Buffer
	if err := png.Encode(&out, img); err != nil {
		log.Fatal(err)
	}
	for name, data := range map[string][]byte{"assets/icon.svg": svg.Bytes(), "assets/icon.png": out.Bytes()} {
		if err := os.WriteFile(name, data, 0o644); err != nil {
			log.Fatal(err)
		}
	}
}

// outline traces a rounded rectangle, the other way round for a hole.
func outline(z *vector.Rasterizer, x, y, w, h, r float32, hole bool) {
	const k = 0.5523 // circle by cubic curves
	type seg struct{ ax, ay, bx, by, cx, cy, lx, ly float32 }
	x1, y1, d := x+w, y+h, r*(1-k)
	if hole {
		z.MoveTo(x+r, y)
		z.CubeTo(x+d, y, x, y+d, x, y+r)
		z.LineTo(x, y1-r)
		z.CubeTo(x, y1-d, x+d, y1, x+r, y1)
		z.LineTo(x1-r, y1)
		z.CubeTo(x1-d, y1, x1, y1-d, x1, y1-r)
		z.LineTo(x1, y+r)
		z.CubeTo(x1, y+d, x1-d, y, x1-r, y)
		z.ClosePath()
		return
	}
	for i, s := range []seg{
		{x1 - d, y, x1, y + d, x1, y + r, x1 - r, y},
		{x1, y1 - d, x1 - d, y1, x1 - r, y1, x1, y1 - r},
		{x + d, y1, x, y1 - d, x, y1 - r, x + r, y1},
		{x, y + d, x + d, y, x + r, y, x, y + r},
	} {
		if i == 0 {
			z.MoveTo(x+r, y)
		}
		z.LineTo(s.lx, s.ly)
		z.CubeTo(s.ax, s.ay, s.bx, s.by, s.cx, s.cy)
	}
	z.ClosePath()
}
