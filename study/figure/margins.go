package figure

import (
	"math"
	"sort"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
	"quietbus/study/limits"
)

// Margins shows how much of each limit is used, worst first, before beside
// after. before may be nil.
func Margins(before, after *study.Outcome) *Figure {
	f := &Figure{Key: "margins", Title: "Share of each limit used", Size: vg.Point{X: 480, Y: 280}}
	rows, open := shares(before, after)
	f.Caption = "Value over limit, worst rows first; 100 % is at the limit."
	f.Caption += summed(after)
	for _, words := range open {
		f.Caption += " Not assessed: " + words + "."
	}
	f.Draw = func(c draw.Canvas, st *Style) []Hot {
		p := newPen(c, st)
		switch {
		case len(rows) > 0:
			return p.shareBars(rows, "limit, 100 %", before != nil, true)
		case len(open) > 0:
			return p.empty("No limit could be assessed:\n" + strings.Join(open, "\n"))
		}
		return p.empty("No limits are assessed yet.\nAdd an assessment point at a bus.")
	}
	return f
}

// shares lists every limit row, worst first, and what could not be assessed.
func shares(before, after *study.Outcome) (rows []barRow, open []string) {
	if after == nil {
		return nil, nil
	}
	for i := range after.Points {
		p := &after.Points[i]
		for _, words := range p.NotAssessed {
			open = append(open, p.Name+", "+words)
		}
		old := map[rowKey]*limits.Row{}
		if before != nil && i < len(before.Points) {
			for j := range before.Points[i].Rows {
				r := &before.Points[i].Rows[j]
				old[keyOf(r)] = r
			}
		}
		for j := range p.Rows {
			now := &p.Rows[j]
			row := barRow{point: p.Name, what: strings.Replace(study.RowName(*now), " harmonic ", " ", 1), rule: now.Rule, before: math.NaN(), after: now.Share}
			was := old[keyOf(now)]
			if was != nil {
				row.before = was.Share
			}
			row.detail = func() (d [2]string) {
				if was != nil {
					d[0] = against(was)
				}
				d[1] = against(now)
				return d
			}
			rows = append(rows, row)
		}
	}
	sort.SliceStable(rows, func(i, j int) bool { return rows[i].worst() > rows[j].worst() })
	return rows, open
}

func against(r *limits.Row) string { return number(r.Value) + " of " + number(r.Limit) + " " + r.Unit }

// rowKey tells the rows of one point apart.
type rowKey struct {
	quantity, index string
	order           int
}

func keyOf(r *limits.Row) rowKey { return rowKey{r.Quantity, r.Index, r.Order} }
