package widgets

import (
	"image"
	"image/color"
	"math"

	xdraw "golang.org/x/image/draw"
	"golang.org/x/image/math/f64"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// UnitDPI is how many logical pixels make an inch: a length of 72 points is 96
// units of the window, so 9-point type has the size of 12-unit type.
const UnitDPI = 96

// Points converts window units to a drawing length.
func Points(units float32) vg.Length { return vg.Length(units) * vg.Inch / UnitDPI }

// Units converts a drawing length to window units.
func Units(l vg.Length) float32 { return float32(l / vg.Inch * UnitDPI) }

// A Raster is a vg.Canvas that draws into a pixel buffer it keeps, made for
// pictures that are redrawn many times. It remembers rendered text from one
// picture to the next.
//
// Lines end square at their end points and turn round. The pen of a scaled
// canvas is scaled by the root of the area's factor, so a zoomed drawing keeps
// its looks; unlike on paper, a pen stays round under uneven scaling.
//
// A Raster belongs to one goroutine at a time.
type Raster struct {
	img   *image.RGBA
	dpi   float64
	cover coverage
	text  textCache

	state rasterState
	stack []rasterState
	line  polyline
	parts []polyline // flattened sub-paths; their points share pts
	pts   []pixelPoint
}

// A rasterState is what Push saves.
type rasterState struct {
	m      matrix
	ink    ink
	width  vg.Length
	dashes []vg.Length
	offset vg.Length
}

// A matrix maps a point (x, y) in points, y up, to pixels, y down:
// x' = a x + c y + e, y' = b x + d y + f.
type matrix struct{ a, b, c, d, e, f float64 }

func (m matrix) apply(p vg.Point) pixelPoint {
	x, y := float64(p.X), float64(p.Y)
	return pixelPoint{m.a*x + m.c*y + m.e, m.b*x + m.d*y + m.f}
}

// factor is the scale of lengths: the root of the scale of areas.
func (m matrix) factor() float64 { return math.Sqrt(math.Abs(m.a*m.d - m.b*m.c)) }

// NewRaster returns a canvas of w by h pixels at the given resolution, clear.
// Use UnitDPI times the screen's scale for the window.
func NewRaster(w, h int, dpi float64) *Raster {
	r := &Raster{}
	r.Reset(w, h, dpi, color.Transparent)
	return r
}

// Reset starts a new picture of w by h pixels on the given ground. The buffer
// is kept when the size is the same, so an image got before changes.
func (r *Raster) Reset(w, h int, dpi float64, ground color.Color) {
	w, h = max(w, 1), max(h, 1)
	if dpi <= 0 || math.IsNaN(dpi) || math.IsInf(dpi, 0) {
		dpi = UnitDPI
	}
	if r.img == nil || r.img.Rect.Dx() != w || r.img.Rect.Dy() != h {
		r.img = image.NewRGBA(image.Rect(0, 0, w, h))
		r.cover.resize(w, h)
	}
	r.dpi = dpi
	k := inkOf(ground)
	pix := r.img.Pix
	pix[0], pix[1], pix[2], pix[3] = uint8(k.r), uint8(k.g), uint8(k.b), uint8(k.a)
	for n := 4; n < len(pix); n *= 2 {
		copy(pix[n:], pix[:n])
	}
	s := dpi / float64(vg.Inch)
	r.stack = r.stack[:0]
	r.state = rasterState{m: matrix{a: s, d: -s, f: float64(h)}}
	r.text.age()
	vg.Initialize(r)
}

// Image returns the picture. It is the buffer itself, valid until Reset.
func (r *Raster) Image() *image.RGBA { return r.img }

// Size returns the size of the canvas.
func (r *Raster) Size() (x, y vg.Length) {
	b := r.img.Rect
	return vg.Length(float64(b.Dx())/r.dpi) * vg.Inch, vg.Length(float64(b.Dy())/r.dpi) * vg.Inch
}

// DPI returns the resolution in pixels an inch.
func (r *Raster) DPI() float64 { return r.dpi }

// SetLineWidth sets the width of the pen; nothing is stroked when it is not
// positive.
func (r *Raster) SetLineWidth(w vg.Length) { r.state.width = w }

// SetLineDash sets the dash pattern; an empty one is a solid line.
func (r *Raster) SetLineDash(pattern []vg.Length, offset vg.Length) {
	r.state.dashes, r.state.offset = pattern, offset
}

// SetColor sets the colour of strokes, fills and text; nil is black.
func (r *Raster) SetColor(c color.Color) { r.state.ink = inkOf(c) }

func inkOf(c color.Color) ink {
	if c == nil {
		c = color.Black
	}
	red, green, blue, alpha := c.RGBA()
	return ink{red >> 8, green >> 8, blue >> 8, alpha >> 8}
}

// Rotate turns what is drawn next, counter-clockwise, by an angle in radians.
func (r *Raster) Rotate(rad float64) {
	s, k := math.Sincos(rad)
	m := &r.state.m
	m.a, m.b, m.c, m.d = m.a*k+m.c*s, m.b*k+m.d*s, m.c*k-m.a*s, m.d*k-m.b*s
}

// Translate moves the origin.
func (r *Raster) Translate(p vg.Point) {
	o := r.state.m.apply(p)
	r.state.m.e, r.state.m.f = o.x, o.y
}

// Scale scales what is drawn next.
func (r *Raster) Scale(x, y float64) {
	m := &r.state.m
	m.a, m.b, m.c, m.d = m.a*x, m.b*x, m.c*y, m.d*y
}

// Push saves pen, colour and transform.
func (r *Raster) Push() { r.stack = append(r.stack, r.state) }

// Pop restores what the matching Push saved. A Pop without a Push does nothing.
func (r *Raster) Pop() {
	if n := len(r.stack); n > 0 {
		r.state = r.stack[n-1]
		r.stack = r.stack[:n-1]
	}
}

// Fill fills a path by the non-zero rule.
func (r *Raster) Fill(p vg.Path) {
	r.flatten(p)
	if len(r.parts) == 1 {
		if a, b, ok := upright(r.parts[0].pts); ok {
			blendRect(r.img, r.state.ink, a.x, a.y, b.x, b.y)
			return
		}
	}
	for _, part := range r.parts {
		n := len(part.pts)
		if n < 3 {
			continue
		}
		prev := part.pts[n-1]
		for _, q := range part.pts {
			r.cover.edge(prev.x, prev.y, q.x, q.y)
			prev = q
		}
	}
	r.cover.blend(r.img, r.state.ink)
}

// Stroke draws a path with the pen.
func (r *Raster) Stroke(p vg.Path) {
	factor := r.state.m.factor()
	width := float64(r.state.width) * factor
	if !(width > 0) {
		return
	}
	r.flatten(p)
	if len(r.state.dashes) == 0 {
		if len(r.parts) == 1 && r.strokeUpright(r.parts[0], width/2) {
			return
		}
		for _, part := range r.parts {
			r.cover.stroke(part.thinned(), width)
		}
	} else {
		pattern := make([]float64, len(r.state.dashes))
		for i, d := range r.state.dashes {
			pattern[i] = float64(d) * factor
		}
		for _, part := range r.parts {
			dash(part.thinned(), pattern, float64(r.state.offset)*factor, func(piece polyline) { r.cover.stroke(piece, width) })
		}
	}
	r.cover.blend(r.img, r.state.ink)
}

// thinned is the polyline without points no one would miss.
func (l polyline) thinned() polyline { return polyline{pts: thin(l.pts, thinness), closed: l.closed} }

// thinness is how far, in pixels, a thinned line may be from the true one.
const thinness = 0.06

// upright tells whether points are the corners of a rectangle with sides along
// the pixels, and returns its top left and bottom right.
func upright(pts []pixelPoint) (a, b pixelPoint, ok bool) {
	n := len(pts)
	if n == 5 && pts[4] == pts[0] {
		n = 4
	}
	if n != 4 {
		return a, b, false
	}
	p, q, s, t := pts[0], pts[1], pts[2], pts[3]
	if !(p.x == q.x && q.y == s.y && s.x == t.x && t.y == p.y) && !(p.y == q.y && q.x == s.x && s.y == t.y && t.x == p.x) {
		return a, b, false
	}
	return pixelPoint{min(p.x, s.x), min(p.y, s.y)}, pixelPoint{max(p.x, s.x), max(p.y, s.y)}, true
}

// strokeUpright draws a single line along the pixels, such as a grid line, and
// tells whether it was one.
func (r *Raster) strokeUpright(line polyline, half float64) bool {
	if len(line.pts) != 2 || line.closed {
		return false
	}
	a, b := line.pts[0], line.pts[1]
	switch {
	case a.y == b.y:
		blendRect(r.img, r.state.ink, min(a.x, b.x), a.y-half, max(a.x, b.x), a.y+half)
	case a.x == b.x:
		blendRect(r.img, r.state.ink, a.x-half, min(a.y, b.y), a.x+half, max(a.y, b.y))
	default:
		return false
	}
	return true
}

// flatten turns a path into polylines in pixels. Points that are not numbers
// are left out.
func (r *Raster) flatten(p vg.Path) {
	r.pts, r.parts = r.pts[:0], r.parts[:0]
	m := r.state.m
	begin := 0
	end := func(closed bool) {
		if len(r.pts) > begin {
			r.parts = append(r.parts, polyline{pts: r.pts[begin:len(r.pts):len(r.pts)], closed: closed})
		}
		begin = len(r.pts)
	}
	add := func(q pixelPoint) {
		if sane(q) {
			r.pts = append(r.pts, q)
		}
	}
	var home pixelPoint // where a sub-path began
	for _, comp := range p {
		switch comp.Type {
		case vg.MoveComp:
			end(false)
			home = m.apply(comp.Pos)
			add(home)
		case vg.LineComp:
			r.resume(begin, home)
			add(m.apply(comp.Pos))
		case vg.ArcComp:
			r.arc(comp, add)
		case vg.CurveComp:
			r.resume(begin, home)
			r.curve(comp, begin, add)
		case vg.CloseComp:
			if len(r.pts) > begin {
				home = r.pts[begin]
			}
			end(true)
		}
	}
	end(false)
}

// resume starts a sub-path where the last one closed, when none is open.
func (r *Raster) resume(begin int, home pixelPoint) {
	if len(r.pts) == begin && begin > 0 && sane(home) {
		r.pts = append(r.pts, home)
	}
}

func sane(q pixelPoint) bool {
	const far = 1e7 // pixels; beyond any picture, and still exact in arithmetic
	return math.Abs(q.x) < far && math.Abs(q.y) < far
}

func (r *Raster) arc(comp vg.PathComp, add func(pixelPoint)) {
	radius := float64(comp.Radius) * r.state.m.factor()
	steps := 4
	if radius > 0 && radius < 1e5 {
		// A chord departs from its arc by radius*(1-cos(step/2)): keep to 0.05 px.
		step := 2 * math.Acos(max(1-0.05/max(radius, 0.1), 0))
		steps = max(4, int(math.Ceil(math.Min(math.Abs(comp.Angle)/step, 1000))))
	}
	for i := 0; i <= steps; i++ {
		s, k := math.Sincos(comp.Start + comp.Angle*float64(i)/float64(steps))
		add(r.state.m.apply(vg.Point{X: comp.Pos.X + comp.Radius*vg.Length(k), Y: comp.Pos.Y + comp.Radius*vg.Length(s)}))
	}
}

func (r *Raster) curve(comp vg.PathComp, begin int, add func(pixelPoint)) {
	end := r.state.m.apply(comp.Pos)
	if len(r.pts) == begin {
		add(end)
		return
	}
	start := r.pts[len(r.pts)-1]
	switch len(comp.Control) {
	case 1:
		quadratic(start, r.state.m.apply(comp.Control[0]), end, add)
	case 2:
		cubic(start, r.state.m.apply(comp.Control[0]), r.state.m.apply(comp.Control[1]), end, add)
	default:
		add(end)
	}
}

// quadratic flattens a quadratic curve to a twentieth of a pixel, its start
// left out.
func quadratic(p0, p1, p2 pixelPoint, add func(pixelPoint)) {
	bend := math.Hypot(p0.x-2*p1.x+p2.x, p0.y-2*p1.y+p2.y)
	n := pieces(bend / 4)
	for i := 1; i <= n; i++ {
		t := float64(i) / float64(n)
		u := 1 - t
		add(pixelPoint{u*u*p0.x + 2*u*t*p1.x + t*t*p2.x, u*u*p0.y + 2*u*t*p1.y + t*t*p2.y})
	}
}

// cubic flattens a cubic curve likewise.
func cubic(p0, p1, p2, p3 pixelPoint, add func(pixelPoint)) {
	bend := max(math.Hypot(p0.x-2*p1.x+p2.x, p0.y-2*p1.y+p2.y), math.Hypot(p1.x-2*p2.x+p3.x, p1.y-2*p2.y+p3.y))
	n := pieces(bend * 3 / 4)
	for i := 1; i <= n; i++ {
		t := float64(i) / float64(n)
		u := 1 - t
		a, b, c, d := u*u*u, 3*u*u*t, 3*u*t*t, t*t*t
		add(pixelPoint{a*p0.x + b*p1.x + c*p2.x + d*p3.x, a*p0.y + b*p1.y + c*p2.y + d*p3.y})
	}
}

// pieces is how many chords keep a curve, which departs by sag from one, to
// within a twentieth of a pixel.
func pieces(sag float64) int {
	if !(sag > 0.05) {
		return 1
	}
	return int(math.Ceil(math.Sqrt(math.Min(sag, 1e5) / 0.05)))
}

// FillString draws one line of text with its baseline starting at pt.
func (r *Raster) FillString(f font.Face, pt vg.Point, s string) {
	r.text.fill(r, f, pt, s)
}

// DrawImage draws an image scaled into a rectangle.
func (r *Raster) DrawImage(rect vg.Rectangle, img image.Image) {
	b := img.Bounds()
	size := rect.Size()
	if b.Empty() || size.X == 0 || size.Y == 0 {
		return
	}
	// Image pixels (x right, y down) to points (y up) to our pixels.
	sx, sy := float64(size.X)/float64(b.Dx()), float64(size.Y)/float64(b.Dy())
	ox, oy := float64(rect.Min.X)-float64(b.Min.X)*sx, float64(rect.Max.Y)+float64(b.Min.Y)*sy
	m := r.state.m
	aff := f64.Aff3{
		m.a * sx, -m.c * sy, m.a*ox + m.c*oy + m.e,
		m.b * sx, -m.d * sy, m.b*ox + m.d*oy + m.f,
	}
	for _, v := range aff {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return
		}
	}
	xdraw.ApproxBiLinear.Transform(r.img, aff, img, b, xdraw.Over, nil)
}
