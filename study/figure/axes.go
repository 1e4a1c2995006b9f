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
	log0, decades  float64   // of a logarithmic y axis
	yTitle         vg.Length // right end of the title of the y axis
}

// open lays the whole canvas out as one plot.
func (p *pen) open(yTitle, xTitle string) *axes { return p.openIn(p.c.Rectangle, yTitle, xTitle) }

// openIn lays a part of the canvas out as a plot. The title of the y axis
// stands above its labels, that of the x axis left of its own: both read as the
// heading of a column and of a row.
func (p *pen) openIn(r vg.Rectangle, yTitle, xTitle string) *axes {
	s := p.st
	pad := s.Body
	top := r.Max.Y - 0.9*pad
	p.write(r.Min.X+pad, top-0.5*s.Small, left, s.Small, s.Muted, yTitle)
	gutter := max(4.6*s.Small, p.width(s.Small, xTitle)+1.2*s.Small)
	a := &axes{pen: p, yTitle: r.Min.X + pad + p.width(s.Small, yTitle),
		area: rect(r.Min.X+pad+gutter, r.Min.Y+0.7*pad+1.6*s.Small, r.Max.X-pad, top-2.1*s.Small)}
	p.write(a.area.Min.X-0.9*s.Small, a.area.Min.Y-1.2*s.Small, right, s.Small, s.Muted, xTitle)
	return a
}

func (a *axes) x(v float64) vg.Length {
	return a.area.Min.X + vg.Length((v-a.x0)/(a.x1-a.x0))*(a.area.Max.X-a.area.Min.X)
}

func (a *axes) y(v float64) vg.Length {
	part := (v - a.y0) / (a.y1 - a.y0)
	if a.logY {
		part = (math.Log10(math.Max(v, 1e-30)) - a.log0) / a.decades
	}
	return a.area.Min.Y + vg.Length(part)*(a.area.Max.Y-a.area.Min.Y)
}

// scaleY chooses a linear scale from 0 (or -top) to a round value above top.
func (a *axes) scaleY(top float64, symmetric bool) {
	if top <= 0 || math.IsNaN(top) || math.IsInf(top, 0) {
		top = 1
	}
	most := 5 // lines above 0, as far as their labels have room
	if symmetric {
		most = 3
	}
	room := float64(a.area.Max.Y-a.area.Min.Y) / float64(1.7*a.st.Small)
	if symmetric {
		room /= 2
	}
	most = max(1, min(most, int(room)))
	step := 0.0
	a.y1 = math.Inf(1)
	for lines := 1; lines <= most; lines++ {
		s := niceStep(top / float64(lines))
		if y1 := s * math.Ceil(top/s*0.9999); y1 <= a.y1*1.0001 && y1/s <= float64(most)+0.5 {
			step, a.y1 = s, y1
		}
	}
	a.y0 = 0
	if symmetric {
		a.y0 = -a.y1
	}
	for i := math.Round(a.y0 / step); i*step <= a.y1*1.0001; i++ {
		a.ruleY(i*step, tick(i*step, step))
	}
}

// scaleLog chooses a logarithmic scale around lo..hi that begins and ends at 1,
// 2 or 5 times a power of ten.
func (a *axes) scaleLog(lo, hi float64) {
	if !(lo > 0) || !(hi > lo) {
		lo, hi = 0.1, 10
	}
	a.logY = true
	a.y0, a.y1 = roundDown(lo), roundUp(hi)
	a.log0 = math.Log10(a.y0)
	a.decades = math.Log10(a.y1) - a.log0
	steps := []float64{1}
	if a.decades < 2.4 && float64(a.area.Max.Y-a.area.Min.Y) > 6*a.decades*float64(a.st.Small) {
		steps = []float64{1, 2, 5}
	}
	for d := math.Floor(a.log0); d <= math.Ceil(a.log0+a.decades); d++ {
		for _, m := range steps {
			if v := m * math.Pow(10, d); v >= a.y0*0.999 && v <= a.y1*1.001 {
				a.ruleY(v, strconv.FormatFloat(v, 'g', 3, 64))
			}
		}
	}
}

func roundDown(v float64) float64 {
	base := math.Pow(10, math.Floor(math.Log10(v)))
	for _, m := range []float64{5, 2} {
		if m*base <= v*1.0001 {
			return m * base
		}
	}
	return base
}

func roundUp(v float64) float64 {
	base := math.Pow(10, math.Floor(math.Log10(v)))
	for _, m := range []float64{1, 2, 5} {
		if m*base >= v*0.9999 {
			return m * base
		}
	}
	return 10 * base
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
	a.write(a.x(v), a.area.Min.Y-1.2*a.st.Small, centre, a.st.Small, a.st.Ink, words)
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

// key writes before and after in their colours, each behind its mark, at the
// right of the line of the y axis's title: the first of the wordings for which
// there is room. One outcome alone is neither before nor after and has the
// second word of a wording only.
func (a *axes) key(before, after bool, wordings ...[2]string) {
	s := a.st
	y, end := a.area.Max.Y+1.6*s.Small, a.area.Max.X
	var words [2]string
	switch {
	case before && after:
		words = [2]string{"before", "after"}
		for _, w := range wordings {
			if a.keyWidth(w) < end-a.yTitle-1.5*s.Small {
				words = w
				break
			}
		}
	case before || after:
		for _, w := range wordings {
			if w[1] != "" && a.widthBold(s.Small, w[1]) < end-a.yTitle-2.5*s.Small {
				a.writeBold(end, y, right, s.Small, s.After, w[1])
				break
			}
		}
		return
	default:
		return
	}
	a.writeBold(end, y, right, s.Small, s.After, words[1])
	end -= a.widthBold(s.Small, words[1]) + 0.6*s.Small
	a.fill(rect(end-0.9*s.Small, y-0.35*s.Small, end, y+0.35*s.Small), s.After)
	end -= 1.8 * s.Small
	a.write(end, y, right, s.Small, s.Muted, words[0])
	end -= a.width(s.Small, words[0]) + 0.6*s.Small
	a.box(rect(end-0.9*s.Small, y-0.35*s.Small, end, y+0.35*s.Small), s.Line, s.Before, nil)
}

// keyWidth returns the room that words and marks take.
func (a *axes) keyWidth(words [2]string) vg.Length {
	return a.width(a.st.Small, words[0]) + a.widthBold(a.st.Small, words[1]) + 3.9*a.st.Small
}
