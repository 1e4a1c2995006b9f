package figure

import (
	"math"
	"strconv"

	"gonum.org/v1/plot/vg"
)

// axes is the plot area of a figure with a horizontal and a vertical scale.
type axes struct {
	*pen
	area           vg.Rectangle
	x0, x1, y0, y1 float64
	logY           bool
	yTitle         vg.Length // right end of the title of the y axis
}

// open lays the area out under a heading and returns it; room at the left is
// for the tick labels, at the bottom for those of the x axis and its title.
func (p *pen) open(heading, yTitle, xTitle string) *axes {
	r, s := p.c.Rectangle, p.st
	pad := s.Body
	top := r.Max.Y - pad
	if heading != "" {
		p.writeBold(r.Min.X+pad, top-s.Head*0.5, left, s.Head, s.Ink, p.fit(s.Head, r.Max.X-r.Min.X-2*pad, heading))
		top -= 1.6 * s.Head
	}
	p.write(r.Min.X+pad, top-s.Small*0.5, left, s.Small, s.Muted, yTitle)
	top -= 1.6 * s.Small
	bottom := r.Min.Y + pad*0.6
	p.write(r.Max.X-pad, bottom+s.Small*0.5, right, s.Small, s.Muted, xTitle)
	bottom += 1.5*s.Small + 1.7*s.Small
	return &axes{pen: p, yTitle: r.Min.X + pad + p.width(s.Small, yTitle), area: rect(r.Min.X+pad+4.6*s.Small, bottom, r.Max.X-pad, top)}
}

func (a *axes) x(v float64) vg.Length {
	return a.area.Min.X + vg.Length((v-a.x0)/(a.x1-a.x0))*(a.area.Max.X-a.area.Min.X)
}

func (a *axes) y(v float64) vg.Length {
	lo, hi := a.y0, a.y1
	if a.logY {
		v, lo, hi = math.Log10(math.Max(v, 1e-30)), math.Log10(lo), math.Log10(hi)
	}
	return a.area.Min.Y + vg.Length((v-lo)/(hi-lo))*(a.area.Max.Y-a.area.Min.Y)
}

// scaleY chooses a linear scale from 0 (or -top) to a round value above top.
func (a *axes) scaleY(top float64, symmetric bool) {
	if top <= 0 || math.IsNaN(top) {
		top = 1
	}
	step := niceStep(top / 4)
	a.y1 = step * math.Ceil(top/step*1.0001)
	a.y0 = 0
	if symmetric {
		a.y0 = -a.y1
	}
	for i := math.Round(a.y0 / step); i*step <= a.y1*1.0001; i++ {
		a.ruleY(i*step, tick(i*step, step))
	}
}

// scaleLog chooses whole decades around lo..hi.
func (a *axes) scaleLog(lo, hi float64) {
	a.logY = true
	d0, d1 := math.Floor(math.Log10(lo)), math.Ceil(math.Log10(hi))
	if d1 <= d0 {
		d1 = d0 + 1
	}
	a.y0, a.y1 = math.Pow(10, d0), math.Pow(10, d1)
	for d := d0; d <= d1; d++ {
		v := math.Pow(10, d)
		a.ruleY(v, strconv.FormatFloat(v, 'g', -1, 64))
	}
}

func (a *axes) ruleY(v float64, label string) {
	y := a.y(v)
	a.stroke(a.st.Thin, a.st.Grid, nil, vg.Point{X: a.area.Min.X, Y: y}, vg.Point{X: a.area.Max.X, Y: y})
	a.write(a.area.Min.X-0.6*a.st.Small, y, right, a.st.Small, a.st.Muted, label)
}

// base draws the x axis itself.
func (a *axes) base(v float64) {
	y := a.y(v)
	a.stroke(a.st.Line, a.st.Ink, nil, vg.Point{X: a.area.Min.X, Y: y}, vg.Point{X: a.area.Max.X, Y: y})
}

// labelX writes a tick label below the area.
func (a *axes) labelX(v float64, words string) {
	a.write(a.x(v), a.area.Min.Y-1.1*a.st.Small, centre, a.st.Small, a.st.Ink, words)
}

func niceStep(raw float64) float64 {
	base := math.Pow(10, math.Floor(math.Log10(raw)))
	for _, m := range []float64{1, 2, 2.5, 5} {
		if m*base >= raw*0.999 {
			return m * base
		}
	}
	return 10 * base
}

func tick(v, step float64) string {
	digits := max(0, -int(math.Floor(math.Log10(step)+1e-9)))
	if s := step * math.Pow(10, float64(digits)); math.Abs(s-math.Round(s)) > 1e-6 {
		digits++
	}
	if math.Abs(v) < step*1e-6 {
		v = 0
	}
	return strconv.FormatFloat(v, 'f', digits, 64)
}

// key writes the words for before and after in their colours at the right of
// the line of the y axis's title; detail follows each word where there is room
// for it. One outcome alone is neither before nor after and has its detail only.
func (a *axes) key(before, after bool, detail [2]string) {
	words := [2]string{"before", "after"}
	switch {
	case before && after:
		if long := [2]string{join("before", detail[0]), join("after", detail[1])}; a.keyWidth(long, true, true) < a.area.Max.X-a.yTitle-a.st.Small {
			words = long
		}
	case before || after:
		words = detail
	}
	s := a.st
	y := a.area.Max.Y + 1.1*s.Small
	x := a.area.Max.X
	if after && words[1] != "" {
		a.writeBold(x, y, right, s.Small, s.After, words[1])
		x -= a.keyWidth(words, false, true) - 1.6*s.Small
		a.fill(rect(x-1.5*s.Small, y-0.35*s.Small, x-0.6*s.Small, y+0.35*s.Small), s.After)
		x -= 2.4 * s.Small
	}
	if before && words[0] != "" {
		a.write(x, y, right, s.Small, s.Muted, words[0])
		x -= a.keyWidth(words, true, false) - 1.6*s.Small
		a.box(rect(x-1.5*s.Small, y-0.35*s.Small, x-0.6*s.Small, y+0.35*s.Small), s.Line, s.Before, nil)
	}
}

func join(word, detail string) string {
	if detail == "" {
		return word
	}
	return word + ", " + detail
}

// keyWidth returns the room that words and marks take.
func (a *axes) keyWidth(words [2]string, before, after bool) vg.Length {
	s := a.st
	w := vg.Length(0)
	if before {
		w += a.width(s.Small, words[0]) + 1.6*s.Small
	}
	if after {
		w += s.text(s.Small, s.After, true, false).Width(words[1]) + 1.6*s.Small
	}
	if before && after {
		w += 0.9 * s.Small
	}
	return w
}
