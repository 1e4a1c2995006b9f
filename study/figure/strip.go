package figure

import (
	"fmt"
	"image/color"
	"math"
	"sort"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// SetMark is one set of measures on the combination strip.
type SetMark struct {
	ID     string  // what the pointer answers with
	Cost   float64 // in the study's own currency
	Share  float64 // worst share of any limit in any operating state; NaN: nothing to show
	Cause  string  // why it does not pass: "limit", "stress", "resonance", else a word; empty: it passes
	Faded  bool    // another set is no worse on every count
	Named  string  // "least cost", "least stress"; empty for most
	Now    bool    // the set that is on
	Detail string  // read-out
}

// mark shapes on the strip; each cause its own, so that colour is not needed.
var strokes = []struct {
	cause, words string
	shape        func(at vg.Point, r vg.Length) vg.Path
}{
	{"", "meets everything", circle},
	{"limit", "over a limit", func(at vg.Point, r vg.Length) vg.Path { return polygon(at, r*1.15, 3, math.Pi/2) }},
	{"resonance", "over, at a resonance", func(at vg.Point, r vg.Length) vg.Path { return polygon(at, r*1.1, 4, math.Pi/2) }},
	{"stress", "a part overloaded", func(at vg.Point, r vg.Length) vg.Path { return polygon(at, r*1.1, 4, math.Pi/4) }},
}

func polygon(at vg.Point, r vg.Length, n int, from float64) vg.Path {
	var path vg.Path
	for i := range n {
		a := from + 2*math.Pi*float64(i)/float64(n)
		p := vg.Point{X: at.X + r*vg.Length(math.Cos(a)), Y: at.Y + r*vg.Length(math.Sin(a))}
		if i == 0 {
			path.Move(p)
		} else {
			path.Line(p)
		}
	}
	path.Close()
	return path
}

// kindOf returns the place of a mark's cause in strokes; causes without a shape
// of their own count as over a limit.
func kindOf(cause string) int {
	for i, s := range strokes {
		if s.cause == cause {
			return i
		}
	}
	return 1
}

// Strip shows every set of measures as one mark: its cost along, its worst
// share of a limit up, on a logarithmic scale. Sets that meet everything in
// every operating state are solid discs, others hollow, with a shape for the
// reason. progress says what is still to come, empty when all is there.
func Strip(marks []SetMark, progress string) *Figure {
	f := &Figure{Key: "combinations", Title: "Every set of measures", Size: vg.Point{X: 480, Y: 240},
		Caption: "Each mark is one set of measures: cost along, worst share of any limit in any operating state up. Solid discs meet everything; hollow marks do not, their shape says why. Sets that another one beats on every count are faint."}
	f.Draw = func(c draw.Canvas, st *Style) []Hot { return drawStrip(newPen(c, st), marks, progress) }
	return f
}

func drawStrip(p *pen, marks []SetMark, progress string) []Hot {
	lo, hi, most := math.Inf(1), 0.0, 0.0
	for _, m := range marks {
		if math.IsNaN(m.Share) || m.Share <= 0 {
			continue
		}
		lo, hi, most = math.Min(lo, m.Share), math.Max(hi, m.Share), math.Max(most, m.Cost)
	}
	if hi == 0 {
		if progress != "" {
			return p.empty(progress)
		}
		return p.empty("No set of measures to show.\nAdd measures and an assessment point.")
	}
	x := p.open("worst share of a limit, %", "cost")
	x.x0, x.x1 = 0, most*1.04
	if most == 0 {
		x.x1 = 1
	}
	x.x0 = -0.03 * x.x1
	x.scaleLog(100*math.Min(lo*0.9, 0.8), 100*math.Max(hi*1.1, 1.3))
	x.costLabels(most)
	limit := x.y(100)
	p.stroke(p.st.Line, p.st.Ink, nil, vg.Point{X: x.area.Min.X, Y: limit}, vg.Point{X: x.area.Max.X, Y: limit})
	if progress != "" {
		p.write(x.area.Max.X, x.area.Max.Y+1.6*p.st.Small, right, p.st.Small, p.st.Muted, progress)
	} else {
		x.shapes(marks)
	}
	x.plotMarks(marks)
	words := "limit, 100 %"
	p.patch(x.area.Max.X-p.width(p.st.Small, words)-2, limit+0.8*p.st.Small, p.st.Small, p.st.Ink, false, words)
	return p.hots
}

// costLabels writes round costs below the area.
func (x *axes) costLabels(most float64) {
	if most <= 0 {
		x.labelX(0, "0")
		return
	}
	room := float64(x.area.Max.X-x.area.Min.X) / float64(5*x.st.Small)
	step := niceStep(most / math.Max(1, math.Min(5, room)))
	for v := 0.0; v <= most*1.0001; v += step {
		x.labelX(v, thousands(v))
	}
}

// thousands writes a round amount with thin spaces.
func thousands(v float64) string {
	text := fmt.Sprintf("%.0f", v)
	for i := len(text) - 3; i > 0; i -= 3 {
		text = text[:i] + "\u2009" + text[i:]
	}
	return text
}

// shapes explains the shapes that occur, at the right of the title's line, as
// far as there is room.
func (x *axes) shapes(marks []SetMark) {
	var have [4]bool
	for _, m := range marks {
		if !math.IsNaN(m.Share) {
			have[kindOf(m.Cause)] = true
		}
	}
	s := x.st
	y, end := x.area.Max.Y+1.6*s.Small, x.area.Max.X
	for i := len(strokes) - 1; i >= 0; i-- {
		if !have[i] {
			continue
		}
		w := x.width(s.Small, strokes[i].words)
		if end-w-1.6*s.Small < x.yTitle+s.Small {
			return
		}
		x.write(end, y, right, s.Small, s.Muted, strokes[i].words)
		at := vg.Point{X: end - w - 0.8*s.Small, Y: y}
		x.shape(i, at, 0.38*s.Small, i == 0, s.Muted, s.After)
		end -= w + 2.2*s.Small
	}
}

// shape draws one mark: solid for one that passes, else hollow.
func (x *axes) shape(kind int, at vg.Point, r vg.Length, pass bool, hollow, solid color.Color) {
	path := strokes[kind].shape(at, r)
	if pass {
		x.fillPath(solid, path)
		return
	}
	x.fillPath(x.st.Ground, path)
	x.strokePath(x.st.Thin*1.6, hollow, nil, path)
}

// cell is a patch of the figure as large as a mark: of the marks in it only the
// most important is drawn.
type cell struct{ x, y int }

// plotMarks draws the marks, faint ones first, and the named ones last with their
// words.
func (x *axes) plotMarks(marks []SetMark) {
	order := make([]int, 0, len(marks))
	for i, m := range marks {
		if !math.IsNaN(m.Share) && m.Share > 0 {
			order = append(order, i)
		}
	}
	weight := func(m SetMark) int {
		w := 0
		if !m.Faded {
			w++
		}
		if m.Cause == "" {
			w += 2
		}
		if m.Named != "" {
			w += 4
		}
		if m.Now {
			w += 8
		}
		return w
	}
	sort.SliceStable(order, func(a, b int) bool { return weight(marks[order[a]]) > weight(marks[order[b]]) })
	r := 0.42 * x.st.Small
	taken := map[cell]bool{}
	var kept []int
	for _, i := range order {
		at := x.at(marks[i])
		c := cell{int(math.Floor(float64(at.X / (0.9 * r)))), int(math.Floor(float64(at.Y / (0.9 * r))))}
		if taken[c] && marks[i].Named == "" && !marks[i].Now {
			continue
		}
		taken[c] = true
		kept = append(kept, i)
	}
	for k := len(kept) - 1; k >= 0; k-- {
		m := marks[kept[k]]
		at := x.at(m)
		hollow := x.st.Muted
		solid := x.st.After
		if m.Faded && m.Named == "" && !m.Now {
			hollow, solid = x.st.Before, x.st.Before
		}
		size := r
		if m.Faded && m.Named == "" && !m.Now {
			size = 0.7 * r
		}
		x.shape(kindOf(m.Cause), at, size, m.Cause == "", hollow, solid)
		if m.Now {
			x.strokePath(x.st.Line, x.st.Ink, nil, circle(at, 2.1*r))
		}
		x.hot(rect(at.X-1.3*r, at.Y-1.3*r, at.X+1.3*r, at.Y+1.3*r), "set", m.ID, m.Detail)
	}
	var words []vg.Rectangle // places that words keep clear of: marks, and words written before
	for _, i := range kept {
		if at := x.at(marks[i]); !marks[i].Faded || marks[i].Cause == "" {
			words = append(words, rect(at.X-r, at.Y-r, at.X+r, at.Y+r))
		}
	}
	for _, i := range kept {
		m := marks[i]
		text := m.Named
		if m.Now {
			if text != "" {
				text += ", "
			}
			text += "on now"
		}
		if text != "" {
			x.nameMark(x.at(m), 2.4*r, text, &words)
		}
	}
}

func (x *axes) at(m SetMark) vg.Point { return vg.Point{X: x.x(m.Cost), Y: x.y(100 * m.Share)} }

// nameMark writes words beside a mark where none are yet.
func (x *axes) nameMark(at vg.Point, off vg.Length, text string, taken *[]vg.Rectangle) {
	size := x.st.Small
	w := x.widthBold(size, text)
	for _, try := range []vg.Point{
		{X: at.X + off, Y: at.Y}, {X: at.X - off - w, Y: at.Y},
		{X: at.X - w/2, Y: at.Y + off + 0.4*size}, {X: at.X - w/2, Y: at.Y - off - 0.4*size},
		{X: at.X + off, Y: at.Y + 1.2*size}, {X: at.X + off, Y: at.Y - 1.2*size},
		{X: at.X - off - w, Y: at.Y + 1.2*size}, {X: at.X - off - w, Y: at.Y - 1.2*size},
		{X: at.X - w/2, Y: at.Y + off + 2*size}, {X: at.X - w/2, Y: at.Y - off - 2*size},
	} {
		place := rect(try.X, try.Y-0.55*size, try.X+w, try.Y+0.55*size)
		if place.Min.X < x.area.Min.X || place.Max.X > x.area.Max.X || place.Min.Y < x.area.Min.Y || place.Max.Y > x.area.Max.Y {
			continue
		}
		free := true
		for _, t := range *taken {
			free = free && !meet(place, t)
		}
		if free {
			*taken = append(*taken, place)
			x.patch(try.X, try.Y, size, x.st.Ink, true, text)
			return
		}
	}
}
