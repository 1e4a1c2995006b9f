//go:build !headless

package main

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A tabRow is a row of words, one of which is turned to. Words for which there
// is no room stand in a menu at the end of the row.
type tabRow struct {
	turned  func(name string)
	names   []string
	buttons []*widget.Button
	more    *widget.Button
	hidden  []string // in the menu
	current string
	pages   []fyne.CanvasObject
}

func newTabRow(names ...string) *tabRow {
	t := &tabRow{names: names}
	for _, name := range names {
		t.buttons = append(t.buttons, widget.NewButton(name, func() { t.turnTo(name) }))
	}
	t.more = widget.NewButtonWithIcon("More", theme.MenuDropDownIcon(), t.menu)
	t.more.IconPlacement = widget.ButtonIconTrailingText
	t.more.Hide()
	t.show(names[0])
	return t
}

func (t *tabRow) turnTo(name string) {
	t.show(name)
	if t.turned != nil {
		t.turned(name)
	}
}

// row returns the words in a row that asks for room for all of them.
func (t *tabRow) row() *fyne.Container { return t.lay(true) }

// narrowRow returns them in a row that may be narrower than all of them.
func (t *tabRow) narrowRow() *fyne.Container { return t.lay(false) }

func (t *tabRow) lay(whole bool) *fyne.Container {
	row := container.New(&tabLayout{t, whole})
	for _, b := range t.buttons {
		row.Add(b)
	}
	row.Add(t.more)
	return row
}

// menu offers the words that have no room.
func (t *tabRow) menu() {
	var items []*fyne.MenuItem
	for _, name := range t.hidden {
		i := fyne.NewMenuItem(name, func() { t.turnTo(name) })
		i.Checked = name == t.current
		items = append(items, i)
	}
	driver := fyne.CurrentApp().Driver()
	c := driver.CanvasForObject(t.more)
	if c == nil || len(items) == 0 {
		return
	}
	at := driver.AbsolutePositionForObject(t.more).Add(fyne.NewPos(0, t.more.Size().Height))
	widget.ShowPopUpMenuAtPosition(fyne.NewMenu("", items...), c, at)
}

// stack returns the pages, one for each word, of which the one turned to shows.
func (t *tabRow) stack(pages ...fyne.CanvasObject) *fyne.Container {
	t.pages = pages
	t.show(t.names[0])
	return container.NewStack(pages...)
}

// show marks a word and shows its page.
func (t *tabRow) show(name string) {
	t.current = name
	for i, b := range t.buttons {
		on := t.names[i] == name
		mark(b, on)
		if i < len(t.pages) {
			if on {
				t.pages[i].Show()
			} else {
				t.pages[i].Hide()
			}
		}
	}
	t.markMore()
}

// markMore lets the menu's button stand for a word in it that is turned to.
func (t *tabRow) markMore() {
	text := "More"
	for _, name := range t.hidden {
		if name == t.current {
			text = name
		}
	}
	if text != t.more.Text {
		t.more.SetText(text)
	}
	mark(t.more, text != "More")
}

func mark(b *widget.Button, on bool) {
	want := widget.LowImportance
	if on {
		want = widget.MediumImportance
	}
	if b.Importance != want {
		b.Importance = want
		b.Refresh()
	}
}

// tabLayout sets as many words side by side as fit, the menu's button last.
type tabLayout struct {
	t     *tabRow
	whole bool // asks for room for all words
}

func (l *tabLayout) Layout(_ []fyne.CanvasObject, size fyne.Size) {
	t := l.t
	pad := theme.Padding()
	whole := float32(0)
	for _, b := range t.buttons {
		whole += b.MinSize().Width + pad
	}
	room := size.Width
	if whole-pad > size.Width {
		room -= l.widestMore() + pad
	}
	x, full := float32(0), false
	t.hidden = t.hidden[:0]
	for i, b := range t.buttons {
		w := b.MinSize().Width
		full = full || x+w > room+0.5
		if full {
			b.Hide()
			t.hidden = append(t.hidden, t.names[i])
			continue
		}
		b.Show()
		b.Resize(fyne.NewSize(w, size.Height))
		b.Move(fyne.NewPos(x, 0))
		x += w + pad
	}
	if len(t.hidden) == 0 {
		t.more.Hide()
		return
	}
	t.markMore()
	t.more.Show()
	t.more.Resize(fyne.NewSize(min(l.widestMore(), size.Width-x), size.Height))
	t.more.Move(fyne.NewPos(x, 0))
}

// widestMore is the room that the menu's button may need.
func (l *tabLayout) widestMore() float32 {
	w := float32(0)
	for _, b := range l.t.buttons {
		w = max(w, b.MinSize().Width)
	}
	return w + theme.IconInlineSize()
}

// MinSize asks for room for all words, or for the first one and the menu.
func (l *tabLayout) MinSize([]fyne.CanvasObject) fyne.Size {
	first := l.t.buttons[0].MinSize()
	if l.whole {
		w := -theme.Padding()
		for _, b := range l.t.buttons {
			w += b.MinSize().Width + theme.Padding()
		}
		return fyne.NewSize(w, first.Height)
	}
	return fyne.NewSize(first.Width+theme.Padding()+l.widestMore(), max(first.Height, l.t.more.MinSize().Height))
}
