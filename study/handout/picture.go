package handout

import (
	"bytes"
	"image"
	"image/color"
	"image/png"
)

// encodePNG writes a picture as PNG, with a palette where that loses nothing
// but shades of the edges: half the size, and a third of the time.
func encodePNG(img image.Image) ([]byte, error) {
	if full, ok := img.(*image.RGBA); ok {
		if small := withPalette(full); small != nil {
			img = small
		}
	}
	var b bytes.Buffer
	enc := png.Encoder{CompressionLevel: png.BestSpeed}
	if err := enc.Encode(&b, img); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}

// withPalette returns an opaque picture with a palette. Colours that differ by
// less than 8 of 256 in each part, or 16 when those are too many, become the
// most frequent one of them: an area keeps its colour, the edge of a letter or
// a line may change by a shade. It is nil when more than 256 colours are left.
func withPalette(img *image.RGBA) *image.Paletted {
	counts := count(img)
	for bits := 5; bits >= 4; bits-- {
		if palette, index := gather(counts, bits); len(palette) <= 256 {
			w, h := img.Rect.Dx(), img.Rect.Dy()
			out := image.NewPaletted(image.Rect(0, 0, w, h), palette)
			for y := range h {
				row := img.Pix[y*img.Stride : y*img.Stride+4*w]
				to := out.Pix[y*out.Stride : y*out.Stride+w]
				for x := range to {
					to[x] = uint8(index[coarse(pixel(row, 4*x), bits)])
				}
			}
			return out
		}
	}
	return nil
}

// count returns how many pixels have each colour.
func count(img *image.RGBA) map[uint32]int {
	counts := map[uint32]int{}
	w := img.Rect.Dx()
	for y := range img.Rect.Dy() {
		row := img.Pix[y*img.Stride : y*img.Stride+4*w]
		for x := 0; x < len(row); {
			first, start := pixel(row, x), x
			for x += 4; x < len(row) && pixel(row, x) == first; x += 4 { // most pixels are like the one before
			}
			counts[first] += (x - start) / 4
		}
	}
	return counts
}

// gather returns the most frequent colour of each group that coarse makes, and
// the place of each group in that list.
func gather(counts map[uint32]int, bits int) (palette color.Palette, index []int) {
	chosen, most := make([]uint32, 1<<(3*bits)), make([]int, 1<<(3*bits))
	for c, n := range counts {
		k := coarse(c, bits)
		if n > most[k] || n == most[k] && c < chosen[k] {
			most[k], chosen[k] = n, c
		}
	}
	index = make([]int, len(chosen))
	for k, c := range chosen {
		if most[k] > 0 {
			index[k] = len(palette)
			palette = append(palette, color.RGBA{uint8(c >> 16), uint8(c >> 8), uint8(c), 255})
		}
	}
	return palette, index
}

// pixel returns red, green and blue of the pixel at byte i of a row.
func pixel(row []uint8, i int) uint32 {
	return uint32(row[i])<<16 | uint32(row[i+1])<<8 | uint32(row[i+2])
}

// coarse keeps the leading bits of each part of a colour.
func coarse(c uint32, bits int) uint32 {
	keep := uint32(1)<<bits - 1
	return c>>(24-bits)&keep<<(2*bits) | c>>(16-bits)&keep<<bits | c>>(8-bits)&keep
}
