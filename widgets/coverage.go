package widgets

import (
	"image"
	"math"
	"math/bits"
)

// coverage turns polygons into anti-aliased pixel coverage by signed area:
// each edge adds to the cells it passes the change of covered area it causes,
// and a running sum along a row gives the coverage (the method of font
// rasterisers). The magnitude of the sum, cut at one, is the non-zero rule for
// polygons of one orientation.
//
// Touched cells are remembered in a bit set, so that a thin line across a large
// picture costs its own cells and not the picture's.
type coverage struct {
	w, h       int
	stride     int // cells a row: two more than pixels, for the tail of an edge
	words      int // bit-set words a row
	cells      []float32
	touched    []uint64
	top, below int // rows touched: top <= y < below
}

// resize makes room for a picture of w by h pixels and forgets everything.
func (c *coverage) resize(w, h int) {
	c.w, c.h = w, h
	c.stride = w + 2
	c.words = (c.stride + 63) / 64
	if n := c.stride * h; cap(c.cells) >= n {
		c.cells = c.cells[:n]
		clear(c.cells)
	} else {
		c.cells = make([]float32, n)
	}
	if n := c.words * h; cap(c.touched) >= n {
		c.touched = c.touched[:n]
		clear(c.touched)
	} else {
		c.touched = make([]uint64, n)
	}
	c.top, c.below = h, 0
}

// edge adds a straight edge, in pixels, y down. Parts outside the picture are
// cut off; what lies to the left still counts for the pixels to its right.
func (c *coverage) edge(x0, y0, x1, y1 float64) {
	if y0 == y1 {
		return
	}
	dir := 1.0
	if y0 > y1 {
		dir = -1
		x0, y0, x1, y1 = x1, y1, x0, y0
	}
	height := float64(c.h)
	if y1 <= 0 || y0 >= height {
		return
	}
	slope := (x1 - x0) / (y1 - y0)
	if y0 < 0 {
		x0, y0 = x0-y0*slope, 0
	}
	if y1 > height {
		x1, y1 = x1-(y1-height)*slope, height
	}
	width := float64(c.w)
	switch {
	case x0 >= width && x1 >= width:
		return
	case x0 <= 0 && x1 <= 0:
		c.inside(0, y0, 0, y1, 0, dir)
		return
	case x0 >= 0 && x1 >= 0 && x0 <= width && x1 <= width:
		c.inside(x0, y0, x1, y1, slope, dir)
		return
	}
	// The edge crosses the left or right border: cut it there.
	at := func(x float64) float64 { return min(max(y0+(x-x0)/slope, y0), y1) }
	left, right := at(0), at(width)
	if slope > 0 {
		c.part(0, y0, 0, left, 0, dir)
		c.part(max(x0, 0), max(left, y0), min(x1, width), right, slope, dir)
		return
	}
	c.part(min(x0, width), right, max(x1, 0), left, slope, dir)
	c.part(0, left, 0, y1, 0, dir)
}

func (c *coverage) part(x0, y0, x1, y1, slope, dir float64) {
	if y1 > y0 {
		c.inside(x0, y0, x1, y1, slope, dir)
	}
}

// inside adds a downward edge that lies within the picture.
func (c *coverage) inside(x0, y0, x1, y1, slope, dir float64) {
	first, last := int(y0), int(math.Ceil(y1))
	c.top, c.below = min(c.top, first), max(c.below, last)
	width := float64(c.w)
	x := x0
	for y := first; y < last; y++ {
		from, to := max(y0, float64(y)), min(y1, float64(y+1))
		dy := to - from
		next := x + slope*dy
		if next < 0 { // rounding at a border
			next = 0
		} else if next > width {
			next = width
		}
		d := float32(dy * dir)
		a, b := x, next
		if a > b {
			a, b = b, a
		}
		ai := int(a)
		bi := int(math.Ceil(b))
		row := c.cells[y*c.stride : (y+1)*c.stride]
		mask := c.touched[y*c.words : (y+1)*c.words]
		if bi <= ai+1 {
			mid := float32((a+b)/2 - float64(ai))
			row[ai] += d - d*mid
			row[ai+1] += d * mid
			mask[ai>>6] |= 1 << (ai & 63)
			mask[(ai+1)>>6] |= 1 << ((ai + 1) & 63)
		} else {
			s := float32(1 / (b - a))
			af := float32(a - float64(ai))
			a0 := 0.5 * s * (1 - af) * (1 - af)
			bf := float32(b - float64(bi) + 1)
			am := 0.5 * s * bf * bf
			row[ai] += d * a0
			if bi == ai+2 {
				row[ai+1] += d * (1 - a0 - am)
			} else {
				a1 := s * (1.5 - af)
				row[ai+1] += d * (a1 - a0)
				for i := ai + 2; i < bi-1; i++ {
					row[i] += d * s
				}
				a2 := a1 + float32(bi-ai-3)*s
				row[bi-1] += d * (1 - a2 - am)
			}
			row[bi] += d * am
			for i := ai; i <= bi; i++ {
				mask[i>>6] |= 1 << (i & 63)
			}
		}
		x = next
	}
}

// visible is the least coverage worth a pixel; smaller sums are rounding.
const visible = 1.0 / 512

