package widgets

import (
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/test"
)

// A shownText is a text on the screen with its place.
type shownText struct {
	text       string
	pos        fyne.Position
	size       fyne.Size // what the letters need
	room       fyne.Size // what the object was given
	clip       fyne.Position
	clipSize   fyne.Size
	scrolls    bool // inside something that scrolls
	scrollsOff bool // and not wholly in view
}

// shownTexts walks everything visible.
func shownTexts(o fyne.CanvasObject, size fyne.Size) []shownText {
	var found []shownText
	var walk func(o fyne.CanvasObject, at, clip fyne.Position, clipSize fyne.Size, scrolls bool)
	walk = func(o fyne.CanvasObject, at, clip fyne.Position, clipSize fyne.Size, scrolls bool) {
		if !o.Visible() {
			return
		}
		at = at.Add(o.Position())
		switch o := o.(type) {
		case *canvas.Text:
			if o.Text == "" {
				return
			}
			s := shownText{text: o.Text, pos: at, size: fyne.MeasureText(o.Text, o.TextSize, o.TextStyle), room: o.Size(),
				clip: clip, clipSize: clipSize, scrolls: scrolls}
			s.scrollsOff = at.X < clip.X || at.Y < clip.Y || at.X+s.size.Width > clip.X+clipSize.Width+1 || at.Y+s.size.Height > clip.Y+clipSize.Height+1
			found = append(found, s)
		case *container.Scroll:
			left, top := max(at.X, clip.X), max(at.Y, clip.Y)
			right, bottom := min(at.X+o.Size().Width, clip.X+clipSize.Width), min(at.Y+o.Size().Height, clip.Y+clipSize.Height)
			walk(o.Content, at, fyne.NewPos(left, top), fyne.NewSize(max(right-left, 0), max(bottom-top, 0)), true)
		case *fyne.Container:
			for _, c := range o.Objects {
				walk(c, at, clip, clipSize, scrolls)
			}
		case fyne.Widget:
			for _, c := range test.WidgetRenderer(o).Objects() {
				walk(c, at, clip, clipSize, scrolls)
			}
		}
	}
	walk(o, fyne.Position{}, fyne.Position{}, size, false)
	return found
}

// assertFits checks that every text has the room it needs, lies within the
// window unless it scrolls, and that no two texts lie on each other.
func assertFits(t *testing.T, name string, w fyne.Window) {
	t.Helper()
	size := w.Canvas().Size()
	texts := shownTexts(w.Content(), size)
	if len(texts) == 0 {
		t.Errorf("%s: no text is shown", name)
	}
	for i, s := range texts {
		if s.size.Width > s.room.Width+1 || s.size.Height > s.room.Height+1 {
			t.Errorf("%s: %q needs %v and has %v", name, s.text, s.size, s.room)
		}
		if s.scrollsOff && !s.scrolls {
			t.Errorf("%s: %q at %v, size %v, leaves the window of %v", name, s.text, s.pos, s.size, size)
		}
		for _, o := range texts[:i] {
			if s.scrollsOff || o.scrollsOff {
				continue
			}
			const slack = 2
			if s.pos.X+slack < o.pos.X+o.size.Width && o.pos.X+slack < s.pos.X+s.size.Width &&
				s.pos.Y+slack < o.pos.Y+o.size.Height && o.pos.Y+slack < s.pos.Y+s.size.Height {
				t.Errorf("%s: %q lies on %q", name, s.text, o.text)
			}
		}
	}
}
