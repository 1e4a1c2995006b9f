package widgets

import (
	"slices"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/widget"
)

// The controls of a sheet are the toolkit's own, with an ear for the focus.

// A fieldEntry is a line of text.
type fieldEntry struct {
	widget.Entry
	row *fieldRow
}

func newFieldEntry(row *fieldRow, changed func(text string)) *fieldEntry {
	e := &fieldEntry{row: row}
	e.Wrapping = fyne.TextWrapOff
	e.ExtendBaseWidget(e)
	e.OnChanged = func(text string) {
		if !row.setting {
			changed(text)
		}
	}
	e.OnSubmitted = func(string) { row.sheet.Apply() }
	return e
}

// FocusGained implements fyne.Focusable.
func (e *fieldEntry) FocusGained() {
	e.Entry.FocusGained()
	e.row.gained()
}

// TypedKey implements fyne.Focusable: escape cancels.
func (e *fieldEntry) TypedKey(k *fyne.KeyEvent) {
	if k.Name == fyne.KeyEscape {
		e.row.escape()
		return
	}
	e.Entry.TypedKey(k)
}

// A fieldSelect is a choice of one.
type fieldSelect struct {
	widget.Select
	row    *fieldRow
	values []string
}

func newFieldSelect(row *fieldRow) *fieldSelect {
	s := &fieldSelect{row: row}
	s.ExtendBaseWidget(s)
	s.OnChanged = func(string) {
		if i := s.SelectedIndex(); i >= 0 && i < len(s.values) {
			row.used(s.values[i])
		}
	}
	return s
}

// put shows the field's choices and its text, a text that is no choice too.
func (s *fieldSelect) put() {
	f := s.row.field
	s.values = slices.Clone(f.Choices)
	labels := slices.Clone(f.Choices)
	copy(labels, f.Labels)
	if !f.Need && !slices.Contains(s.values, "") {
		s.values = slices.Insert(s.values, 0, "")
		labels = slices.Insert(labels, 0, "")
	}
	if i := slices.Index(labels, ""); i >= 0 {
		labels[i] = "(none)"
		if f.Default != "" {
			labels[i] = "(" + f.Default + ")"
		}
	}
	at := slices.Index(s.values, s.row.text)
	if at < 0 && s.row.text != "" {
		s.values = append(s.values, s.row.text)
		labels = append(labels, s.row.text)
		at = len(labels) - 1
	}
	s.Options = labels
	s.PlaceHolder = "Choose one"
	if at < 0 {
		s.ClearSelected()
	} else {
		s.SetSelectedIndex(at)
	}
	s.Refresh()
}

// FocusGained implements fyne.Focusable.
func (s *fieldSelect) FocusGained() {
	s.Select.FocusGained()
	s.row.gained()
}

// TypedKey implements fyne.Focusable: escape cancels.
func (s *fieldSelect) TypedKey(k *fyne.KeyEvent) {
	if k.Name == fyne.KeyEscape {
		s.row.escape()
		return
	}
	s.Select.TypedKey(k)
}

// newFieldSwitch returns a switch for a field that is yes or no.
func newFieldSwitch(row *fieldRow) *Switch {
	s := NewSwitch(false, func(on bool) {
		text := "false"
		if on {
			text = "true"
		}
		row.used(text)
	})
	s.onFocus, s.onEscape = row.gained, row.escape
	return s
}

// A fieldSet is a choice of any number.
type fieldSet struct {
	widget.BaseWidget
	row   *fieldRow
	boxes []*fieldCheck
}

type fieldCheck struct {
	widget.Check
	row *fieldRow
}

// FocusGained implements fyne.Focusable.
func (c *fieldCheck) FocusGained() {
	c.Check.FocusGained()
	c.row.gained()
}

// TypedKey implements fyne.Focusable: escape cancels.
func (c *fieldCheck) TypedKey(k *fyne.KeyEvent) {
	if k.Name == fyne.KeyEscape {
		c.row.escape()
		return
	}
	c.Check.TypedKey(k)
}

func newFieldSet(row *fieldRow) *fieldSet {
	s := &fieldSet{row: row}
	s.ExtendBaseWidget(s)
	return s
}

// put shows a box for each choice, ticked when the text names it.
func (s *fieldSet) put() {
	f := s.row.field
	chosen := strings.Split(s.row.text, "\n")
	for len(s.boxes) < len(f.Choices) {
		c := &fieldCheck{row: s.row}
		c.ExtendBaseWidget(c)
		s.boxes = append(s.boxes, c)
	}
	s.boxes = s.boxes[:len(f.Choices)]
	for i, c := range s.boxes {
		c.OnChanged = nil
		c.Text = f.Choices[i]
		if i < len(f.Labels) {
			c.Text = f.Labels[i]
		}
		c.SetChecked(slices.Contains(chosen, f.Choices[i]))
		c.OnChanged = func(bool) { s.row.used(s.text()) }
		c.Refresh()
	}
	s.Refresh()
}

func (s *fieldSet) text() string {
	var chosen []string
	for i, c := range s.boxes {
		if c.Checked {
			chosen = append(chosen, s.row.field.Choices[i])
		}
	}
	return strings.Join(chosen, "\n")
}

func (s *fieldSet) first() fyne.Focusable {
	if len(s.boxes) > 0 {
		return s.boxes[0]
	}
	return nil
}

// CreateRenderer implements fyne.Widget.
func (s *fieldSet) CreateRenderer() fyne.WidgetRenderer {
	s.ExtendBaseWidget(s)
	return &fieldSetRenderer{s}
}

type fieldSetRenderer struct{ s *fieldSet }

func (r *fieldSetRenderer) Layout(size fyne.Size) {
	column{}.Layout(r.Objects(), size)
}

func (r *fieldSetRenderer) MinSize() fyne.Size { return column{}.MinSize(r.Objects()) }

func (r *fieldSetRenderer) Refresh() { r.Layout(r.s.Size()) }

func (r *fieldSetRenderer) Objects() []fyne.CanvasObject {
	objects := make([]fyne.CanvasObject, len(r.s.boxes))
	for i, c := range r.s.boxes {
		objects[i] = c
	}
	return objects
}

func (r *fieldSetRenderer) Destroy() {}
