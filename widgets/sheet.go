package widgets

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A Sheet is the form to edit one item. What is typed is checked at once and
// told through OnChanged; nothing is final before OnApply.
//
// Fields is asked again whenever a choice, reference, bool or set changes, so
// that which fields there are may depend on it. Text that was typed and does
// not pass stays in its field.
type Sheet struct {
	widget.BaseWidget

	// Fields returns the fields as they should be shown now.
	Fields func() []SheetField
	// Check returns what is wrong with a text and what to do, or two empty
	// strings.
	Check func(key, text string) (problem, remedy string)
	// CheckRows does the same for a field of lines, one problem a row.
	CheckRows func(key string, rows [][]string) []string
	// OnChanged is told every text that passes the check, and every one that
	// does not, with its problem.
	OnChanged func(key, text, problem string)
	// OnOrigin is told a new origin or note of a value.
	OnOrigin func(key, origin, note string)

	OnApply  func()
	OnCancel func()
	OnRemove func() // nil for an item that cannot be removed

	title  string
	rows   []*fieldRow
	live   fyne.CanvasObject
	notice *paragraph

	heading               *paragraph
	body                  *fyne.Container
	scroll                *container.Scroll
	wheel                 *wheelPad
	apply, cancel, remove *widget.Button
}

// NewSheet returns a sheet; call Reload once its callbacks are set.
func NewSheet(title string) *Sheet {
	s := &Sheet{title: title,
		heading: newParagraph(theme.SizeNameSubHeadingText, theme.ColorNameForeground),
		notice:  newParagraph(theme.SizeNameText, theme.ColorNameError),
	}
	s.heading.style.Bold = true
	s.heading.set(title)
	s.apply = widget.NewButton("Apply", s.Apply)
	s.apply.Importance = widget.HighImportance
	s.cancel = widget.NewButton("Cancel", func() {
		if s.OnCancel != nil {
			s.OnCancel()
		}
	})
	s.remove = widget.NewButton("Remove", func() {
		if s.OnRemove != nil {
			s.OnRemove()
		}
	})
	s.body = container.New(column{gap: Step, right: 2 * Step})
	s.scroll = container.NewVScroll(s.body)
	s.wheel = newWheelPad(s.scroll)
	s.ExtendBaseWidget(s)
	return s
}

// SetTitle changes the heading.
func (s *Sheet) SetTitle(title string) {
	s.title = title
	s.heading.set(title)
}

// SetNotice shows a problem that belongs to no single field, or "".
func (s *Sheet) SetNotice(text string) {
	s.notice.set(text)
	s.Refresh()
}

// SetLive puts a picture of the item's effect above the fields; nil removes it.
func (s *Sheet) SetLive(o fyne.CanvasObject) {
	s.live = o
	s.Refresh()
}

// Reload shows the fields anew, keeping what was typed and does not pass.
func (s *Sheet) Reload() {
	if s.Fields == nil {
		return
	}
	old := make(map[string]*fieldRow, len(s.rows))
	for _, row := range s.rows {
		old[row.field.Key] = row
	}
	s.rows = s.rows[:0:0]
	s.body.Objects = s.body.Objects[:0:0]
	for _, f := range s.Fields() {
		row := old[f.Key]
		if row == nil || row.field.Kind != f.Kind {
			row = newFieldRow(s, f)
		} else {
			row.take(f)
		}
		s.rows = append(s.rows, row)
		s.body.Objects = append(s.body.Objects, row)
	}
	s.Refresh()
}

// Text returns what stands in a field, and whether there is such a field.
func (s *Sheet) Text(key string) (string, bool) {
	if row := s.row(key); row != nil {
		return row.text, true
	}
	return "", false
}

// SetText types a text into a field, as a user would.
func (s *Sheet) SetText(key, text string) {
	if row := s.row(key); row != nil {
		row.enter(text)
	}
}

// Problem returns what is wrong with a field, or "".
func (s *Sheet) Problem(key string) string {
	if row := s.row(key); row != nil {
		return row.problem
	}
	return ""
}

// Problems returns the keys of the fields that do not pass, in order.
func (s *Sheet) Problems() []string {
	var keys []string
	for _, row := range s.rows {
		if row.problem != "" {
			keys = append(keys, row.field.Key)
		}
	}
	return keys
}

// Apply ends the edit if every field passes; else it shows the first that does
// not.
func (s *Sheet) Apply() {
	for _, row := range s.rows {
		row.check()
	}
	if keys := s.Problems(); len(keys) > 0 {
		s.FocusField(keys[0])
		s.Refresh()
		return
	}
	if s.OnApply != nil {
		s.OnApply()
	}
}

// FocusField puts the cursor into a field; "" is the first one.
func (s *Sheet) FocusField(key string) {
	row := s.row(key)
	if key == "" && len(s.rows) > 0 {
		row = s.rows[0]
	}
	if row == nil {
		return
	}
	if c := fyne.CurrentApp().Driver().CanvasForObject(s); c != nil {
		c.Focus(row.focusable())
	}
	s.reveal(row)
}

