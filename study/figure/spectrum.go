package figure

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
	"quietbus/study/limits"
)

// Spectrum shows a bus's voltage or an element's current by order, before
// beside after, with the limits that apply. before may be nil.
func Spectrum(before, after *study.Outcome, sel Selection) *Figure {
	f := &Figure{Key: "spectrum-" + sel.key(), Title: "Spectrum of the " + sel.Name(), Size: vg.Point{X: 480, Y: 240}}
	rows, set, demand := sel.rows(after)
	if rows == nil {
		rows, set, demand = sel.rows(before)
	}
	b, a := sel.read(before, demand), sel.read(after, demand)
	f.Caption = spectrumCaption(sel, b, a, set, demand) + summed(after)
	f.Draw = func(c draw.Canvas, st *Style) []Hot {
		return drawSpectrum(newPen(c, st), sel, b, a, rows, set, demand)
	}
	return f
}

func spectrumCaption(sel Selection, b, a series, set string, demand float64) string {
	what := "Worst phase at each order, "
	if sel.phase() >= 0 {
		what = "Phase " + sel.Phase + ", "
	}
	switch {
	case sel.Element == "":
		what += "in per cent of the fundamental."
	case demand > 0:
		what += fmt.Sprintf("in per cent of the maximum demand current of %s A.", number(demand))
	default:
		what += "in ampere."
	}
	if b.ok && a.ok {
		what += fmt.Sprintf(" THD %s %% before, %s %% after.", number(b.thd), number(a.thd))
		if demand > 0 {
			what += fmt.Sprintf(" TDD %s %% before, %s %% after.", number(b.tdd), number(a.tdd))
		}
	} else if a.ok {
		what += fmt.Sprintf(" THD %s %%.", number(a.thd))
		if demand > 0 {
			what += fmt.Sprintf(" TDD %s %%.", number(a.tdd))
		}
	}
	if set != "" {
		what += " Limits: " + set + "."
	}
	return what
}

// spectrum is one figure of this kind while it is drawn.
type spectrum struct {
	*axes
	b, a    series
	rows    map[int]limits.Row
	carried []int
	slot    vg.Length      // from order to order
	bar     vg.Length      // width of one
	steps   []vg.Rectangle // of the limit's line
	taken   []vg.Rectangle // where words stand
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
	x := &spectrum{axes: p.open(unit, "order"), b: b, a: a, rows: rows, carried: carried}
	x.key(b.ok, a.ok, distortionWords(b, a, demand)...)
	x.x0, x.x1 = 1.2, float64(last)+0.8
	x.scaleY(top*1.14, false)
	x.slot = (x.area.Max.X - x.area.Min.X) / vg.Length(x.x1-x.x0)
	x.bar = min(0.42*x.slot*vg.Length(leastGap(carried)), 1.4*p.st.Head)
	for _, h := range carried {
		x.bars(h)
	}
	x.limits(last)
	x.base(0)
	x.orderLabels(carried)
	x.overs(1)
	x.name(set)
	x.overs(0)
	if top == 0 {
		x.write((x.area.Min.X+x.area.Max.X)/2, (x.area.Min.Y+x.area.Max.Y)/2, centre, p.st.Body, p.st.Muted, "No distortion: nothing above order 1.")
	}
	for _, h := range carried {
		at, half := x.x(float64(h)), max(x.bar, x.slot/2)
		x.hot(rect(max(at-half, x.area.Min.X), x.area.Min.Y, min(at+half, x.area.Max.X), x.area.Max.Y), "value", strconv.Itoa(h), readout(h, unit, b, a, rows))
	}
	return p.hots
}

// distortionWords states THD (TDD where a demand current is known) before and
// after, in full and in short.
func distortionWords(b, a series, demand float64) [][2]string {
	name, was, now := "THD", number(b.thd), number(a.thd)
	if demand > 0 {
		name, was, now = "TDD", number(b.tdd), number(a.tdd)
	}
	if !a.ok {
		now = was
	}
	if !b.ok || !a.ok {
		return [][2]string{{"", name + " " + now + " %"}}
	}
	return [][2]string{
		{"before, " + name + " " + was + " %", "after, " + name + " " + now + " %"},
		{name + " before " + was + " %", "after " + now + " %"},
		{name + " before " + was, "after " + now + " %"},
	}
}

