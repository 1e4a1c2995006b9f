package widgets

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/widget"
)

// A zoomPad lies over a picture and takes wheel and drag for it. It is hidden
// over a picture that wants neither, so that a page of such pictures scrolls.
type zoomPad struct {
	widget.BaseWidget
	p     *Picture
	wheel bool
}

func newZoomPad(p *Picture) *zoomPad {
	z := &zoomPad{p: p}
	z.ExtendBaseWidget(z)
	return z
}

// Dragged implements fyne.Draggable.
func (z *zoomPad) Dragged(e *fyne.DragEvent) { z.p.dragged(e) }

// DragEnd implements fyne.Draggable.
func (z *zoomPad) DragEnd() { z.p.dragEnd() }

// Scrolled implements fyne.Scrollable.
func (z *zoomPad) Scrolled(e *fyne.ScrollEvent) {
	if z.wheel {
		z.p.scrolled(e)
	}
}

// CreateRenderer implements fyne.Widget.
func (z *zoomPad) CreateRenderer() fyne.WidgetRenderer {
	return widget.NewSimpleRenderer(&fyne.Container{})
}
