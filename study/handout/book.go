package handout

import (
	"fmt"
	"image/color"
	"sort"

	"gonum.org/v1/plot/vg"

	"quietbus/assets"
)

// margins of every page, in points.
const (
	marginLeft   = vg.Length(54)
	marginRight  = vg.Length(46)
	marginTop    = vg.Length(64)
	marginBottom = vg.Length(56)
)

// A book is the document while it is set: pages are filled from the top, and
// headers and footers follow when the number of pages is known.
type book struct {
	*canvas
	fonts   *fonts
	palette assets.Palette
	paper   Paper

	pages []pageSize
	y     vg.Length // the next line begins below this height
	empty bool      // nothing stands on the page yet
	fresh bool      // a heading is the last that was written
	float func()    // draws what waits for the top of the next upright page

	body, small, muted, heading style
}

type pageSize struct{ w, h vg.Length }

func newBook(c *canvas, paper Paper) *book {
	p := assets.Light
	b := &book{canvas: c, fonts: newFonts(), palette: p, paper: paper}
	b.body = style{regular, sizeBody, p.Ink}
	b.small = style{regular, sizeSmall, p.Ink}
	b.muted = style{regular, sizeSmall, p.Muted}
	b.heading = style{bold, sizeHeading, p.Ink}
	return b
}

// open begins a page, upright or lying.
func (b *book) open(lying bool) {
	w, h := b.paper.Size()
	if lying {
		w, h = h, w
	}
	b.page(w, h)
	b.pages = append(b.pages, pageSize{w, h})
	b.y, b.empty = h-marginTop, true
	if waiting := b.float; waiting != nil && !lying {
		b.float = nil
		waiting()
	}
}

// upright begins an upright page when the current one lies.
func (b *book) upright() {
	if b.lying() {
		b.open(false)
	}
}

// lying reports whether the current page is wider than it is high.
func (b *book) lying() bool { return b.size().w > b.size().h }

// size returns the size of the current page.
func (b *book) size() pageSize { return b.pages[len(b.pages)-1] }

// width returns the width of the text on the current page.
func (b *book) width() vg.Length { return b.size().w - marginLeft - marginRight }

// room returns the height that is left on the current page.
func (b *book) room() vg.Length { return b.y - marginBottom }

// need begins another page of the same shape when less than h is left.
func (b *book) need(h vg.Length) {
	for b.room() < h && !b.empty {
		b.open(b.lying())
	}
}

// skip leaves h free, except at the top of a page and below a heading.
func (b *book) skip(h vg.Length) {
	if !b.empty && !b.fresh {
		b.y -= h
	}
}

// text writes one line with its baseline at (x, y).
func (b *book) text(s style, x, y vg.Length, text string) {
	b.SetColor(s.ink)
	b.FillString(b.fonts.face(s), vg.Point{X: x, Y: y}, text)
	b.empty, b.fresh = false, false
}

// textRight writes one line that ends at x.
func (b *book) textRight(s style, x, y vg.Length, text string) {
	b.text(s, x-b.fonts.width(s, text), y, text)
}

// rule draws a horizontal line.
func (b *book) rule(x0, x1, y, width vg.Length, ink color.Color) {
	b.SetColor(ink)
	b.SetLineWidth(width)
	b.Stroke(vg.Path{{Type: vg.MoveComp, Pos: vg.Point{X: x0, Y: y}}, {Type: vg.LineComp, Pos: vg.Point{X: x1, Y: y}}})
}

// box fills a rectangle.
func (b *book) box(x0, y0, x1, y1 vg.Length, ink color.Color) {
	b.SetColor(ink)
	b.Fill(rectangle(x0, y0, x1, y1))
}

func rectangle(x0, y0, x1, y1 vg.Length) vg.Path {
	var p vg.Path
	p.Move(vg.Point{X: x0, Y: y0})
	p.Line(vg.Point{X: x1, Y: y0})
	p.Line(vg.Point{X: x1, Y: y1})
	p.Line(vg.Point{X: x0, Y: y1})
	p.Close()
	return p
}

// section writes a heading and keeps it with at least keep of what follows.
func (b *book) section(title string, keep vg.Length) {
	b.need(b.heading.line() + 14 + keep)
	b.skip(14)
	b.bookmark(title, 0, b.y)
	b.y -= b.heading.line()
	b.text(b.heading, marginLeft, b.y+3, b.fit(b.heading, title, b.width()))
	b.y -= 4
	b.fresh = true
}

// subsection writes a smaller heading.
func (b *book) subsection(title string, keep vg.Length) {
	s := b.body.bold()
	b.need(s.line() + 8 + keep)
	b.skip(8)
	b.bookmark(title, 1, b.y)
	b.y -= s.line()
	b.text(s, marginLeft, b.y+2.5, b.fit(s, title, b.width()))
	b.y -= 2
	b.fresh = true
}

// paragraph writes spans over the width of the page.
func (b *book) paragraph(spans ...span) {
	b.paragraphIn(marginLeft, b.width(), spans...)
}

// paragraphIn writes spans between x and x+w, over as many pages as it takes.
func (b *book) paragraphIn(x, w vg.Length, spans ...span) {
	for _, l := range b.wrap(w, spans) {
		b.need(l.height)
		b.y -= l.height
		b.set(l, x, b.y+l.height*0.27)
	}
}

// set writes a wrapped line with its baseline at y.
func (b *book) set(l line, x, y vg.Length) {
	for _, p := range l.parts {
		b.text(p.style, x+p.at, y, p.text)
	}
}

// finish writes header and footer on each page.
func (b *book) finish(header, revision, footer string) {
	for i, p := range b.pages {
		b.reopen(i + 1)
		right := p.w - marginRight
		revision := b.fit(b.muted, revision, (right-marginLeft)/2)
		if i > 0 {
			y := p.h - 40
			b.text(b.muted, marginLeft, y, b.fit(b.muted, header, right-marginLeft-b.fonts.width(b.muted, revision)-18))
			b.textRight(b.muted, right, y, revision)
			b.rule(marginLeft, right, y-6, 0.5, b.palette.Grid)
		}
		b.text(b.muted, marginLeft, 32, footer)
		b.textRight(b.muted, right, 32, fmt.Sprintf("page %d of %d", i+1, len(b.pages)))
	}
}

// fit shortens text to width w with an ellipsis.
func (b *book) fit(s style, text string, w vg.Length) string {
	if b.fonts.width(s, text) <= w {
		return text
	}
	letters := []rune(text)
	n := sort.Search(len(letters), func(n int) bool { return b.fonts.width(s, string(letters[:n+1])+"…") > w })
	return string(letters[:n]) + "…"
}
