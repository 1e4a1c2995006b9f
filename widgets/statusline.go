package widgets

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A StatusLine is one quiet line at the foot of the window: on the left how
// well the solution checks, on the right what was done last. It never takes a
// second line; what does not fit ends in dots.
type StatusLine struct {
	widget.BaseWidget

	check, last string
}

// NewStatusLine returns an empty line.
func NewStatusLine() *StatusLine {
	s := &StatusLine{}
	s.ExtendBaseWidget(s)
	return s
}

// SetCheck shows the state of the solution, such as "solution checked: residual
// 3e-15".
func (s *StatusLine) SetCheck(text string) {
	s.check = text
	s.Refresh()
}

// Say shows what was done last, or what a control would do.
func (s *StatusLine) Say(text string) {
	s.last = text
	s.Refresh()
}

// Texts returns what is shown on the left and on the right.
func (s *StatusLine) Texts() (check, last string) { return s.check, s.last }

// CreateRenderer implements fyne.Widget.
func (s *StatusLine) CreateRenderer() fyne.WidgetRenderer {
	s.ExtendBaseWidget(s)
	r := &statusLineRenderer{s: s, left: canvas.NewText("", color.Black), right: canvas.NewText("", color.Black)}
	r.Refresh()
	return r
}

type statusLineRenderer struct {
	s           *StatusLine
	left, right *canvas.Text
}

func (r *statusLineRenderer) Layout(size fyne.Size) {
	s := r.s
	text := sizeOf(s, theme.SizeNameCaptionText)
	room := max(size.Width-2*Step, 0)
	measure := func(t string) float32 { return fyne.MeasureText(t, text, fyne.TextStyle{}).Width }
	left, right := measure(s.check), measure(s.last)
	if left+right+3*Step > room { // the latest word has the first right to room
		right = min(right, room*0.6)
		left = max(min(left, room-right-3*Step), 0)
	}
	y := Step / 2
	put := func(o *canvas.Text, t string, x, width float32) {
		o.Text = ""
		if t != "" && width > 4*Step {
			o.Text = ellipsis(t, width+1, text, fyne.TextStyle{})
		}
		o.TextSize, o.Color = text, paletteOf(s).Muted
		o.Move(fyne.NewPos(x, y))
		o.Resize(fyne.NewSize(width, size.Height-Step))
		o.Refresh()
	}
	put(r.left, s.check, Step, left)
	put(r.right, s.last, size.Width-Step-right, right)
}

func (r *statusLineRenderer) MinSize() fyne.Size {
	return fyne.NewSize(20*Step, lineHeight(sizeOf(r.s, theme.SizeNameCaptionText), fyne.TextStyle{})+Step)
}

func (r *statusLineRenderer) Refresh() { r.Layout(r.s.Size()) }

func (r *statusLineRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.left, r.right}
}

func (r *statusLineRenderer) Destroy() {}
