//go:build !headless

package main

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/widget"
)

// A tabRow is a row of words, one of which is turned to.
type tabRow struct {
	turned  func(name string)
	names   []string
	buttons []*widget.Button
	pages   []fyne.CanvasObject
}

func newTabRow(names ...string) *tabRow {
	t := &tabRow{names: names}
	for _, name := range names {
		t.buttons = append(t.buttons, widget.NewButton(name, func() {
			t.show(name)
			if t.turned != nil {
				t.turned(name)
			}
		}))
	}
	t.show(names[0])
	return t
}

func (t *tabRow) row() *fyne.Container {
	row := container.NewHBox()
	for _, b := range t.buttons {
		row.Add(b)
	}
	return row
}

// stack returns the pages, one for each word, of which the one turned to shows.
func (t *tabRow) stack(pages ...fyne.CanvasObject) *fyne.Container {
	t.pages = pages
	t.show(t.names[0])
	return container.NewStack(pages...)
}

// show marks a word and shows its page.
func (t *tabRow) show(name string) {
	for i, b := range t.buttons {
		on := t.names[i] == name
		b.Importance = widget.LowImportance
		if on {
			b.Importance = widget.MediumImportance
		}
		b.Refresh()
		if i < len(t.pages) {
			if on {
				t.pages[i].Show()
			} else {
				t.pages[i].Hide()
			}
		}
	}
}
