package widgets

import (
	"math"

	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/opentype"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// A textCache keeps rendered strings and glyph outlines between pictures.
// Strings that no picture used for two generations are dropped.
type textCache struct {
	glyphs map[glyphKey]*glyph
	now    map[stringKey]*stringMask
	old    map[stringKey]*stringMask
	size   int // bytes in now
	buf    sfnt.Buffer
}

// cacheBytes is how much one generation of rendered strings may hold.
const cacheBytes = 2 << 20

type glyphKey struct {
	font  *opentype.Font
	index sfnt.GlyphIndex
}

// A glyph is an outline in units of the font, y down.
type glyph struct {
	outline sfnt.Segments
	advance float64
}

// A stringKey names a rendered string: its transform to 1/64 pixel an em and
// the fraction of the pixel it starts at, in quarters.
type stringKey struct {
	font       *opentype.Font
	a, b, c, d int32
	fx, fy     uint8
	text       string
}

// A stringMask is a rendered string: coverage by pixel, in the box that starts
// at (x, y) from the pixel of its origin.
type stringMask struct {
	x, y, w, h int
	alpha      []uint8
}

// age begins a picture: a full generation becomes the old one.
func (t *textCache) age() {
	if t.size > cacheBytes {
		t.old, t.now, t.size = t.now, nil, 0
	}
}

// fill draws a string on a raster.
func (t *textCache) fill(r *Raster, f font.Face, pt vg.Point, s string) {
	if f.Face == nil || !(f.Font.Size > 0) || s == "" {
		return
	}
	m := r.state.m
	em := float64(f.Font.Size)
	at := m.apply(pt)
	if !sane(at) {
		return
	}
	key := stringKey{font: f.Face, text: s,
		a: round64(m.a * em), b: round64(m.b * em), c: round64(m.c * em), d: round64(m.d * em)}
	// Type stands crisp when its baseline is on a pixel; along the line a
	// quarter of a pixel keeps the spacing even.
	ox, oy := math.Floor(at.x), math.Floor(at.y)
	switch {
	case key.b == 0:
		oy = math.Round(at.y)
		ox, key.fx = quarter(at.x)
	case key.a == 0:
		ox = math.Round(at.x)
		oy, key.fy = quarter(at.y)
	default:
		ox, key.fx = quarter(at.x)
		oy, key.fy = quarter(at.y)
	}
	mask := t.lookup(key)
	if mask == nil {
		mask = t.render(key)
		if t.now == nil {
			t.now = make(map[stringKey]*stringMask)
		}
		t.now[key] = mask
		t.size += len(mask.alpha) + 64 + len(s)
	}
	mask.blend(r, int(ox), int(oy))
}

func (t *textCache) lookup(key stringKey) *stringMask {
	if mask := t.now[key]; mask != nil {
		return mask
	}
	mask := t.old[key]
	if mask != nil {
		if t.now == nil {
			t.now = make(map[stringKey]*stringMask)
		}
		t.now[key] = mask
		t.size += len(mask.alpha) + 64 + len(key.text)
	}
	return mask
}

func round64(v float64) int32 {
	return int32(math.Round(min(max(v, -1e6), 1e6) * 64))
}

func quarter(v float64) (whole float64, part uint8) {
	q := math.Round(v * 4)
	whole = math.Floor(q / 4)
	return whole, uint8(q - whole*4)
}

// render draws a string's mask from its glyph outlines.
func (t *textCache) render(key stringKey) *stringMask {
	units := float64(key.font.UnitsPerEm())
	// Outline units, y down, to pixels.
	a, b := float64(key.a)/64/units, float64(key.b)/64/units
	c, d := -float64(key.c)/64/units, -float64(key.d)/64/units
	fx, fy := float64(key.fx)/4, float64(key.fy)/4

	var lines []polyline
	pen := 0.0
	prev, hasPrev := sfnt.GlyphIndex(0), false
	ppem := fixed.Int26_6(key.font.UnitsPerEm())
	for _, char := range key.text {
		index, err := key.font.GlyphIndex(&t.buf, char)
		if err != nil {
			continue
		}
		if hasPrev {
			if kern, err := key.font.Kern(&t.buf, prev, index, ppem, xfont.HintingNone); err == nil {
				pen += float64(kern)
			}
		}
		g := t.glyph(key.font, index)
		lines = g.polylines(lines, func(x, y float64) pixelPoint {
			x += pen
			return pixelPoint{a*x + c*y + fx, b*x + d*y + fy}
		})
		pen += g.advance
		prev, hasPrev = index, true
	}
	return rasterise(lines)
}

// glyph returns a glyph's outline at one unit of the font a pixel.
func (t *textCache) glyph(f *opentype.Font, index sfnt.GlyphIndex) *glyph {
	key := glyphKey{f, index}
	if g := t.glyphs[key]; g != nil {
		return g
	}
	g := &glyph{}
	ppem := fixed.Int26_6(f.UnitsPerEm())
	if segments, err := f.LoadGlyph(&t.buf, index, ppem, nil); err == nil {
		g.outline = append(g.outline, segments...)
	}
	if advance, err := f.GlyphAdvance(&t.buf, index, ppem, xfont.HintingNone); err == nil {
		g.advance = float64(advance)
	}
	if t.glyphs == nil {
		t.glyphs = make(map[glyphKey]*glyph)
	}
	t.glyphs[key] = g
	return g
}

// polylines appends the glyph's flattened outline.
func (g *glyph) polylines(lines []polyline, place func(x, y float64) pixelPoint) []polyline {
	var pts []pixelPoint
	end := func() {
		if len(pts) > 2 {
			lines = append(lines, polyline{pts: pts, closed: true})
		}
		pts = nil
	}
	at := func(p fixed.Point26_6) pixelPoint { return place(float64(p.X), float64(p.Y)) }
	add := func(p pixelPoint) { pts = append(pts, p) }
	for _, s := range g.outline {
		switch s.Op {
		case sfnt.SegmentOpMoveTo:
			end()
			add(at(s.Args[0]))
		case sfnt.SegmentOpLineTo:
			add(at(s.Args[0]))
		case sfnt.SegmentOpQuadTo:
			quadratic(pts[len(pts)-1], at(s.Args[0]), at(s.Args[1]), add)
		case sfnt.SegmentOpCubeTo:
			cubic(pts[len(pts)-1], at(s.Args[0]), at(s.Args[1]), at(s.Args[2]), add)
		}
	}
	end()
	return lines
}

// rasterise draws closed outlines into the smallest mask that holds them.
func rasterise(lines []polyline) *stringMask {
	x0, y0, x1, y1 := math.Inf(1), math.Inf(1), math.Inf(-1), math.Inf(-1)
	for _, l := range lines {
		for _, p := range l.pts {
			x0, y0, x1, y1 = min(x0, p.x), min(y0, p.y), max(x1, p.x), max(y1, p.y)
		}
	}
	if !(x1 > x0) || !(y1 > y0) {
		return &stringMask{}
	}
	const most = 8192 // pixels a side; text larger than that is off any screen
	mask := &stringMask{x: int(math.Floor(x0)), y: int(math.Floor(y0))}
	mask.w = min(int(math.Ceil(x1))-mask.x, most)
	mask.h = min(int(math.Ceil(y1))-mask.y, most)
	var cover coverage
	cover.resize(mask.w, mask.h)
	dx, dy := float64(mask.x), float64(mask.y)
	for _, l := range lines {
		prev := l.pts[len(l.pts)-1]
		for _, p := range l.pts {
			cover.edge(prev.x-dx, prev.y-dy, p.x-dx, p.y-dy)
			prev = p
		}
	}
	mask.alpha = make([]uint8, mask.w*mask.h)
	cover.spans(func(y, x0, x1 int, v float32) {
		a := uint8(v*255 + 0.5)
		for x := x0; x < x1; x++ {
			mask.alpha[y*mask.w+x] = a
		}
	})
	return mask
}

// blend paints the mask with its origin at a pixel.
func (s *stringMask) blend(r *Raster, ox, oy int) {
	b := r.img.Rect
	left, top := ox+s.x, oy+s.y
	for y := max(top, 0); y < min(top+s.h, b.Max.Y); y++ {
		from, to := max(left, 0), min(left+s.w, b.Max.X)
		if from >= to {
			return
		}
		alpha := s.alpha[(y-top)*s.w+from-left : (y-top)*s.w+to-left]
		line := r.img.Pix[y*r.img.Stride+4*from:]
		for i, m := range alpha {
			if m != 0 {
				blendRun(line[4*i:4*i+4], r.state.ink, uint32(m))
			}
		}
	}
}
