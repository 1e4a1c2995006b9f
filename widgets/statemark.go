package widgets

import (
	"image/color"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// A State is the outcome of an assessment.
type State int

// What an assessment can say.
const (
	NotAssessed State = iota
	Meets
	Fails
)

// Word is the state in one word, shown beside its mark.
func (s State) Word() string {
	switch s {
	case Meets:
		return "meets"
	case Fails:
		return "over"
	}
	return "not assessed"
}

// DrawState draws a state's mark into a square: a filled disc with a tick, a
// hatched square, a hollow disc. It is told by shape, not by colour.
func DrawState(c draw.Canvas, s State, meets, over, muted, ground color.Color) {
	mid := c.Center()
	r := min(c.Max.X-c.Min.X, c.Max.Y-c.Min.Y) / 2
	circle := func(r vg.Length) vg.Path {
		var p vg.Path
		p.Move(vg.Point{X: mid.X + r, Y: mid.Y})
		p.Arc(mid, r, 0, 2*math.Pi)
		p.Close()
		return p
	}
	at := func(x, y vg.Length) vg.Point { return vg.Point{X: mid.X + x*r, Y: mid.Y + y*r} }
	c.SetLineDash(nil, 0)
	switch s {
	case Meets:
		c.SetColor(meets)
		c.Fill(circle(r * 0.94))
		c.SetColor(ground)
		c.SetLineWidth(r * 0.2)
		var p vg.Path
		p.Move(at(-0.42, -0.02))
		p.Line(at(-0.1, -0.36))
		p.Line(at(0.44, 0.36))
		c.Stroke(p)
	case Fails:
		c.SetColor(over)
		c.SetLineWidth(r * 0.16)
		const e = 0.8
		var p vg.Path
		p.Move(at(-e, -e))
		p.Line(at(e, -e))
		p.Line(at(e, e))
		p.Line(at(-e, e))
		p.Close()
		c.Stroke(p)
		c.SetLineWidth(r * 0.14)
		for _, k := range []vg.Length{-0.8, 0, 0.8} { // hatching along y = x + k
			lo, hi := max(-e, -e-k), min(e, e-k)
			var h vg.Path
			h.Move(at(lo, lo+k))
			h.Line(at(hi, hi+k))
			c.Stroke(h)
		}
	default:
		c.SetColor(muted)
		c.SetLineWidth(r * 0.16)
		c.Stroke(circle(r * 0.84))
	}
}
