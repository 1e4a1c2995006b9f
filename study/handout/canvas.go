package handout

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"image/png"
	"io"
	"math"
	"strconv"
	"time"

	"codeberg.org/go-pdf/fpdf"
	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
)

// A canvas is a vg.Canvas whose pages go into one PDF. The plotting library
// has a PDF canvas too, but that one knows only the Windows code page (no ohm
// sign), one page size, no kerning and no fixed date; this one writes Unicode
// text with embedded subset fonts, so that figures and text share fonts and
// can be searched and copied.
type canvas struct {
	doc    *fpdf.Fpdf
	faces  map[font.Font]string // family registered for each face without its size
	state  ink
	stack  []ink
	images int
	buf    []byte
}

// ink is the part of the drawing state that the PDF library does not keep.
type ink struct {
	alpha float64
	width vg.Length
}

// newCanvas returns an empty document. All of it but the date depends on what
// is drawn alone.
func newCanvas(title, author string, date time.Time) *canvas {
	doc := fpdf.NewCustom(&fpdf.InitType{UnitStr: "pt", Size: fpdf.SizeType{Wd: 595, Ht: 842}})
	doc.SetMargins(0, 0, 0)
	doc.SetAutoPageBreak(false, 0)
	doc.SetCatalogSort(true)
	doc.SetCreationDate(date)
	doc.SetModificationDate(date)
	doc.SetTitle(basic(title), true)
	doc.SetAuthor(basic(author), true)
	doc.SetCreator("Quietbus", true)
	doc.SetProducer("Quietbus", true)
	return &canvas{doc: doc, faces: map[font.Font]string{}}
}

// page begins a page of the given size.
func (c *canvas) page(w, h vg.Length) {
	c.doc.AddPageFormat("P", fpdf.SizeType{Wd: w.Points(), Ht: h.Points()})
	c.state, c.stack = ink{alpha: 1}, nil
	c.raw("1 j") // round joins: a waveform's corners must not grow spikes
	vg.Initialize(c)
}

// reopen goes back to page n, counted from 1, to add to it.
func (c *canvas) reopen(n int) {
	c.doc.SetPage(n)
	c.state, c.stack = ink{alpha: 1}, nil
	vg.Initialize(c)
}

// bookmark puts an entry of the outline at height y of the current page.
func (c *canvas) bookmark(text string, level int, y vg.Length) {
	_, h := c.doc.GetPageSize()
	c.doc.Bookmark(basic(text), level, h-y.Points())
}

// WriteTo closes the document and writes it.
func (c *canvas) WriteTo(w io.Writer) (int64, error) {
	var b bytes.Buffer
	if err := c.doc.Output(&b); err != nil {
		return 0, fmt.Errorf("the PDF cannot be made: %w", err)
	}
	return b.WriteTo(w)
}

// raw writes PDF operators in the page's own coordinates: points, from the
// bottom left, as vg has them.
func (c *canvas) raw(op string) { c.doc.RawWriteStr(op) }

func (c *canvas) SetLineWidth(w vg.Length) {
	c.state.width = w
	c.raw(num(w.Points()) + " w")
}

func (c *canvas) SetLineDash(pattern []vg.Length, offset vg.Length) {
	b := append(c.buf[:0], '[')
	for _, p := range pattern {
		b = append(appendNum(b, p.Points()), ' ')
	}
	b = append(appendNum(append(b, "] "...), offset.Points()), " d"...)
	c.flush(b)
}

func (c *canvas) SetColor(clr color.Color) {
	if clr == nil {
		clr = color.Black
	}
	p := color.NRGBAModel.Convert(clr).(color.NRGBA)
	b := c.buf[:0]
	for _, op := range [...]string{"rg ", "RG"} {
		for _, v := range [...]uint8{p.R, p.G, p.B} {
			b = append(strconv.AppendFloat(b, float64(v)/255, 'f', 3, 64), ' ')
		}
		b = append(b, op...)
	}
	c.flush(b)
	if alpha := float64(p.A) / 255; alpha != c.state.alpha {
		c.state.alpha = alpha
		c.doc.SetAlpha(alpha, "Normal")
	}
}

func (c *canvas) Rotate(rad float64) {
	sin, cos := math.Sincos(rad)
	c.raw(fmt.Sprintf("%.5f %.5f %.5f %.5f 0 0 cm", cos, sin, -sin, cos))
}

func (c *canvas) Translate(p vg.Point) {
	c.raw("1 0 0 1 " + num(p.X.Points()) + " " + num(p.Y.Points()) + " cm")
}

func (c *canvas) Scale(x, y float64) { c.raw(fmt.Sprintf("%.5f 0 0 %.5f 0 0 cm", x, y)) }

func (c *canvas) Push() {
	c.stack = append(c.stack, c.state)
	c.raw("q")
}

func (c *canvas) Pop() {
	c.state = c.stack[len(c.stack)-1]
	c.stack = c.stack[:len(c.stack)-1]
	c.raw("Q")
}

func (c *canvas) Stroke(p vg.Path) {
	if c.state.width > 0 {
		c.path(p, "S")
	}
}

func (c *canvas) Fill(p vg.Path) { c.path(p, "f") }

func (c *canvas) path(p vg.Path, op string) {
	if len(p) == 0 {
		return
	}
	b := c.buf[:0]
	var at vg.Point
	for _, comp := range p {
		switch comp.Type {
		case vg.MoveComp:
			at = comp.Pos
			b = appendPoint(b, at, "m ")
		case vg.LineComp:
			at = comp.Pos
			b = appendPoint(b, at, "l ")
		case vg.CurveComp:
			b = appendCurve(b, at, comp)
			at = comp.Pos
		case vg.ArcComp:
			b, at = appendArc(b, comp)
		case vg.CloseComp:
			b = append(b, "h "...)
		}
	}
	c.flush(append(b, op...))
}

