package widgets

import (
	"fyne.io/fyne/v2"
	"gonum.org/v1/plot/vg"
)

// How a picture's drawing lies in its panel: zoom, pan, and the way between the
// two coordinate systems.

// Zoom returns the factor the drawing is shown at.
func (p *Picture) Zoom() float64 {
	p.place()
	return p.zoom
}

// Fit shows the whole drawing again.
func (p *Picture) Fit() {
	p.moved = false
	p.Refresh()
}

// ZoomBy zooms about a point of the panel.
func (p *Picture) ZoomBy(factor float64, at fyne.Position) {
	p.place()
	zoom := min(max(p.zoom*factor, leastZoom), greatestZoom)
	fixed := p.fromPanel(at)
	p.zoom, p.moved = zoom, true
	v := p.panelPoint(at)
	p.offset = vg.Point{X: v.X - fixed.X*vg.Length(zoom), Y: v.Y - fixed.Y*vg.Length(zoom)}
	p.Refresh()
}

// PanBy moves the drawing by window units.
func (p *Picture) PanBy(dx, dy float32) {
	p.place()
	p.moved = true
	p.offset.X += Points(dx)
	p.offset.Y -= Points(dy)
	p.Refresh()
}

// place computes zoom and offset of a drawing that was not moved.
func (p *Picture) place() {
	if p.moved {
		return
	}
	p.zoom, p.offset = 1, vg.Point{}
	if p.Natural.X <= 0 || p.Natural.Y <= 0 {
		return
	}
	w, h := Points(p.Size().Width), Points(p.Size().Height)
	if w <= 0 || h <= 0 {
		return
	}
	p.zoom = min(float64(w/p.Natural.X), float64(h/p.Natural.Y), greatestFit)
	z := vg.Length(p.zoom)
	p.offset = vg.Point{X: (w - p.Natural.X*z) / 2, Y: (h - p.Natural.Y*z) / 2}
}

// panelPoint converts a position in the panel to points, y up.
func (p *Picture) panelPoint(at fyne.Position) vg.Point {
	return vg.Point{X: Points(at.X), Y: Points(p.Size().Height - at.Y)}
}

// fromPanel converts a position in the panel to the drawing's coordinates.
func (p *Picture) fromPanel(at fyne.Position) vg.Point {
	v := p.panelPoint(at)
	z := vg.Length(p.zoom)
	return vg.Point{X: (v.X - p.offset.X) / z, Y: (v.Y - p.offset.Y) / z}
}

// toPanel converts a point of the drawing to a position in the panel.
func (p *Picture) toPanel(v vg.Point) fyne.Position {
	p.place()
	z := vg.Length(p.zoom)
	return fyne.NewPos(Units(v.X*z+p.offset.X), p.Size().Height-Units(v.Y*z+p.offset.Y))
}

// reveal pans a zoomed drawing so that a place is in view.
func (p *Picture) reveal(h Hot) {
	if !p.moved {
		return
	}
	pos, size := p.Place(h)
	panel := p.Size()
	var dx, dy float32
	if pos.X < 0 {
		dx = Step - pos.X
	} else if over := pos.X + size.Width - panel.Width; over > 0 {
		dx = -over - Step
	}
	if pos.Y < 0 {
		dy = Step - pos.Y
	} else if over := pos.Y + size.Height - panel.Height; over > 0 {
		dy = -over - Step
	}
	if dx != 0 || dy != 0 {
		p.PanBy(dx, dy)
	}
}