// spans hands each run of equally covered pixels to paint and leaves the buffer
// empty for the next shape.
func (c *coverage) spans(paint func(y, x0, x1 int, cover float32)) {
	for y := c.top; y < c.below; y++ {
		row := c.cells[y*c.stride : (y+1)*c.stride]
		mask := c.touched[y*c.words : (y+1)*c.words]
		var sum float32
		x := 0
		for i, word := range mask {
			if word == 0 {
				continue
			}
			mask[i] = 0
			for ; word != 0; word &= word - 1 {
				at := i<<6 + bits.TrailingZeros64(word)
				if at > x {
					if v := cut(sum); v > visible && x < c.w {
						paint(y, x, min(at, c.w), v)
					}
				}
				sum += row[at]
				row[at] = 0
				if v := cut(sum); v > visible && at < c.w {
					paint(y, at, at+1, v)
				}
				x = at + 1
			}
		}
		if v := cut(sum); v > visible && x > 0 && x < c.w { // its right edge is outside
			paint(y, x, c.w, v)
		}
	}
	c.top, c.below = c.h, 0
}

func cut(sum float32) float32 {
	if sum < 0 {
		sum = -sum
	}
	return min(sum, 1)
}

// An ink is a premultiplied colour, eight bits a channel.
type ink struct{ r, g, b, a uint32 }

// blend paints the collected coverage into a picture and empties it. It is
// spans with the painting written out: most runs are one pixel, and a call for
// each would cost more than the pixel.
func (c *coverage) blend(dst *image.RGBA, k ink) {
	for y := c.top; y < c.below; y++ {
		row := c.cells[y*c.stride : (y+1)*c.stride]
		mask := c.touched[y*c.words : (y+1)*c.words]
		line := dst.Pix[y*dst.Stride : y*dst.Stride+4*c.w]
		var sum float32
		m := uint32(0) // cover of the sum, 0..255
		x := 0
		for i, word := range mask {
			if word == 0 {
				continue
			}
			mask[i] = 0
			for ; word != 0; word &= word - 1 {
				at := i<<6 + bits.TrailingZeros64(word)
				if m != 0 && at > x && x < c.w {
					blendRun(line[4*x:4*min(at, c.w)], k, m)
				}
				x = at + 1
				sum += row[at]
				row[at] = 0
				m = uint32(cut(sum)*255 + 0.5)
				if m == 0 || at >= c.w {
					continue
				}
				p := line[4*at : 4*at+4 : 4*at+4]
				if k.a == 255 {
					if m == 255 {
						p[0], p[1], p[2], p[3] = uint8(k.r), uint8(k.g), uint8(k.b), 255
						continue
					}
					n := 255 - m
					p[0] = uint8((k.r*m + uint32(p[0])*n + 127) / 255)
					p[1] = uint8((k.g*m + uint32(p[1])*n + 127) / 255)
					p[2] = uint8((k.b*m + uint32(p[2])*n + 127) / 255)
					p[3] = uint8((255*m + uint32(p[3])*n + 127) / 255)
					continue
				}
				blendRun(p, k, m)
			}
		}
		if m != 0 && x < c.w { // its right edge is outside
			blendRun(line[4*x:], k, m)
		}
	}
	c.top, c.below = c.h, 0
}

// blendRect paints a rectangle with sides along the pixels, in pixels.
func blendRect(dst *image.RGBA, k ink, x0, y0, x1, y1 float64) {
	w, h := float64(dst.Rect.Dx()), float64(dst.Rect.Dy())
	x0, y0, x1, y1 = max(x0, 0), max(y0, 0), min(x1, w), min(y1, h)
	if !(x0 < x1 && y0 < y1) {
		return
	}
	left, right := int(x0), int(math.Ceil(x1))
	part := func(lo, hi float64, cell int) float64 {
		return min(hi, float64(cell+1)) - max(lo, float64(cell))
	}
	first, last := part(x0, x1, left), part(x0, x1, right-1)
	for y := int(y0); y < int(math.Ceil(y1)); y++ {
		v := part(y0, y1, y) * 255
		line := dst.Pix[y*dst.Stride : y*dst.Stride+4*dst.Rect.Dx()]
		from, to := left, right
		if first < 1 {
			blendRun(line[4*left:4*left+4], k, uint32(first*v+0.5))
			from++
		}
		if last < 1 && right-1 > left {
			blendRun(line[4*(right-1):4*right], k, uint32(last*v+0.5))
			to--
		}
		if from < to {
			blendRun(line[4*from:4*to], k, uint32(v+0.5))
		}
	}
}

// blendRun lays an ink of coverage m (0..255) over a run of pixels.
func blendRun(line []uint8, k ink, m uint32) {
	if m == 0 {
		return
	}
	if m == 255 && k.a == 255 {
		for i := 0; i+3 < len(line); i += 4 {
			line[i], line[i+1], line[i+2], line[i+3] = uint8(k.r), uint8(k.g), uint8(k.b), 255
		}
		return
	}
	const one = 255 * 255
	r, g, b, a := k.r*m*255, k.g*m*255, k.b*m*255, k.a*m*255
	rest := one - k.a*m
	for i := 0; i+3 < len(line); i += 4 {
		line[i] = uint8((r + uint32(line[i])*rest + one/2) / one)
		line[i+1] = uint8((g + uint32(line[i+1])*rest + one/2) / one)
		line[i+2] = uint8((b + uint32(line[i+2])*rest + one/2) / one)
		line[i+3] = uint8((a + uint32(line[i+3])*rest + one/2) / one)
	}
}
