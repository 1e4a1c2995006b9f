package figure

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
)

// share is one limit row before and after, as share of its limit.
type share struct {
	name, rule    string
	before, after float64 // NaN when there is none
	detail        string
}

// Margins shows how much of each limit is used, worst first, before beside
// after. before may be nil.
func Margins(before, after *study.Outcome) *Figure {
	f := &Figure{Key: "margins", Title: "Share of each limit used", Size: vg.Point{X: 480, Y: 260}}
	list, open := shares(before, after)
	f.Caption = "Value over limit, worst rows first; 100 % is at the limit."
	for _, words := range open {
		f.Caption += " Not assessed: " + words + "."
	}
	f.Draw = func(c draw.Canvas, st *Style) []Hot { return drawMargins(newPen(c, st), list, before != nil) }
	return f
}

func shares(before, after *study.Outcome) (list []share, open []string) {
	if after == nil {
		return nil, nil
	}
	for i := range after.Points {
		p := &after.Points[i]
		for _, words := range p.NotAssessed {
			open = append(open, p.Name+", "+words)
		}
		old := map[string]float64{}
		if before != nil && i < len(before.Points) {
			for _, r := range before.Points[i].Rows {
				old[study.RowName(r)] = r.Share
			}
		}
		for _, r := range p.Rows {
			s := share{name: p.Name + "  " + strings.Replace(study.RowName(r), " harmonic ", " ", 1), rule: r.Rule, before: math.NaN(), after: r.Share,
				detail: fmt.Sprintf("%s %% against %s %%", number(r.Value), number(r.Limit))}
			if v, ok := old[study.RowName(r)]; ok {
				s.before = v
			}
			list = append(list, s)
		}
	}
	worst := func(s share) float64 {
		if math.IsNaN(s.before) {
			return s.after
		}
		return math.Max(s.before, s.after)
	}
	sort.SliceStable(list, func(i, j int) bool { return worst(list[i]) > worst(list[j]) })
	return list, open
}

func drawMargins(p *pen, list []share, both bool) []Hot {
	if len(list) == 0 {
		return p.empty("No limits are assessed yet.\nAdd an assessment point at a bus.")
	}
	s := p.st
	r := p.c.Rectangle
	pad := s.Body
	rowHeight := 2.1 * s.Small
	top := r.Max.Y - pad - 1.8*s.Small
	n := min(len(list), max(1, int((top-r.Min.Y-pad)/rowHeight)))
	list = list[:n]
	names := vg.Length(0)
	for _, l := range list {
		names = max(names, p.width(s.Small, l.name))
	}
	names = min(names, 0.5*(r.Max.X-r.Min.X))
	x0 := r.Min.X + pad + names + 0.8*s.Small
	x1 := r.Max.X - pad - 5.2*s.Small
	most := 1.25
	for _, l := range list {
		most = math.Max(most, l.after)
		if !math.IsNaN(l.before) {
			most = math.Max(most, l.before)
		}
	}
	at := func(v float64) vg.Length { return x0 + vg.Length(v/most)*(x1-x0) }
	limit := at(1)
	bottom := top - vg.Length(n)*rowHeight
	p.stroke(s.Line*1.3, s.Limit, nil, vg.Point{X: limit, Y: bottom}, vg.Point{X: limit, Y: top + 0.3*s.Small})
	p.write(limit, top+1.1*s.Small, centre, s.Small, s.Limit, "limit")
	for i, l := range list {
		y := top - (vg.Length(i)+0.5)*rowHeight
		p.write(r.Min.X+pad, y, left, s.Small, s.Ink, p.fit(s.Small, names, l.name))
		half := rowHeight * 0.36
		if both && !math.IsNaN(l.before) {
			p.box(rect(x0, y+0.1*half, at(l.before), y+half), s.Line, s.Before, nil)
		}
		lo, hi := y-half, y-0.1*half
		if !both {
			lo, hi = y-half*0.7, y+half*0.7
		}
		p.fill(rect(x0, lo, at(math.Min(l.after, 1)), hi), s.After)
		end := at(l.after)
		if l.after > 1 {
			p.hatch(rect(limit, lo, end, hi), s.Over)
		}
		far := end
		if both && !math.IsNaN(l.before) {
			far = max(far, at(l.before))
		}
		if l.after > 1 {
			p.patch(far+0.6*s.Small, y, s.Small, s.Over, true, fmt.Sprintf("over %.2f×", l.after))
		} else {
			p.patch(far+0.6*s.Small, y, s.Small, s.Ink, false, fmt.Sprintf("%.0f %%", 100*l.after))
		}
		text := l.name + "\nafter\t" + fmt.Sprintf("%.3g %% of its limit", 100*l.after) + "\n\t" + l.detail
		if !math.IsNaN(l.before) {
			text += "\nbefore\t" + fmt.Sprintf("%.3g %%", 100*l.before)
		}
		p.hot(rect(r.Min.X+pad, y-rowHeight/2, r.Max.X-pad, y+rowHeight/2), "value", fmt.Sprint("row", i), text+"\n"+l.rule)
	}
	return p.hots
}
