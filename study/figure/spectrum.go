package figure

import (
	"fmt"
	"math"
	"math/cmplx"
	"strconv"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// Selection names what a figure shows: the voltage of a bus, or the current
// of an element at its end on the bus (its first end when Bus is empty).
type Selection struct {
	Bus     string
	Element string
}

// Name returns the selection in words.
func (s Selection) Name() string {
	if s.Element == "" {
		return "voltage at " + s.Bus
	}
	if s.Bus == "" {
		return "current of " + s.Element
	}
	return "current of " + s.Element + " at " + s.Bus
}

func (s Selection) key() string {
	parts := []string{"bus", s.Bus}
	if s.Element != "" {
		parts = []string{"element", s.Element, s.Bus}
	}
	return slug(strings.Join(parts, " "))
}

func slug(text string) string {
	var b strings.Builder
	for _, r := range strings.ToLower(text) {
		switch {
		case r >= 'a' && r <= 'z', r >= '0' && r <= '9':
			b.WriteRune(r)
		case !strings.HasSuffix(b.String(), "-"):
			b.WriteByte('-')
		}
	}
	return strings.Trim(b.String(), "-")
}

// phases returns the selected spectra; false when the outcome does not hold
// the selection or it carries nothing.
func (s Selection) phases(o *study.Outcome) ([3]phasor.Spectrum, bool) {
	var none [3]phasor.Spectrum
	if o == nil {
		return none, false
	}
	if s.Element == "" {
		b := o.Bus(s.Bus)
		if b == nil || !b.Live {
			return none, false
		}
		return b.Phase, true
	}
	e := o.Element(s.Element)
	if e == nil || len(e.Ends) == 0 {
		return none, false
	}
	for _, end := range e.Ends {
		if end.Bus == s.Bus {
			return end.Phase, true
		}
	}
	return e.Ends[0].Phase, true
}

// series is what one outcome shows: the worst phase by order, in the unit of
// the axis.
type series struct {
	ok    bool
	value []float64 // by order, 0 and 1 unused
	thd   float64   // per cent
	first float64   // fundamental, V line to line or A
}

// read takes the worst phase at each order: voltages in per cent of the
// phase's own fundamental, currents in A or, with a demand current, in per
// cent of it.
func (s Selection) read(o *study.Outcome, demand float64) series {
	phase, ok := s.phases(o)
	out := series{ok: ok}
	if !ok {
		return out
	}
	out.value = make([]float64, len(phase[0]))
	for _, p := range phase {
		base := cmplx.Abs(p.At(1))
		out.first = math.Max(out.first, base)
		if base > 0 {
			out.thd = math.Max(out.thd, 100*phasor.THD(p))
		}
		switch {
		case s.Element == "" && base == 0:
			continue
		case s.Element == "":
			base = base / 100
		case demand > 0:
			base = demand / 100
		default:
			base = 1
		}
		for h := 2; h < len(p); h++ {
			out.value[h] = math.Max(out.value[h], cmplx.Abs(p[h])/base)
		}
	}
	return out
}

// rows returns the limit rows that belong to the selection, by order, with the
// name of their set and the maximum demand current they refer to.
func (s Selection) rows(o *study.Outcome) (rows map[int]limits.Row, title string, demand float64) {
	if o == nil {
		return nil, "", 0
	}
	for i := range o.Points {
		p := &o.Points[i]
		if p.Bus != s.Bus {
			continue
		}
		quantity := "voltage"
		if s.Element != "" {
			quantity = "current"
			if i >= len(o.Study.Assessments) || o.Study.Assessments[i].Current != s.Element {
				continue
			}
		}
		rows = map[int]limits.Row{}
		for _, r := range p.Rows {
			if r.Quantity == quantity && r.Index == "" {
				rows[r.Order] = r
			}
		}
		if len(rows) > 0 {
			return rows, p.SetTitle, p.ILA
		}
	}
	return nil, "", 0
}

// Spectrum shows a bus's voltage or an element's current by order, before
// beside after, with the limits that apply. before may be nil.
func Spectrum(before, after *study.Outcome, sel Selection) *Figure {
	f := &Figure{Key: "spectrum-" + sel.key(), Title: "Spectrum of the " + sel.Name(), Size: vg.Point{X: 480, Y: 240}}
	rows, set, demand := sel.rows(after)
	if rows == nil {
		rows, set, demand = sel.rows(before)
	}
	b, a := sel.read(before, demand), sel.read(after, demand)
	f.Caption = spectrumCaption(sel, b, a, set, demand)
	f.Draw = func(c draw.Canvas, st *Style) []Hot {
		return drawSpectrum(newPen(c, st), sel, b, a, rows, set, demand)
	}
	return f
}

func spectrumCaption(sel Selection, b, a series, set string, demand float64) string {
	what := "Worst phase at each order, in per cent of the fundamental."
	if sel.Element != "" {
		what = "Worst phase at each order, in ampere."
		if demand > 0 {
			what = fmt.Sprintf("Worst phase at each order, in per cent of the maximum demand current of %s A.", number(demand))
		}
	}
	if b.ok && a.ok {
		what += fmt.Sprintf(" THD %s %% before, %s %% after.", number(b.thd), number(a.thd))
	} else if a.ok {
		what += fmt.Sprintf(" THD %s %%.", number(a.thd))
	}
	if set != "" {
		what += " Limits: " + set + "."
	}
	return what
}

func drawSpectrum(p *pen, sel Selection, b, a series, rows map[int]limits.Row, set string, demand float64) []Hot {
	if !b.ok && !a.ok {
		return p.empty("Nothing to show for the " + sel.Name() + ".\nIt has no supply or does not stand with these measures.")
	}
	unit := "% of fundamental"
	if sel.Element != "" {
		unit = "A"
		if demand > 0 {
			unit = "% of IL"
		}
	}
	carried, top, last := carrying(b, a, rows)
	x := p.open("", unit, "harmonic order")
	thd := thdWords(b, a)
	x.key(b.ok, a.ok, thd)
	x.x0, x.x1 = 1.2, float64(last)+0.8
	x.scaleY(top*1.12, false)
	slot := (x.area.Max.X - x.area.Min.X) / vg.Length(x.x1-x.x0)
	bar := min(slot*0.36, 9)
	for _, h := range carried {
		x.bars(h, bar, b, a, rows)
	}
	x.limits(rows, carried, last, set, b, a)
	x.base(0)
	x.orderLabels(carried)
	for _, h := range carried {
		x.hot(rect(x.x(float64(h))-max(slot, 8)/2, x.area.Min.Y, x.x(float64(h))+max(slot, 8)/2, x.area.Max.Y), "value", strconv.Itoa(h), readout(h, unit, b, a, rows))
	}
	return p.hots
}

func thdWords(b, a series) (out [2]string) {
	if b.ok {
		out[0] = "THD " + number(b.thd) + " %"
	}
	if a.ok {
		out[1] = "THD " + number(a.thd) + " %"
	}
	return out
}

// carrying returns the orders that are worth a bar, the top of the scale and
// the last order shown.
func carrying(b, a series, rows map[int]limits.Row) (orders []int, top float64, last int) {
	size := func(s series, h int) float64 {
		if h < len(s.value) {
			return s.value[h]
		}
		return 0
	}
	n := max(len(b.value), len(a.value))
	for h := 2; h < n; h++ {
		top = math.Max(top, math.Max(size(b, h), size(a, h)))
	}
	for h := 2; h < n; h++ {
		v := math.Max(size(b, h), size(a, h))
		r, limited := rows[h]
		if v > 0.004*top && v > 0 || limited && v > 0.1*r.Limit {
			orders = append(orders, h)
			last = h
			if limited && r.Limit < 3*math.Max(v, 0.25*top) {
				top = math.Max(top, r.Limit)
			}
		}
	}
	return orders, top, max(last, 13)
}

func (x *axes) bars(h int, bar vg.Length, b, a series, rows map[int]limits.Row) {
	at := x.x(float64(h))
	for i, s := range []series{b, a} {
		if !s.ok || h >= len(s.value) || s.value[h] == 0 {
			continue
		}
		lo, hi := at-bar, at
		if i == 1 {
			lo, hi = at, at+bar
		}
		if !b.ok || !a.ok {
			lo, hi = at-bar/2, at+bar/2
		}
		v := s.value[h]
		r := rect(lo+0.4, x.y(0), hi-0.4, x.y(v))
		limit, limited := rows[h]
		over := limited && v > limit.Limit
		body := r
		if over {
			body.Max.Y = x.y(limit.Limit)
		}
		if i == 0 {
			x.box(r, x.st.Line, x.st.Before, nil)
		} else {
			x.fill(body, x.st.After)
		}
		if over {
			x.hatch(rect(r.Min.X, body.Max.Y, r.Max.X, r.Max.Y), x.st.Over)
			if i == 1 || !a.ok {
				x.write(at, r.Max.Y+x.st.Small*0.8, centre, x.st.Small, x.st.Over, fmt.Sprintf("over %.2f×", v/limit.Limit))
			}
		}
	}
}

// limits draws the limit of each order as a step, joined where neighbours are
// equal, and writes the set's name on it.
func (x *axes) limits(rows map[int]limits.Row, carried []int, last int, set string, b, a series) {
	if len(rows) == 0 {
		return
	}
	uniform := true
	for _, h := range carried {
		for _, g := range carried {
			if rows[h].Limit != rows[g].Limit {
				uniform = false
			}
		}
	}
	var path vg.Path
	var steps []vg.Rectangle
	for h := 2; h <= last; h++ {
		r, ok := rows[h]
		if !ok || r.Limit > x.y1 || (!uniform && !hasOrder(carried, h)) {
			continue
		}
		y := x.y(r.Limit)
		steps = append(steps, rect(x.x(float64(h)-0.5), y, x.x(float64(h)+0.5), y))
		path.Move(steps[len(steps)-1].Min)
		path.Line(steps[len(steps)-1].Max)
	}
	if len(steps) == 0 {
		return
	}
	x.strokePath(x.st.Line*1.3, x.st.Limit, nil, path)
	at := x.labelPlace(steps, carried, set, b, a)
	x.write(at.X, at.Y, left, x.st.Small, x.st.Limit, set)
}

// labelPlace finds room for the set's name on one of the limit's steps: above
// it, from the last step to the first, where no bar and no other step is in the
// way; above everything at the right when there is none.
func (x *axes) labelPlace(steps []vg.Rectangle, carried []int, set string, b, a series) vg.Point {
	size := x.st.Small
	w := x.width(size, set)
	for i := len(steps) - 1; i >= 0; i-- {
		for _, from := range []vg.Length{steps[i].Min.X, steps[i].Max.X - w} {
			place := rect(from, steps[i].Min.Y+0.25*size, from+w, steps[i].Min.Y+1.35*size)
			if place.Max.X > x.area.Max.X || place.Min.X < x.area.Min.X || place.Max.Y > x.area.Max.Y {
				continue
			}
			free := true
			for _, s := range steps {
				free = free && !meet(place, s)
			}
			for _, h := range carried {
				for _, s := range []series{b, a} {
					if s.ok && h < len(s.value) {
						at := x.x(float64(h))
						free = free && !meet(place, rect(at-10, x.y(0), at+10, x.y(s.value[h])+size))
					}
				}
			}
			if free {
				return vg.Point{X: from, Y: steps[i].Min.Y + 0.8*size}
			}
		}
	}
	return vg.Point{X: x.area.Max.X - w, Y: x.area.Max.Y - 0.8*size}
}

func meet(a, b vg.Rectangle) bool {
	return a.Min.X < b.Max.X && b.Min.X < a.Max.X && a.Min.Y <= b.Max.Y && b.Min.Y <= a.Max.Y
}

func hasOrder(list []int, h int) bool {
	for _, v := range list {
		if v == h {
			return true
		}
	}
	return false
}

// orderLabels labels the carrying orders, leaving out those that would touch.
func (x *axes) orderLabels(orders []int) {
	edge := vg.Length(-1e9)
	for _, h := range orders {
		words := strconv.Itoa(h)
		w := x.width(x.st.Small, words)
		if at := x.x(float64(h)); at-w/2 > edge {
			x.labelX(float64(h), words)
			edge = at + w/2 + 0.35*x.st.Small
		}
	}
}

func readout(h int, unit string, b, a series, rows map[int]limits.Row) string {
	lines := []string{"Order " + strconv.Itoa(h)}
	unit, _, _ = strings.Cut(unit, " ")
	for i, s := range []series{b, a} {
		if s.ok && h < len(s.value) {
			lines = append(lines, []string{"before", "after"}[i]+"\t"+number(s.value[h])+" "+unit)
		}
	}
	if r, ok := rows[h]; ok {
		lines = append(lines, "limit\t"+number(r.Limit)+" "+unit)
	}
	return strings.Join(lines, "\n")
}
