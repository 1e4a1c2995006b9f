package handout

import (
	"strings"

	"gonum.org/v1/plot/vg"

	"quietbus/study/figure"
)

// singleLine puts the single-line on the first page when it fits there, else
// on top of the next one, while the text goes on; a wide one lies on a page of
// its own.
func (p *printer) singleLine() {
	f := p.figures.single
	if f == nil {
		return
	}
	const caption, gap, least = vg.Length(30), vg.Length(8), 0.75 // of its natural size
	w, h := f.Size.X, f.Size.Y
	scale := min(1, p.width()/w)
	switch {
	case p.room() >= h*scale+caption+gap && scale >= least:
		p.skip(gap)
		p.placeIn(*f, marginLeft, p.width(), h*scale+caption)
	case scale >= least && h*scale+caption <= p.size().h-marginTop-marginBottom:
		p.float = func() {
			p.placeIn(*f, marginLeft, p.width(), h*scale+caption)
			p.skip(gap)
		}
	default:
		p.open(w > h)
		p.placeIn(*f, marginLeft, p.width(), p.room())
	}
}

// evidence sets the figures on lying pages: wide ones over the whole width,
// others two and two.
func (p *printer) evidence() {
	const gap = vg.Length(24)
	for _, sh := range p.figures.sheets {
		p.open(true)
		p.section(sh.title, 0)
		rows := sh.rows()
		h := (p.room() - vg.Length(len(rows)-1)*10) / vg.Length(max(len(rows), 2))
		for _, row := range rows {
			top := p.y
			for k, f := range row {
				x, w := marginLeft, p.width()
				if !f.wide {
					w = (w - gap) / 2
					x += vg.Length(k) * (w + gap)
				}
				p.y = top
				p.placeIn(f, x, w, h)
			}
			p.y = top - h - 10
		}
	}
}

// placeIn draws a figure with its caption into width w and height h below the
// cursor, and moves the cursor below it.
func (p *printer) placeIn(f drawn, x, w, h vg.Length) {
	lines := first(6, p.wrap(w, []span{{p.small.bold(), f.Title + "  "}, {p.muted, strings.TrimSpace(f.Caption)}}))
	text := vg.Length(4)
	for _, l := range lines {
		text += l.height
	}
	bottom := p.y - (h - text)
	p.Push()
	f.Draw(p.part(x, bottom, x+w, p.y), figure.Print())
	p.Pop()
	p.y = bottom - 4
	for _, l := range lines {
		p.y -= l.height
		p.set(l, x, p.y+l.height*0.27)
	}
}
