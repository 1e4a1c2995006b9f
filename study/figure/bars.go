package figure

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
)

// A barRow is one quantity as share of what is allowed, before and after.
type barRow struct {
	point, what   string           // what bears, and which quantity of it
	before, after float64          // 1 is what is allowed; NaN when there is none
	detail        func() [2]string // before and after, in the quantity's own unit; for the read-out
	rule          string
}

func (r *barRow) name() string { return r.point + "  " + r.what }

// worst returns the higher share of a row.
func (r *barRow) worst() float64 {
	return math.Max(zeroed(r.before), zeroed(r.after))
}

func zeroed(v float64) float64 {
	if math.IsNaN(v) {
		return 0
	}
	return v
}

// shareBars draws rows as bars against the line of what is allowed, as many as
// there is room for. Each bar has its share written at its own end.
func (p *pen) shareBars(rows []barRow, limit string, before, after bool) []Hot {
	s := p.st
	r := p.c.Rectangle
	pad := s.Body
	both := before && after
	height := 2.0 * s.Small
	if both {
		height = 2.7 * s.Small
	}
	top := r.Max.Y - 0.9*pad - 2.6*s.Small
	bottom := r.Min.Y + 0.6*pad
	n := min(len(rows), max(1, int((top-bottom)/height)))
	rest := len(rows) - n
	if rest > 0 && n > 1 && top-vg.Length(n)*height-bottom < 1.4*s.Small {
		n--
		rest++
	}
	rows = rows[:n]
	names, most := vg.Length(0), 1.25
	for i := range rows {
		names = max(names, p.width(s.Small, rows[i].name()))
		most = math.Max(most, rows[i].worst())
	}
	names = min(names, 0.45*(r.Max.X-r.Min.X))
	x0 := r.Min.X + pad + names + 0.8*s.Small
	x1 := r.Max.X - pad - 0.9*s.Small - p.width(s.Small, "over 3.43×")
	at := func(v float64) vg.Length { return x0 + vg.Length(v/most)*(x1-x0) }
	a := &axes{pen: p, area: rect(x0, bottom, r.Max.X-pad, top+0.9*s.Small), yTitle: at(1) + p.width(s.Small, limit)/2}
	a.key(both, both)
	line := at(1)
	foot := top - vg.Length(n)*height
	p.stroke(s.Thin, s.Grid, nil, vg.Point{X: x0, Y: foot}, vg.Point{X: x0, Y: top})
	p.stroke(s.Line*1.3, s.Limit, nil, vg.Point{X: line, Y: foot}, vg.Point{X: line, Y: top + 0.2*s.Small})
	p.write(line, top+0.9*s.Small, centre, s.Small, s.Limit, limit)
	for i := range rows {
		row := &rows[i]
		y := top - (vg.Length(i)+0.5)*height
		p.write(r.Min.X+pad, y, left, s.Small, s.Ink, p.fitTail(s.Small, names, row.point, row.what))
		half := 0.42 * s.Small
		if both {
			p.shareBar(x0, y+0.55*s.Small, half, at, row.before, false)
			p.shareBar(x0, y-0.55*s.Small, half, at, row.after, true)
		} else {
			p.shareBar(x0, y, 0.55*s.Small, at, row.after, true)
		}
		p.hot(rect(r.Min.X+pad, y-height/2, r.Max.X-pad, y+height/2), "value", fmt.Sprint("row", i), row.readout(both))
	}
	if rest > 0 {
		p.write(r.Min.X+pad, foot-0.7*s.Small, left, s.Small, s.Muted, fmt.Sprintf("and %d more below these", rest))
	}
	return p.hots
}

// shareBar draws one bar with its share at its end, hatched from the limit on.
func (p *pen) shareBar(x0, y, half vg.Length, at func(float64) vg.Length, share float64, after bool) {
	if math.IsNaN(share) {
		return
	}
	s := p.st
	end, line := at(share), at(1)
	ink := s.Muted
	if after {
		ink = s.Ink
		p.fill(rect(x0, y-half, min(end, line), y+half), s.After)
	} else {
		p.box(rect(x0, y-half, end, y+half), s.Line, s.Before, nil)
	}
	words := number(100*share) + " %"
	if share > 1 {
		p.hatch(rect(line, y-half, end, y+half), s.Over)
		words = "over " + number(share) + "×"
		if after {
			ink = s.Over
		}
	}
	p.patch(end+0.5*s.Small, y, s.Small, ink, after && share > 1, words)
}

// readout says both shares and, in the quantity's own unit, what they are of.
func (r *barRow) readout(both bool) string {
	var detail [2]string
	if r.detail != nil {
		detail = r.detail()
	}
	text := r.name()
	for i, v := range []float64{r.before, r.after} {
		if math.IsNaN(v) {
			continue
		}
		when := [2]string{"before", "after"}[i]
		if !both {
			when = "now"
		}
		text += fmt.Sprintf("\n%s\t%s %%\t%s", when, number(100*v), detail[i])
	}
	if r.rule != "" {
		text += "\n" + r.rule
	}
	return text
}
