package handout

import (
	"image/color"
	"strings"

	"gonum.org/v1/plot/vg"
)

type align int

const (
	left  align = iota
	right       // for whole numbers and short codes
	point       // numbers, aligned on the decimal point
)

// column describes one column of a table.
type column struct {
	head  string
	unit  string
	align align
	flex  float64     // share of the width that is left over; 0: as wide as its content
	min   vg.Length   // least width
	ink   color.NRGBA // of the heading; zero is the usual one
}

// cell is one value in a table. A cell with draw is a picture between the
// given corners.
type cell struct {
	text  string
	style style // zero is the table's own
	draw  func(x0, y0, x1, y1 vg.Length)
}

// row is one line of a table, or with group a heading between its lines.
type row struct {
	cells []cell
	group string
}

// table is a table in print. Its headings are repeated on each page.
type table struct {
	columns []column
	rows    []row
	style   style
	tail    vg.Length // height of what must follow the last row on its page
}

const (
	tableGap = vg.Length(9)   // between columns
	tablePad = vg.Length(2.2) // above and below a row's text
)

func (t *table) add(cells ...cell) { t.rows = append(t.rows, row{cells: cells}) }

func (t *table) group(text string) { t.rows = append(t.rows, row{group: text}) }

// plain makes cells of texts.
func plain(texts ...string) []cell {
	cells := make([]cell, len(texts))
	for i, s := range texts {
		cells[i].text = s
	}
	return cells
}

// geometry is a table's geometry: where each column begins, how wide it is, and
// how much of it stands before the decimal point.
type geometry struct {
	x, w, whole []vg.Length
}

// table sets t from the left margin over width w; 0 is the page's width.
func (b *book) table(t *table, w vg.Length) {
	b.tableIn(t, marginLeft, w)
}

func (b *book) tableIn(t *table, x, w vg.Length) {
	if w == 0 {
		w = b.width()
	}
	if t.style == (style{}) {
		t.style = b.small
	}
	g := b.measure(t, x, w)
	head := b.headHeight(t)
	first := vg.Length(0)
	for i := range t.rows {
		first += b.rowHeight(t, g, &t.rows[i])
		if t.rows[i].group == "" {
			break
		}
	}
	b.need(head + first)
	b.tableHead(t, g, head)
	for i := range t.rows {
		r := &t.rows[i]
		h := b.rowHeight(t, g, r)
		keep := h
		if r.group != "" && i+1 < len(t.rows) {
			keep += b.rowHeight(t, g, &t.rows[i+1])
		}
		if i == len(t.rows)-1 {
			keep += t.tail
		}
		if b.room() < keep {
			b.open(b.lying())
			b.need(head + keep)
			b.tableHead(t, g, head)
		}
		b.tableRow(t, g, r, h)
	}
	b.y -= 3
}

// measure gives fixed columns their content's width and shares out the rest.
func (b *book) measure(t *table, x, w vg.Length) geometry {
	n := len(t.columns)
	g := geometry{make([]vg.Length, n), make([]vg.Length, n), make([]vg.Length, n)}
	var used vg.Length
	var flex float64
	for j := range t.columns {
		g.w[j], g.whole[j] = b.columnWidth(t, j)
		if t.columns[j].align != left {
			g.w[j] = min(g.w[j], w/3) // what is longer is shortened
			g.whole[j] = min(g.whole[j], g.w[j])
		}
		if t.columns[j].flex > 0 {
			g.w[j] = t.columns[j].min
			flex += t.columns[j].flex
		}
		used += g.w[j]
	}
	spare := w - used - tableGap*vg.Length(n-1)
	if spare < 0 {
		narrow(t, g.w, -spare)
	}
	for j := range t.columns {
		if f := t.columns[j].flex; f > 0 && spare > 0 {
			g.w[j] += spare * vg.Length(f/flex)
		}
		g.x[j] = x
		x += g.w[j] + tableGap
	}
	return g
}

// narrow takes over from the widest columns of text, which then wrap.
func narrow(t *table, w []vg.Length, over vg.Length) {
	for over > 0.01 {
		widest, next := -1, vg.Length(0)
		for j := range w {
			if t.columns[j].align == left && (widest < 0 || w[j] > w[widest]) {
				widest = j
			}
		}
		if widest < 0 || w[widest] <= 30 {
			return
		}
		for j := range w {
			if t.columns[j].align == left && j != widest {
				next = max(next, w[j])
			}
		}
		cut := min(over, max(w[widest]-max(next, 30), 1))
		w[widest] -= cut
		over -= cut
	}
}

// columnWidth returns the natural width of column j and the part of it that
// stands before the decimal point.
func (b *book) columnWidth(t *table, j int) (w, whole vg.Length) {
	col := &t.columns[j]
	var fraction vg.Length
	for i := range t.rows {
		if t.rows[i].group != "" || j >= len(t.rows[i].cells) {
			continue
		}
		c := &t.rows[i].cells[j]
		s := cellStyle(t, c)
		if col.align == point {
			a, z := splitPoint(c.text)
			whole = max(whole, b.fonts.width(s, a))
			fraction = max(fraction, b.fonts.width(s, z))
			continue
		}
		for _, l := range strings.Split(c.text, "\n") {
			w = max(w, b.fonts.width(s, l))
		}
	}
	w = max(w, whole+fraction)
	head := max(b.headWidth(col.head), b.fonts.width(b.muted, col.unit))
	if col.align == point && head > w {
		whole += (head - w) // headings stand flush right, and so do the numbers
	}
	return max(w, head, col.min), whole
}

