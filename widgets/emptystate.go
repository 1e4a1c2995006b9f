package widgets

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// An EmptyState stands where things will be: a sentence that says what belongs
// here and the button that makes the first one.
type EmptyState struct {
	widget.BaseWidget

	text   *paragraph
	button *widget.Button
}

// NewEmptyState returns an empty state; without a button text it has none.
func NewEmptyState(text, button string, tapped func()) *EmptyState {
	e := &EmptyState{text: newParagraph(theme.SizeNameText, theme.ColorNameForeground), button: widget.NewButton(button, tapped)}
	e.text.text = text
	if button == "" {
		e.button.Hide()
	}
	e.ExtendBaseWidget(e)
	return e
}

// SetText changes the sentence.
func (e *EmptyState) SetText(text string) {
	e.text.text = text
	e.Refresh()
}

// CreateRenderer implements fyne.Widget.
func (e *EmptyState) CreateRenderer() fyne.WidgetRenderer {
	e.ExtendBaseWidget(e)
	return &emptyStateRenderer{e}
}

type emptyStateRenderer struct{ e *EmptyState }

// textWidth is the width of the sentence: its own where there is room.
func (r *emptyStateRenderer) textWidth(room float32) float32 {
	e := r.e
	own := fyne.MeasureText(e.text.text, sizeOf(e, e.text.size), e.text.style).Width + 1
	return min(own, max(room-4*Step, 8*Step))
}

func (r *emptyStateRenderer) Layout(size fyne.Size) {
	e := r.e
	width := r.textWidth(size.Width)
	height := e.text.heightFor(width)
	button := fyne.Size{}
	total := height
	if e.button.Visible() {
		button = e.button.MinSize()
		total += Step + button.Height
	}
	y := max((size.Height-total)/2, 0)
	e.text.Resize(fyne.NewSize(width, height))
	e.text.Move(fyne.NewPos((size.Width-width)/2, y))
	e.button.Resize(button)
	e.button.Move(fyne.NewPos((size.Width-button.Width)/2, y+height+Step))
}

func (r *emptyStateRenderer) MinSize() fyne.Size {
	e := r.e
	room := e.Size().Width
	if room == 0 {
		room = 40 * Step
	}
	s := fyne.NewSize(16*Step, e.text.heightFor(r.textWidth(room)))
	if e.button.Visible() {
		m := e.button.MinSize()
		s = fyne.NewSize(max(s.Width, m.Width), s.Height+Step+m.Height)
	}
	return s
}

func (r *emptyStateRenderer) Refresh() {
	r.Layout(r.e.Size())
	r.e.text.Refresh()
	r.e.button.Refresh()
}

func (r *emptyStateRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.e.text, r.e.button}
}

func (r *emptyStateRenderer) Destroy() {}