func (s *Sheet) row(key string) *fieldRow {
	for _, row := range s.rows {
		if row.field.Key == key {
			return row
		}
	}
	return nil
}

// activate marks the row that has the focus. Its help stays open until another
// row takes over, so that nothing moves under the pointer between press and
// release.
func (s *Sheet) activate(row *fieldRow) {
	for _, r := range s.rows {
		if on := r == row; r.active != on {
			r.active = on
			r.Refresh()
		}
	}
	s.relayout()
	s.reveal(row)
}

// reveal scrolls so that a row is in view with its help.
func (s *Sheet) reveal(row *fieldRow) {
	top, view := row.Position().Y, s.scroll.Size().Height
	bottom := top + row.Size().Height
	offset := s.scroll.Offset.Y
	if bottom > offset+view {
		offset = bottom - view
	}
	offset = max(min(offset, top), 0)
	if offset != s.scroll.Offset.Y {
		s.scroll.ScrollToOffset(fyne.NewPos(0, offset))
	}
}

// changed follows a text that was typed or chosen.
func (s *Sheet) changed(row *fieldRow) {
	if s.OnChanged != nil {
		s.OnChanged(row.field.Key, row.text, row.problem)
	}
	switch row.field.Kind {
	case FieldChoice, FieldReference, FieldBool, FieldMulti:
		s.Reload()
	default:
		s.relayout()
	}
}

// relayout gives rows whose height changed their room.
func (s *Sheet) relayout() {
	width := s.scroll.Size().Width
	if width <= 0 {
		return
	}
	s.body.Resize(fyne.NewSize(width, s.body.MinSize().Height))
	s.body.Layout.Layout(s.body.Objects, s.body.Size())
	s.scroll.Refresh()
}

// CreateRenderer implements fyne.Widget.
func (s *Sheet) CreateRenderer() fyne.WidgetRenderer {
	s.ExtendBaseWidget(s)
	return &sheetRenderer{s}
}

type sheetRenderer struct{ s *Sheet }

func (r *sheetRenderer) Layout(size fyne.Size) {
	s := r.s
	inner := max(size.Width-4*Step, 0)
	y := 2 * Step
	if s.title != "" {
		height := s.heading.heightFor(inner)
		s.heading.Move(fyne.NewPos(2*Step, y))
		s.heading.Resize(fyne.NewSize(inner, height))
		y += height + Step
	}
	foot := s.apply.MinSize().Height
	bottom := size.Height - 2*Step - foot
	x := size.Width - 2*Step
	for _, b := range []*widget.Button{s.apply, s.cancel} {
		m := b.MinSize()
		width := max(m.Width, 12*Step)
		x -= width
		b.Resize(fyne.NewSize(width, foot))
		b.Move(fyne.NewPos(x, bottom))
		x -= Step
	}
	remove := s.remove.MinSize()
	s.remove.Resize(fyne.NewSize(remove.Width, foot))
	s.remove.Move(fyne.NewPos(2*Step, bottom))
	bottom -= Step
	if height := s.notice.heightFor(inner); height > 0 {
		bottom -= height
		s.notice.Move(fyne.NewPos(2*Step, bottom))
		s.notice.Resize(fyne.NewSize(inner, height))
		bottom -= Step
	}
	if s.live != nil {
		// A third of the room at most: the fields come first.
		height := min(s.live.MinSize().Height, max((bottom-y)/3, 0))
		s.live.Move(fyne.NewPos(2*Step, y))
		s.live.Resize(fyne.NewSize(inner, height))
		y += height + 2*Step
	}
	s.scroll.Move(fyne.NewPos(2*Step, y))
	s.scroll.Resize(fyne.NewSize(inner+2*Step, max(bottom-y, 0)))
	s.wheel.Move(s.scroll.Position())
	s.wheel.Resize(s.scroll.Size())
	s.relayout()
}

func (r *sheetRenderer) MinSize() fyne.Size {
	s := r.s
	k := max(typeScaleOf(s), 1)
	buttons := s.apply.MinSize().Width + s.cancel.MinSize().Width + s.remove.MinSize().Width + 8*Step
	return fyne.NewSize(max(80+240*k, buttons), 200+80*k)
}

func (r *sheetRenderer) Refresh() {
	s := r.s
	if s.OnRemove == nil {
		s.remove.Hide()
	} else {
		s.remove.Show()
	}
	r.Layout(s.Size())
	for _, row := range s.rows {
		row.Refresh()
	}
	for _, o := range r.Objects() {
		o.Refresh()
	}
}

func (r *sheetRenderer) Objects() []fyne.CanvasObject {
	s := r.s
	objects := []fyne.CanvasObject{s.heading}
	if s.live != nil {
		objects = append(objects, s.live)
	}
	return append(objects, s.scroll, s.wheel, s.notice, s.remove, s.cancel, s.apply)
}

func (r *sheetRenderer) Destroy() {}
