package figure

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
)

// Response shows what a low-pass measure that is on lets through: outlet over
// bus voltage, and phase lag, by order.
func Response(after *study.Outcome, measure string) *Figure {
	f := &Figure{Key: "response-" + slug(measure), Title: "Response of " + measure, Size: vg.Point{X: 480, Y: 260}}
	var list []study.Gain
	if after != nil {
		for i := range after.Measures {
			if m := &after.Measures[i]; m.Name == measure {
				list = m.Response
			}
		}
	}
	f.Caption = "Voltage at the outlet over voltage at the bus, with its load on, and how far it lags, by order."
	if i := slices.IndexFunc(list, func(g study.Gain) bool { return g.Order == 1 }); i >= 0 {
		f.Caption += fmt.Sprintf(" At order 1: %s %%, %s degrees.", number(100*list[i].Ratio), number(list[i].LagDeg))
	}
	f.Draw = func(c draw.Canvas, st *Style) []Hot {
		p := newPen(c, st)
		if len(list) == 0 {
			return p.empty("No response to show.\nSwitch a low-pass measure on.")
		}
		return drawResponse(p, list)
	}
	return f
}

func drawResponse(p *pen, list []study.Gain) []Hot {
	r := p.c.Rectangle
	middle := r.Min.Y + 0.46*(r.Max.Y-r.Min.Y)
	gain := p.openIn(rect(r.Min.X, middle, r.Max.X, r.Max.Y), "outlet over bus, %", "order")
	lag := p.openIn(rect(r.Min.X, r.Min.Y, r.Max.X, middle), "phase lag, degrees", "order")
	lag.area.Min.X = max(gain.area.Min.X, lag.area.Min.X)
	gain.area.Min.X = lag.area.Min.X
	top, low, high := 0.0, 0.0, 0.0
	for _, g := range list {
		top = math.Max(top, 100*g.Ratio)
		low, high = math.Min(low, g.LagDeg), math.Max(high, g.LagDeg)
	}
	last := float64(list[len(list)-1].Order)
	orders := marksOf(list)
	for i, a := range []*axes{gain, lag} {
		a.x0, a.x1 = 0, last+0.5
		if i == 0 {
			a.scaleY(top, false)
		} else {
			a.scaleLag(low, high)
		}
		a.base(a.y0)
		a.orderLabels(orders)
		line, dots := make(vg.Path, 0, len(list)), make(vg.Path, 0, 4*len(orders))
		for k, g := range list {
			v := g.LagDeg
			if i == 0 {
				v = 100 * g.Ratio
			}
			q := vg.Point{X: a.x(float64(g.Order)), Y: a.y(v)}
			if k == 0 {
				line.Move(q)
			} else {
				line.Line(q)
			}
			if slices.Contains(orders, g.Order) {
				dots = append(dots, circle(q, 0.25*p.st.Small)...)
			}
		}
		a.strokePath(p.st.Bold, p.st.After, nil, line)
		a.fillPath(p.st.After, dots)
	}
	half := (gain.x(1) - gain.x(0)) / 2
	for _, g := range list {
		at := gain.x(float64(g.Order))
		p.hot(rect(max(at-half, gain.area.Min.X), lag.area.Min.Y, min(at+half, gain.area.Max.X), gain.area.Max.Y), "value", strconv.Itoa(g.Order),
			fmt.Sprintf("Order %d\noutlet\t%s %%\nlag\t%s°", g.Order, number(100*g.Ratio), number(g.LagDeg)))
	}
	return p.hots
}

// marksOf returns the orders that are labelled: 1 and those that converters
// make.
func marksOf(list []study.Gain) (orders []int) {
	for _, g := range list {
		if h := g.Order; h == 1 || h == 3 || h > 4 && (h%6 == 1 || h%6 == 5) {
			orders = append(orders, h)
		}
	}
	return orders
}

// scaleLag chooses a scale in steps that divide a right angle.
func (a *axes) scaleLag(low, high float64) {
	step := 90.0
	if high-low <= 90 {
		step = 45
	}
	a.y0 = step * math.Floor(low/step)
	a.y1 = math.Max(step*math.Ceil(high/step), a.y0+step)
	for i := math.Round(a.y0 / step); i*step <= a.y1*1.0001; i++ {
		a.ruleY(i*step, tick(i*step, step))
	}
}
