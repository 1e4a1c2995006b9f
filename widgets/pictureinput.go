package widgets

import (
	"math"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"
	"gonum.org/v1/plot/vg"
)

// What a picture does with pointer and keyboard.

// Tapped implements fyne.Tappable.
func (p *Picture) Tapped(e *fyne.PointEvent) {
	if c := fyne.CurrentApp().Driver().CanvasForObject(p); c != nil {
		c.Focus(p)
	}
	h := p.at(e.Position)
	p.current = h
	clock := p.now
	if clock == nil {
		clock = time.Now
	}
	t := clock()
	if p.OnDoubleTapped != nil && h.same(p.lastHot) && !p.lastTap.IsZero() && t.Sub(p.lastTap) < DoubleTapTime {
		p.lastTap = time.Time{}
		p.OnDoubleTapped(h)
		return
	}
	p.lastTap, p.lastHot = t, h
	p.tap(h)
}

func (p *Picture) tap(h Hot) {
	if p.OnTapped != nil {
		p.OnTapped(h)
	}
	p.overlay()
}

// TappedSecondary implements fyne.SecondaryTappable.
func (p *Picture) TappedSecondary(e *fyne.PointEvent) {
	if p.OnSecondary != nil {
		p.OnSecondary(p.at(e.Position), e.AbsolutePosition)
	}
}

// MouseIn implements desktop.Hoverable.
func (p *Picture) MouseIn(e *desktop.MouseEvent) { p.MouseMoved(e) }

// MouseMoved implements desktop.Hoverable.
func (p *Picture) MouseMoved(e *desktop.MouseEvent) {
	p.pointer = e.Position
	p.setHover(p.at(e.Position))
}

// MouseOut implements desktop.Hoverable.
func (p *Picture) MouseOut() { p.setHover(Hot{}) }

// Cursor implements desktop.Cursorable.
func (p *Picture) Cursor() desktop.Cursor {
	if !p.hover.Zero() && p.hover.Role != "value" && p.OnTapped != nil {
		return desktop.PointerCursor
	}
	return desktop.DefaultCursor
}

// dragged moves the place in hand, else the drawing.
func (p *Picture) dragged(e *fyne.DragEvent) {
	if !p.dragging {
		p.dragging = true
		p.drag = Hot{}
		start := e.Position.Subtract(fyne.NewPos(e.Dragged.DX, e.Dragged.DY))
		if h := p.at(start); !h.Zero() && p.OnDragged != nil && (p.CanDrag == nil || p.CanDrag(h)) {
			p.drag = h
		}
	}
	if p.drag.Zero() {
		if p.Zoomable {
			p.PanBy(e.Dragged.DX, e.Dragged.DY)
		}
		return
	}
	z := vg.Length(p.zoom)
	p.OnDragged(p.drag, Points(e.Dragged.DX)/z, -Points(e.Dragged.DY)/z)
}

func (p *Picture) dragEnd() {
	h := p.drag
	p.dragging, p.drag = false, Hot{}
	if !h.Zero() && p.OnDragEnd != nil {
		p.OnDragEnd(h)
	}
}

// scrolled zooms about the pointer.
func (p *Picture) scrolled(e *fyne.ScrollEvent) {
	p.ZoomBy(math.Pow(1.1, float64(e.Scrolled.DY)/10), e.Position)
}

// FocusGained implements fyne.Focusable.
func (p *Picture) FocusGained() {
	p.focused = true
	p.overlay()
}

// FocusLost implements fyne.Focusable.
func (p *Picture) FocusLost() {
	p.focused = false
	p.overlay()
}

// TypedRune implements fyne.Focusable.
func (p *Picture) TypedRune(r rune) {
	if !p.Zoomable {
		return
	}
	middle := fyne.NewPos(p.Size().Width/2, p.Size().Height/2)
	switch r {
	case '+':
		p.ZoomBy(1.25, middle)
	case '-':
		p.ZoomBy(0.8, middle)
	case '0':
		p.Fit()
	}
}

// TypedKey implements fyne.Focusable.
func (p *Picture) TypedKey(e *fyne.KeyEvent) {
	switch e.Name {
	case fyne.KeyLeft:
		p.walk(direction{-1, 0})
	case fyne.KeyRight:
		p.walk(direction{1, 0})
	case fyne.KeyUp:
		p.walk(direction{0, 1})
	case fyne.KeyDown:
		p.walk(direction{0, -1})
	case fyne.KeyHome:
		p.current = Hot{}
		p.walk(direction{1, 0})
	case fyne.KeyEscape:
		if p.current.Zero() {
			p.key(e)
			return
		}
		p.current = Hot{}
		p.setHover(Hot{})
	case fyne.KeySpace, fyne.KeyReturn, fyne.KeyEnter:
		if !p.current.Zero() {
			p.tap(p.current)
		}
	case desktop.KeyMenu:
		if p.OnSecondary != nil && !p.current.Zero() {
			pos, size := p.Place(p.current)
			at := fyne.CurrentApp().Driver().AbsolutePositionForObject(p)
			p.OnSecondary(p.current, at.Add(pos).AddXY(size.Width/2, size.Height/2))
		}
	default:
		p.key(e)
	}
}

func (p *Picture) key(e *fyne.KeyEvent) {
	if p.OnKey != nil {
		p.OnKey(p.current, e)
	}
}

// TypedShortcut implements fyne.Shortcutable.
func (p *Picture) TypedShortcut(s fyne.Shortcut) {
	if _, ok := s.(*fyne.ShortcutCopy); ok && p.OnCopy != nil {
		p.OnCopy()
	}
}

// walk moves to the next place in a direction and brings it into view.
func (p *Picture) walk(d direction) {
	p.ensure()
	h, ok := neighbour(p.hots, p.current, d)
	if !ok {
		return
	}
	p.current = h
	p.hover = Hot{}
	p.reveal(h)
	p.overlay()
	if p.OnHover != nil {
		p.OnHover(h)
	}
}
