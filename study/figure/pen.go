package figure

import (
	"image/color"
	"math"
	"sort"
	"strconv"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// pen draws on one canvas in one style and gathers hot places.
type pen struct {
	c    draw.Canvas
	st   *Style
	hots []Hot
}

// newPen starts a figure on its ground. Where the canvas is too small for the
// type asked for, the type gives way, so that no two texts meet.
func newPen(c draw.Canvas, st *Style) *pen {
	w, h := c.Max.X-c.Min.X, c.Max.Y-c.Min.Y
	if k := min(w/(30*st.Small), h/(17*st.Small)); k < 1 && k > 0 {
		st = st.Scaled(float64(k))
	}
	p := &pen{c: c, st: st}
	p.fill(c.Rectangle, st.Ground)
	return p
}

// Where a text stands against its point.
const (
	left   = draw.XLeft
	centre = draw.XCenter
	right  = draw.XRight
)

// write puts a text with its middle line at y.
func (p *pen) write(x, y vg.Length, align draw.XAlignment, size vg.Length, ink color.Color, words string) {
	p.set(p.st.text(size, ink, false, false), x, y, align, words)
}

func (p *pen) writeBold(x, y vg.Length, align draw.XAlignment, size vg.Length, ink color.Color, words string) {
	p.set(p.st.text(size, ink, true, false), x, y, align, words)
}

func (p *pen) set(ts draw.TextStyle, x, y vg.Length, align draw.XAlignment, words string) {
	if words == "" {
		return
	}
	// figures stand on the middle of their own height, whatever the letters
	x += vg.Length(align) * p.st.faces.width(ts, words)
	ts.XAlign, ts.YAlign = draw.XLeft, draw.YBottom
	p.c.SetColor(ts.Color)
	face := p.st.faces.cache.Lookup(ts.Font, ts.Font.Size)
	for _, piece := range pieces(words) {
		p.c.FillString(face, vg.Point{X: x, Y: y - 0.36*ts.Font.Size}, piece)
		x += p.st.faces.width(ts, piece)
	}
}

func (p *pen) width(size vg.Length, words string) vg.Length {
	return p.st.faces.width(p.st.text(size, p.st.Ink, false, false), words)
}

func (p *pen) widthBold(size vg.Length, words string) vg.Length {
	return p.st.faces.width(p.st.text(size, p.st.Ink, true, false), words)
}

// fit shortens a text to a width, with an ellipsis; nothing is left where there
// is no room at all.
func (p *pen) fit(size, width vg.Length, words string) string {
	return shorten(words, width, func(w string) vg.Length { return p.width(size, w) })
}

func (p *pen) fitBold(size, width vg.Length, words string) string {
	return shorten(words, width, func(w string) vg.Length { return p.widthBold(size, w) })
}

// firstFit returns the first wording that has room, the last one shortened when
// none has.
func (p *pen) firstFit(size, width vg.Length, wordings ...string) string {
	for _, w := range wordings {
		if p.width(size, w) <= width {
			return w
		}
	}
	return p.fit(size, width, wordings[len(wordings)-1])
}

func shorten(words string, width vg.Length, measure func(string) vg.Length) string {
	if words == "" || measure(words) <= width {
		return words
	}
	r := []rune(words)
	n := sort.Search(len(r), func(n int) bool { return measure(string(r[:n])+"…") > width })
	if n < 2 {
		return ""
	}
	return strings.TrimRight(string(r[:n-1]), " ,") + "…"
}

// fitTail shortens the first of two words to a width that both share, so that
// the second stays whole.
func (p *pen) fitTail(size, width vg.Length, words, tail string) string {
	if whole := words + "  " + tail; p.width(size, whole) <= width {
		return whole
	}
	room := width - p.width(size, "  "+tail)
	if room < 3*size {
		return p.fit(size, width, words+"  "+tail)
	}
	return p.fit(size, room, words) + "  " + tail
}

func (p *pen) stroke(width vg.Length, ink color.Color, dash []vg.Length, points ...vg.Point) {
	if len(points) < 2 {
		return
	}
	path := make(vg.Path, 0, len(points))
	path.Move(points[0])
	for _, q := range points[1:] {
		path.Line(q)
	}
	p.strokePath(width, ink, dash, path)
}

func (p *pen) strokePath(width vg.Length, ink color.Color, dash []vg.Length, path vg.Path) {
	p.c.SetColor(ink)
	p.c.SetLineWidth(width)
	p.c.SetLineDash(dash, 0)
	p.c.Stroke(path)
	if dash != nil {
		p.c.SetLineDash(nil, 0)
	}
}

func rectPath(r vg.Rectangle) vg.Path {
	path := make(vg.Path, 0, 5)
	path.Move(r.Min)
	path.Line(vg.Point{X: r.Max.X, Y: r.Min.Y})
	path.Line(r.Max)
	path.Line(vg.Point{X: r.Min.X, Y: r.Max.Y})
	path.Close()
	return path
}

func (p *pen) fill(r vg.Rectangle, ink color.Color) {
	p.c.SetColor(ink)
	p.c.Fill(rectPath(r))
}

func (p *pen) fillPath(ink color.Color, path vg.Path) {
	p.c.SetColor(ink)
	p.c.Fill(path)
}

func (p *pen) box(r vg.Rectangle, width vg.Length, ink color.Color, dash []vg.Length) {
	p.strokePath(width, ink, dash, rectPath(r))
}

func circle(at vg.Point, radius vg.Length) vg.Path {
	path := make(vg.Path, 0, 3)
	path.Move(vg.Point{X: at.X + radius, Y: at.Y})
	path.Arc(at, radius, 0, 2*math.Pi)
	path.Close()
	return path
}

// hatch fills a rectangle with slanted lines.
func (p *pen) hatch(r vg.Rectangle, ink color.Color) {
	step := 2.2 * vg.Length(1)
	w, h := r.Max.X-r.Min.X, r.Max.Y-r.Min.Y
	if w <= 0 || h <= 0 {
		return
	}
	var path vg.Path
	for d := -h; d < w; d += step {
		x0, y0 := r.Min.X+d, r.Min.Y
		x1, y1 := x0+h, r.Max.Y
		if x0 < r.Min.X {
			y0, x0 = y0+(r.Min.X-x0), r.Min.X
		}
		if x1 > r.Max.X {
			y1, x1 = y1-(x1-r.Max.X), r.Max.X
		}
		if y1 > y0 {
			path.Move(vg.Point{X: x0, Y: y0})
			path.Line(vg.Point{X: x1, Y: y1})
		}
	}
	if len(path) > 0 {
		p.strokePath(p.st.Thin*1.4, ink, nil, path)
	}
	p.box(r, p.st.Thin*1.4, ink, nil)
}

func (p *pen) hot(r vg.Rectangle, role, id, text string) {
	p.hots = append(p.hots, Hot{Rect: r, ID: id, Role: role, Text: text})
}

func rect(x0, y0, x1, y1 vg.Length) vg.Rectangle {
	return vg.Rectangle{Min: vg.Point{X: min(x0, x1), Y: min(y0, y1)}, Max: vg.Point{X: max(x0, x1), Y: max(y0, y1)}}
}

// number formats v with three significant digits and no exponent where that
// can be read.
func number(v float64) string {
	v, _ = strconv.ParseFloat(strconv.FormatFloat(v, 'g', 3, 64), 64)
	switch a := math.Abs(v); {
	case v == 0:
		return "0"
	case a >= 1e6 || a < 1e-4:
		return strconv.FormatFloat(v, 'e', 2, 64)
	case a >= 100:
		return strconv.FormatFloat(v, 'f', 0, 64)
	default:
		digits := 2 - int(math.Floor(math.Log10(a)))
		return strconv.FormatFloat(v, 'f', max(digits, 0), 64)
	}
}

// plain formats a nameplate value as it was typed.
func plain(v float64) string { return strconv.FormatFloat(v, 'g', 6, 64) }

// patch writes a text on a piece of ground of its own, so that lines behind it
// do not cross it.
func (p *pen) patch(x, y vg.Length, size vg.Length, ink color.Color, bold bool, words string) {
	ts := p.st.text(size, ink, bold, false)
	p.fill(rect(x-1, y-0.55*size, x+p.st.faces.width(ts, words)+1, y+0.55*size), p.st.Ground)
	p.set(ts, x, y, left, words)
}

// empty says in the middle of the canvas why there is nothing to see.
func (p *pen) empty(words string) []Hot {
	r := p.c.Rectangle
	var lines []string
	for _, sentence := range strings.Split(words, "\n") {
		lines = append(lines, p.wrap(p.st.Head, r.Max.X-r.Min.X-2*p.st.Head, sentence)...)
	}
	y := (r.Min.Y+r.Max.Y)/2 + p.st.Head*vg.Length(len(lines)-1)*0.7
	for _, l := range lines {
		p.write((r.Min.X+r.Max.X)/2, y, centre, p.st.Head, p.st.Muted, l)
		y -= 1.4 * p.st.Head
	}
	return p.hots
}

// wrap breaks a sentence into lines of at most a width.
func (p *pen) wrap(size, width vg.Length, sentence string) (lines []string) {
	line := ""
	for _, word := range strings.Fields(sentence) {
		next := strings.TrimSpace(line + " " + word)
		if line != "" && p.width(size, next) > width {
			lines, next = append(lines, line), word
		}
		line = next
	}
	return append(lines, line)
}
