package widgets

import (
	"math"

	"gonum.org/v1/plot/vg"
)

// A Hot is a place in a picture that answers: to the pointer with a read-out,
// to a tap, to a drag.
type Hot struct {
	Rect vg.Rectangle // in the coordinates of the canvas that was drawn on
	ID   string       // what it stands for, such as an item's name
	Role string       // what kind of place it is: "value", "bus", "item", "measure", "switch", "place"
	Text string       // read-out: lines, each of cells parted by tabs; empty for none
}

// Zero tells whether this is no place at all, as when the ground is tapped.
func (h Hot) Zero() bool { return h == Hot{} }

// same tells whether two places stand for the same thing in two pictures.
func (h Hot) same(o Hot) bool { return h.ID == o.ID && h.Role == o.Role }

func (h Hot) centre() vg.Point {
	return vg.Point{X: (h.Rect.Min.X + h.Rect.Max.X) / 2, Y: (h.Rect.Min.Y + h.Rect.Max.Y) / 2}
}

// hit returns the place at a point: the smallest one that holds it, the later
// one of two equals; else the nearest whose rectangle, grown to at least the
// size of a target, holds it.
func hit(hots []Hot, p vg.Point, target vg.Length) (Hot, bool) {
	best, least := -1, vg.Length(math.Inf(1))
	for i, h := range hots {
		r := h.Rect
		if p.X < r.Min.X || p.X > r.Max.X || p.Y < r.Min.Y || p.Y > r.Max.Y {
			continue
		}
		if area := (r.Max.X - r.Min.X) * (r.Max.Y - r.Min.Y); area <= least {
			best, least = i, area
		}
	}
	if best >= 0 {
		return hots[best], true
	}
	least = vg.Length(math.Inf(1))
	for i, h := range hots {
		r := h.Rect
		growX := max(target-(r.Max.X-r.Min.X), 0) / 2
		growY := max(target-(r.Max.Y-r.Min.Y), 0) / 2
		dx := max(r.Min.X-p.X, p.X-r.Max.X, 0)
		dy := max(r.Min.Y-p.Y, p.Y-r.Max.Y, 0)
		if dx > growX || dy > growY {
			continue
		}
		if d := dx + dy; d < least {
			best, least = i, d
		}
	}
	if best >= 0 {
		return hots[best], true
	}
	return Hot{}, false
}

// A direction is where an arrow key points, y up.
type direction struct{ x, y vg.Length }

// neighbour returns the place one step in a direction: near, and not far off
// the line. Without a place to start from it is the first one, top left.
func neighbour(hots []Hot, from Hot, d direction) (Hot, bool) {
	best, least := -1, vg.Length(math.Inf(1))
	c := from.centre()
	for i, h := range hots {
		if h.same(from) && !from.Zero() {
			continue
		}
		q := h.centre()
		cost := vg.Length(0)
		if from.Zero() {
			cost = q.X - 4*q.Y
		} else {
			along := (q.X-c.X)*d.x + (q.Y-c.Y)*d.y
			across := vg.Length(math.Abs(float64((q.X-c.X)*d.y - (q.Y-c.Y)*d.x)))
			if along <= 0.01 {
				continue
			}
			cost = along + 2*across
		}
		if cost < least {
			best, least = i, cost
		}
	}
	if best < 0 {
		return Hot{}, false
	}
	return hots[best], true
}
