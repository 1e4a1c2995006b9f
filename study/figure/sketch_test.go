package figure

import (
	"fmt"
	"image/color"
	"math"
	"slices"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/recorder"
)

// A sketch is what a figure leaves on its canvas: texts, and the upright and
// level lines that nothing drawn later covers.
type sketch struct {
	hots  []Hot
	texts []words
	lines []vg.Rectangle
	inked []inked
}

// inked is a path with what it was drawn with; a fill has no width.
type inked struct {
	ink   color.Color
	width vg.Length
	path  vg.Path
}

// sketchOf draws on a recorder and follows what covers what.
func sketchOf(f *Figure, w, h vg.Length) sketch { return sketchIn(Light(), f, w, h) }

func sketchIn(st *Style, f *Figure, w, h vg.Length) sketch {
	var r recorder.Canvas
	var s sketch
	s.hots = f.Draw(draw.NewCanvas(&r, w, h), st)
	var ink color.Color
	var width vg.Length
	for _, a := range r.Actions {
		switch a := a.(type) {
		case *recorder.SetColor:
			ink = a.Color
		case *recorder.SetLineWidth:
			width = a.Width
		case *recorder.Fill:
			s.inked = append(s.inked, inked{ink, 0, a.Path})
			if box, ok := boxOf(a.Path); ok && ink == color.Color(st.Ground) {
				s.cover(box)
			}
		case *recorder.Stroke:
			s.inked = append(s.inked, inked{ink, width, a.Path})
			s.stroke(a.Path)
		case *recorder.FillString:
			ts := st.text(a.Size, st.Ink, a.Font.Weight == xfont.WeightBold, false)
			box := rect(a.Point.X, a.Point.Y-0.1*a.Size, a.Point.X+ts.Width(a.String), a.Point.Y+0.62*a.Size)
			if n := len(s.texts); n > 0 && s.texts[n-1].box.Max.X == box.Min.X && s.texts[n-1].box.Min.Y == box.Min.Y { // the rest of a text in pieces
				s.texts[n-1].text += a.String
				s.texts[n-1].box.Max.X = box.Max.X
				continue
			}
			s.texts = append(s.texts, words{a.String, box})
		}
	}
	return s
}

func boxOf(p vg.Path) (vg.Rectangle, bool) {
	if len(p) < 4 || slices.ContainsFunc(p, func(c vg.PathComp) bool { return c.Type == vg.ArcComp }) {
		return vg.Rectangle{}, false
	}
	return rect(p[0].Pos.X, p[0].Pos.Y, p[2].Pos.X, p[2].Pos.Y), true
}

// cover takes away the pieces of lines inside a box.
func (s *sketch) cover(box vg.Rectangle) {
	var left []vg.Rectangle
	for _, l := range s.lines {
		if !meet(l, box) {
			left = append(left, l)
			continue
		}
		if l.Min.Y == l.Max.Y {
			left = append(left, rect(l.Min.X, l.Min.Y, max(l.Min.X, box.Min.X), l.Max.Y), rect(min(l.Max.X, box.Max.X), l.Min.Y, l.Max.X, l.Max.Y))
		} else {
			left = append(left, rect(l.Min.X, l.Min.Y, l.Max.X, max(l.Min.Y, box.Min.Y)), rect(l.Min.X, min(l.Max.Y, box.Max.Y), l.Max.X, l.Max.Y))
		}
	}
	s.lines = slices.DeleteFunc(left, func(l vg.Rectangle) bool { return l.Min == l.Max })
}

func (s *sketch) stroke(p vg.Path) {
	var at vg.Point
	for _, c := range p {
		if c.Type == vg.LineComp && (math.Abs(float64(c.Pos.X-at.X)) < 1e-6 || math.Abs(float64(c.Pos.Y-at.Y)) < 1e-6) {
			s.lines = append(s.lines, rect(at.X, at.Y, c.Pos.X, c.Pos.Y))
		}
		at = c.Pos
	}
}

// crossed lists texts that a line runs through.
func (s *sketch) crossed() (list []string) {
	for _, t := range s.texts {
		inner := rect(t.box.Min.X+0.3, t.box.Min.Y+0.3, t.box.Max.X-0.3, t.box.Max.Y-0.3)
		for _, l := range s.lines {
			if meet(inner, l) || l.Min.X >= inner.Min.X && l.Max.X <= inner.Max.X && l.Min.Y < inner.Max.Y && l.Max.Y > inner.Min.Y {
				list = append(list, fmt.Sprintf("%q by %v", t.text, l))
				break
			}
		}
	}
	return list
}

// piled lists texts that lie over each other.
func (s *sketch) piled() (list []string) {
	for i, a := range s.texts {
		for _, b := range s.texts[:i] {
			if meet(a.box, b.box) {
				list = append(list, fmt.Sprintf("%q over %q", a.text, b.text))
			}
		}
	}
	return list
}
