package widgets

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/widget"
)

// A wheelPad lies over a form that scrolls and takes the wheel for it: an entry
// would keep the wheel to itself, and the form would stop under the pointer.
type wheelPad struct {
	widget.BaseWidget
	to *container.Scroll
}

func newWheelPad(to *container.Scroll) *wheelPad {
	p := &wheelPad{to: to}
	p.ExtendBaseWidget(p)
	return p
}

// Scrolled implements fyne.Scrollable.
func (p *wheelPad) Scrolled(e *fyne.ScrollEvent) { p.to.Scrolled(e) }

// CreateRenderer implements fyne.Widget.
func (p *wheelPad) CreateRenderer() fyne.WidgetRenderer {
	return widget.NewSimpleRenderer(&fyne.Container{})
}