func (b *book) headWidth(head string) (w vg.Length) {
	for _, l := range strings.Split(head, "\n") {
		w = max(w, b.fonts.width(b.small.bold(), l))
	}
	return w
}

// splitPoint splits a number before its decimal point.
func splitPoint(text string) (whole, fraction string) {
	if i := strings.IndexByte(text, '.'); i >= 0 {
		return text[:i], text[i:]
	}
	return text, ""
}

func cellStyle(t *table, c *cell) style {
	if c.style == (style{}) {
		return t.style
	}
	return c.style
}

func (b *book) headHeight(t *table) vg.Length {
	lines, unit := 1, 0
	for _, c := range t.columns {
		lines = max(lines, strings.Count(c.head, "\n")+1)
		if c.unit != "" {
			unit = 1
		}
	}
	return b.small.line()*vg.Length(lines+unit) + 2*tablePad
}

// tableHead writes the headings, standing on their rule; units below them.
func (b *book) tableHead(t *table, g geometry, h vg.Length) {
	s := b.small.bold()
	unit := vg.Length(0)
	for _, c := range t.columns {
		if c.unit != "" {
			unit = 1
		}
	}
	bottom := b.y - h
	for j, c := range t.columns {
		hs := s
		if c.ink != (color.NRGBA{}) {
			hs = s.in(c.ink)
		}
		lines := strings.Split(c.head, "\n")
		for k, l := range lines {
			y := bottom + tablePad + s.line()*(unit+vg.Length(len(lines)-1-k)+0.27)
			b.aligned(hs, c.align, g.x[j], g.w[j], y, l)
		}
		if c.unit != "" {
			b.aligned(b.muted, c.align, g.x[j], g.w[j], bottom+tablePad+s.line()*0.27, c.unit)
		}
	}
	last := len(t.columns) - 1
	b.rule(g.x[0], g.x[last]+g.w[last], bottom, 0.7, b.palette.Ink)
	b.y = bottom
}

func (b *book) aligned(s style, a align, x, w, y vg.Length, text string) {
	if a == left {
		b.text(s, x, y, text)
		return
	}
	b.textRight(s, x+w, y, text)
}

func (b *book) rowHeight(t *table, g geometry, r *row) vg.Length {
	if r.group != "" {
		return t.style.line() + 3*tablePad + 1
	}
	h := t.style.line()
	for j := range r.cells {
		c := &r.cells[j]
		if t.columns[j].align != left || c.text == "" {
			continue
		}
		n := len(b.wrap(g.w[j]+0.5, []span{{cellStyle(t, c), c.text}}))
		h = max(h, cellStyle(t, c).line()*vg.Length(n))
	}
	return h + 2*tablePad
}

func (b *book) tableRow(t *table, g geometry, r *row, h vg.Length) {
	top, bottom := b.y, b.y-h
	b.y = bottom
	last := len(t.columns) - 1
	if r.group != "" {
		b.text(t.style.bold(), g.x[0], bottom+tablePad+t.style.line()*0.27, b.fit(t.style.bold(), r.group, g.x[last]+g.w[last]-g.x[0]))
		b.rule(g.x[0], g.x[last]+g.w[last], bottom, 0.4, b.palette.Grid)
		return
	}
	for j := range r.cells {
		c := &r.cells[j]
		s := cellStyle(t, c)
		x, w := g.x[j], g.w[j]
		y := top - tablePad - s.line()*0.73
		switch {
		case c.draw != nil:
			c.draw(x, bottom, x+w, top)
		case c.text == "":
		case t.columns[j].align == point:
			whole, _ := splitPoint(c.text)
			if b.fonts.width(s, c.text) > w+0.5 {
				b.text(s, x, y, b.fit(s, c.text, w))
				break
			}
			b.text(s, max(x, x+g.whole[j]-b.fonts.width(s, whole)), y, c.text)
		case t.columns[j].align == right:
			b.textRight(s, x+w, y, b.fit(s, c.text, w+0.5))
		default:
			for _, l := range b.wrap(w+0.5, []span{{s, c.text}}) {
				b.set(l, x, y)
				y -= s.line()
			}
		}
	}
	b.rule(g.x[0], g.x[last]+g.w[last], bottom, 0.4, b.palette.Grid)
	b.empty = false
}

// tableHeight returns how high t stands in width w, 0 without a table.
func (b *book) tableHeight(t *table, w vg.Length) vg.Length {
	if t == nil {
		return 0
	}
	if t.style == (style{}) {
		t.style = b.small
	}
	g := b.measure(t, 0, w)
	h := b.headHeight(t) + 3
	for i := range t.rows {
		h += b.rowHeight(t, g, &t.rows[i])
	}
	return h
}
