//go:build !headless

package main

import (
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/widget"
)

// fail shows an error.
func (w *Window) fail(title string, err error) { w.tell(title, errorText(err)) }

// tell shows a text with one button.
func (w *Window) tell(title, text string) {
	w.choose(title, text, "OK", func() {}, "", nil)
}

// confirm asks before something is done.
func (w *Window) confirm(title, text, yes, no string, then func()) {
	w.choose(title, text, yes, then, no, func() {})
}

// choose shows a text and one or two buttons. The first has the focus, so that
// Return takes it.
func (w *Window) choose(title, text, yes string, onYes func(), no string, onNo func()) {
	label := widget.NewLabel(text)
	label.Wrapping = fyne.TextWrapWord
	label.Selectable = true
	var d dialog.Dialog
	button := func(name string, f func()) *keyButton {
		return newKeyButton(name, func() {
			d.Hide()
			w.dialog = ""
			f()
			w.report()
		})
	}
	first := button(yes, onYes)
	first.Importance = widget.HighImportance
	row := container.NewHBox(first)
	if no != "" {
		row = container.NewHBox(button(no, onNo), first)
	}
	body := container.NewBorder(nil, container.NewCenter(row), nil, nil, container.NewVScroll(label))
	d = dialog.NewCustomWithoutButtons(title, body, w.win)
	lines := 1 + len(text)/80 + strings.Count(text, "\n")
	d.Resize(fyne.NewSize(620, min(130+float32(lines)*20, 560)))
	w.dialog = title
	d.Show()
	w.win.Canvas().Focus(first)
	w.report()
}

// A keyButton answers to Return as well as to space while it has the focus.
type keyButton struct{ widget.Button }

func newKeyButton(text string, f func()) *keyButton {
	b := &keyButton{}
	b.Text, b.OnTapped = text, f
	b.ExtendBaseWidget(b)
	return b
}

// TypedKey implements fyne.Focusable.
func (b *keyButton) TypedKey(e *fyne.KeyEvent) {
	if e.Name == fyne.KeyReturn || e.Name == fyne.KeyEnter {
		b.Tapped(nil)
		return
	}
	b.Button.TypedKey(e)
}