// carrying returns the orders that are worth a bar, the top of the scale and
// the last order shown.
func carrying(b, a series, rows map[int]limits.Row) (orders []int, top float64, last int) {
	n := max(len(b.value), len(a.value))
	for h := 2; h < n; h++ {
		top = math.Max(top, math.Max(b.at(h), a.at(h)))
	}
	least := 0.004 * top
	for h := 2; h < n; h++ {
		v := math.Max(b.at(h), a.at(h))
		r, limited := rows[h]
		if v > 0 && (v > least || limited && v > 0.1*r.Limit) {
			orders = append(orders, h)
			last = h
			if limited && r.Limit < 3*math.Max(v, 0.25*top) {
				top = math.Max(top, r.Limit)
			}
		}
	}
	return orders, top, max(last, 13)
}

// leastGap returns the smallest distance between two neighbours, at most 2.
func leastGap(orders []int) int {
	for i := 1; i < len(orders); i++ {
		if orders[i]-orders[i-1] == 1 {
			return 1
		}
	}
	return 2
}

// place returns the bar of an order in one of the two outcomes.
func (x *spectrum) place(h, which int) (r vg.Rectangle, v float64) {
	s := [2]series{x.b, x.a}[which]
	v = s.at(h)
	at := x.x(float64(h))
	lo, hi := at-x.bar, at
	switch {
	case !x.b.ok || !x.a.ok:
		lo, hi = at-x.bar/2, at+x.bar/2
	case which == 1:
		lo, hi = at, at+x.bar
	}
	air := min(0.4, 0.1*x.bar)
	return rect(lo+air, x.y(0), hi-air, x.y(v)), v
}

func (x *spectrum) bars(h int) {
	limit, limited := x.rows[h]
	for which, s := range []series{x.b, x.a} {
		r, v := x.place(h, which)
		if !s.ok || v == 0 {
			continue
		}
		over := limited && v > limit.Limit
		if which == 0 {
			x.box(r, x.st.Line, x.st.Before, nil)
		} else {
			body := r
			if over {
				body.Max.Y = x.y(limit.Limit)
			}
			x.fill(body, x.st.After)
		}
		if over {
			x.hatch(rect(r.Min.X, x.y(limit.Limit), r.Max.X, r.Max.Y), x.st.Over)
		}
	}
}

// overs says at each bar of one outcome that is over its limit how much, the
// worst first, as far as words find room beside the bars and each other.
func (x *spectrum) overs(which int) {
	type over struct {
		r     vg.Rectangle
		times float64
	}
	var list []over
	for _, h := range x.carried {
		limit, limited := x.rows[h]
		if r, v := x.place(h, which); limited && v > limit.Limit {
			times := math.Inf(1)
			if limit.Limit > 0 {
				times = v / limit.Limit
			}
			list = append(list, over{r, times})
		}
	}
	slices.SortStableFunc(list, func(a, b over) int { return cmp.Compare(b.times, a.times) })
	ink := x.st.Over
	if which == 0 {
		ink = x.st.Muted
	}
	size := x.st.Small
	for _, o := range list {
		for _, words := range []string{"over " + times(o.times), times(o.times)} {
			w := x.width(size, words)
			middle := (o.r.Min.X + o.r.Max.X) / 2
			found := false
			for _, from := range []vg.Length{middle - w/2, o.r.Min.X - w - 0.3*size, o.r.Max.X + 0.3*size} {
				y := o.r.Max.Y + 0.85*size
				if from != middle-w/2 { // beside the bar's top
					y = o.r.Max.Y - 0.5*size
				}
				place := rect(from, y-0.5*size, from+w, y+0.5*size)
				if x.free(place) {
					x.taken = append(x.taken, rect(place.Min.X-0.4*size, place.Min.Y, place.Max.X+0.4*size, place.Max.Y))
					x.patch(from, y, size, ink, false, words)
					found = true
					break
				}
			}
			if found {
				break
			}
		}
	}
}

// times words a multiple of a limit; a limit of zero has none.
func times(v float64) string {
	if math.IsInf(v, 0) {
		return "a limit of 0"
	}
	return number(v) + "×"
}

// free reports whether words may stand at a place: inside the area, on no other
// words, on no bar and on no step of the limit.
func (x *spectrum) free(place vg.Rectangle) bool {
	if place.Min.X < x.area.Min.X-0.1 || place.Max.X > x.area.Max.X+0.1 || place.Max.Y > x.area.Max.Y+0.3*x.st.Small {
		return false
	}
	for _, list := range [][]vg.Rectangle{x.taken, x.steps} {
		for _, t := range list {
			if meet(place, t) {
				return false
			}
		}
	}
	for _, h := range x.carried {
		for which, s := range []series{x.b, x.a} {
			if r, _ := x.place(h, which); s.ok && meet(place, r) {
				return false
			}
		}
	}
	return true
}