// flush writes b and keeps its memory for the next call.
func (c *canvas) flush(b []byte) {
	c.raw(string(b))
	c.buf = b[:0]
}

func appendCurve(b []byte, at vg.Point, comp vg.PathComp) []byte {
	c1, c2 := comp.Control[0], comp.Control[0]
	if len(comp.Control) > 1 {
		c2 = comp.Control[1]
	} else { // a quadratic curve, raised to a cubic one
		q := comp.Control[0]
		c1 = vg.Point{X: at.X + (q.X-at.X)*2/3, Y: at.Y + (q.Y-at.Y)*2/3}
		c2 = vg.Point{X: comp.Pos.X + (q.X-comp.Pos.X)*2/3, Y: comp.Pos.Y + (q.Y-comp.Pos.Y)*2/3}
	}
	return appendPoint(appendPoint(appendPoint(b, c1, ""), c2, ""), comp.Pos, "c ")
}

// appendArc draws an arc in pieces of at most a quarter turn, joined to what
// went before by a line, and returns its end point.
func appendArc(b []byte, comp vg.PathComp) ([]byte, vg.Point) {
	on := func(angle float64, along float64) vg.Point {
		sin, cos := math.Sincos(angle)
		return vg.Point{
			X: comp.Pos.X + comp.Radius*vg.Length(cos-along*sin),
			Y: comp.Pos.Y + comp.Radius*vg.Length(sin+along*cos),
		}
	}
	op := "l "
	if len(b) == 0 {
		op = "m "
	}
	b = appendPoint(b, on(comp.Start, 0), op)
	n := max(1, int(math.Ceil(math.Abs(comp.Angle)/(math.Pi/2)-1e-9)))
	step := comp.Angle / float64(n)
	k := 4.0 / 3 * math.Tan(step/4)
	end := comp.Start
	for range n {
		b = appendPoint(b, on(end, k), "")
		end += step
		b = appendPoint(b, on(end, -k), "")
		b = appendPoint(b, on(end, 0), "c ")
	}
	return b, on(end, 0)
}

// FillString writes text with its baseline at pt. Runs are set one by one
// where the font kerns, so that the text is as wide as the plotting library
// measured it.
func (c *canvas) FillString(f font.Face, pt vg.Point, text string) {
	if f.Font.Size == 0 || text == "" {
		return
	}
	c.use(f)
	_, h := c.doc.GetPageSize()
	y := h - pt.Y.Points()
	for _, r := range kerned(f, legible(f, text)) {
		c.doc.Text((pt.X + r.at).Points(), y, r.text)
	}
}

// use selects a face, embedding its font when it is new.
func (c *canvas) use(f font.Face) {
	key := f.Font
	key.Size = 0
	family, ok := c.faces[key]
	if !ok {
		family = "q" + strconv.Itoa(len(c.faces))
		c.faces[key] = family
		var ttf bytes.Buffer
		if _, err := f.Face.WriteSourceTo(nil, &ttf); err != nil {
			c.doc.SetError(fmt.Errorf("font %s: %w", f.Name(), err))
			return
		}
		c.doc.AddUTF8FontFromBytes(family, "", ttf.Bytes())
	}
	c.doc.SetFont(family, "", f.Font.Size.Points())
}

func (c *canvas) DrawImage(rect vg.Rectangle, img image.Image) {
	var b bytes.Buffer
	if err := png.Encode(&b, img); err != nil {
		c.doc.SetError(fmt.Errorf("image: %w", err))
		return
	}
	c.images++
	name := "image" + strconv.Itoa(c.images)
	opt := fpdf.ImageOptions{ImageType: "png"}
	c.doc.RegisterImageOptionsReader(name, opt, &b)
	_, h := c.doc.GetPageSize()
	size := rect.Size()
	c.doc.ImageOptions(name, rect.Min.X.Points(), h-rect.Max.Y.Points(), size.X.Points(), size.Y.Points(), false, opt, 0, "")
}

// run is a piece of text and where it stands from the start of its line.
type run struct {
	text string
	at   vg.Length
}

// kerned splits text where the font moves two letters closer or apart.
func kerned(f font.Face, text string) []run {
	var (
		buf   sfnt.Buffer
		em    = f.Face.UnitsPerEm()
		scale = f.Font.Size / vg.Length(em)
		runs  []run
		start int
		x, x0 int
		prev  sfnt.GlyphIndex
	)
	for i, r := range text {
		g, _ := f.Face.GlyphIndex(&buf, r)
		if i > 0 {
			if k, err := f.Face.Kern(&buf, prev, g, fixedEm(em), xfont.HintingNone); err == nil && k != 0 {
				runs = append(runs, run{text[start:i], scale * vg.Length(x0)})
				x += int(k)
				start, x0 = i, x
			}
		}
		adv, _ := f.Face.GlyphAdvance(&buf, g, fixedEm(em), xfont.HintingNone)
		x += int(adv)
		prev = g
	}
	return append(runs, run{text[start:], scale * vg.Length(x0)})
}

func num(v float64) string { return string(appendNum(nil, v)) }

// appendNum writes v to a hundredth of a point, which no printer resolves.
func appendNum(b []byte, v float64) []byte {
	v = math.Round(v*100) / 100
	if v == 0 {
		v = 0 // no minus zero
	}
	return strconv.AppendFloat(b, v, 'f', -1, 64)
}

func appendPoint(b []byte, p vg.Point, op string) []byte {
	b = append(appendNum(b, p.X.Points()), ' ')
	b = append(appendNum(b, p.Y.Points()), ' ')
	return append(b, op...)
}