// limits draws the limit of each order as a step, over all orders where they
// are equal.
func (x *spectrum) limits(last int) {
	uniform := true
	for _, h := range x.carried {
		uniform = uniform && x.rows[h].Limit == x.rows[x.carried[0]].Limit
	}
	half := max(x.slot/2, x.bar+1)
	for h := 2; h <= last; h++ {
		r, ok := x.rows[h]
		if !ok || r.Limit > x.y1 {
			continue
		}
		if uniform && len(x.carried) > 0 && r.Limit != x.rows[x.carried[0]].Limit || !uniform && !slices.Contains(x.carried, h) {
			continue
		}
		y, at := x.y(r.Limit), x.x(float64(h))
		step := rect(max(at-half, x.area.Min.X), y, min(at+half, x.area.Max.X), y)
		if n := len(x.steps); n > 0 && x.steps[n-1].Min.Y == y && step.Min.X <= x.steps[n-1].Max.X+0.01 {
			x.steps[n-1].Max.X = step.Max.X
		} else {
			x.steps = append(x.steps, step)
		}
	}
	var path vg.Path
	for _, s := range x.steps {
		path.Move(s.Min)
		path.Line(s.Max)
	}
	if len(path) > 0 {
		x.strokePath(x.st.Line*1.3, x.st.Limit, nil, path)
	}
}

// name writes the name of the limits on one of their steps: above it, from the
// last step to the first, where nothing is in the way; else at the top right,
// behind a piece of the line.
func (x *spectrum) name(set string) {
	size := x.st.Small
	switch {
	case set == "" || len(x.carried) == 0:
		return
	case len(x.steps) == 0:
		set += ": limits above this scale"
	}
	set = x.fit(size, 0.8*(x.area.Max.X-x.area.Min.X), set)
	w := x.width(size, set)
	for i := len(x.steps) - 1; i >= 0; i-- {
		s := x.steps[i]
		for _, from := range []vg.Length{s.Max.X - w, s.Min.X} {
			if x.free(rect(from, s.Min.Y+0.1*size, from+w, s.Min.Y+1.4*size)) {
				x.taken = append(x.taken, rect(from-0.4*size, s.Min.Y, from+w+0.4*size, s.Min.Y+1.4*size))
				x.patch(from, s.Min.Y+0.9*size, size, x.st.Limit, false, set)
				return
			}
		}
	}
	mark := 2.4 * size // a piece of the line before the name
	if len(x.steps) == 0 {
		mark = 0
	}
	from, y, ok := x.clearing(w+mark, size)
	for part := vg.Length(0.8); !ok && part > 0.3; part -= 0.2 {
		short := x.fit(size, part*w, set)
		if from, y, ok = x.clearing(x.width(size, short)+mark, size); ok {
			set, w = short, x.width(size, short)
		}
	}
	if !ok {
		return // the caption says it
	}
	at := vg.Point{X: from + mark, Y: y}
	x.taken = append(x.taken, rect(from-0.4*size, y-0.6*size, from+mark+w, y+0.6*size))
	x.patch(at.X, at.Y, size, x.st.Limit, false, set)
	if mark > 0 {
		x.stroke(x.st.Line*1.3, x.st.Limit, nil, vg.Point{X: at.X - 2.2*size, Y: at.Y}, vg.Point{X: at.X - 0.6*size, Y: at.Y})
	}
}

// clearing finds room for words of a width in the area, from the top right.
func (x *spectrum) clearing(w, size vg.Length) (from, y vg.Length, ok bool) {
	for y = x.area.Max.Y - 0.8*size; y > x.area.Min.Y+size; y -= 0.7 * size {
		for from = x.area.Max.X - w; from >= x.area.Min.X; from -= size {
			if x.free(rect(from, y-0.6*size, from+w, y+0.6*size)) {
				return from, y, true
			}
		}
	}
	return 0, 0, false
}

func meet(a, b vg.Rectangle) bool {
	return a.Min.X < b.Max.X && b.Min.X < a.Max.X && a.Min.Y <= b.Max.Y && b.Min.Y <= a.Max.Y
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
