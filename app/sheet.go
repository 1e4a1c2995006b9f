//go:build !headless

package main

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/widget"

	"quietbus/study"
	"quietbus/widgets"
)

// A draft is an item being edited in a copy of the study. What is typed goes
// into the copy, which is validated as a whole, so that a field's error is the
// same here, in the file and on the command line.
type draft struct {
	base  *study.Study // as it was when the sheet was opened
	study *study.Study // with the edits
	kind  study.Kind
	name  string // of the item in study, as it is now
	was   string // its name when the sheet was opened, "" for a new item
}

// editDraft starts to edit an item of a study.
func editDraft(s *study.Study, name string) (*draft, error) {
	kind, item := s.Find(name)
	if item == nil {
		return nil, fmt.Errorf("there is no item %q", name)
	}
	return &draft{base: s, study: s.Clone(), kind: kind, name: name, was: name}, nil
}

// newDraft starts to add an item of a kind, at a bus if it takes one.
func newDraft(s *study.Study, kind study.Kind, bus string) (*draft, error) {
	d := &draft{base: s, study: s.Clone(), kind: kind}
	item := study.NewItem(kind)
	d.name = s.FreeName(capital(study.InfoOf(kind).Singular) + " ")
	if err := study.SetField(item, "name", d.name); err != nil {
		return nil, err
	}
	fillReferences(s, kind, item, bus)
	if err := d.study.Add(item); err != nil {
		return nil, err
	}
	return d, nil
}

// fillReferences gives the needed references of a new item values that fit: the
// bus at hand, and for a second one another bus.
func fillReferences(s *study.Study, kind study.Kind, item any, bus string) {
	if bus == "" && len(s.Buses) > 0 {
		bus = s.Buses[0].Name
	}
	used := ""
	for _, f := range study.Describe(kind) {
		if f.Type != study.Text || !slices.Contains(f.Ref, study.KindBus) || study.GetField(item, f.Key) != "" {
			continue
		}
		value := bus
		if used == bus {
			for i := range s.Buses {
				if value = s.Buses[i].Name; value != used {
					break
				}
			}
		}
		if value != "" && study.SetField(item, f.Key, value) == nil {
			used = value
		}
	}
}

// item returns the item in the copy.
func (d *draft) item() any {
	_, item := d.study.Find(d.name)
	return item
}

// word returns what the item's Kind field says, for fields that belong to some
// kinds only.
func (d *draft) word() string {
	for _, f := range study.Describe(d.kind) {
		if f.Key == "kind" {
			return study.GetField(d.item(), "kind")
		}
	}
	return ""
}

// fields returns the fields of the item as the sheet shows them.
func (d *draft) fields() []widgets.SheetField {
	item := d.item()
	word := d.word()
	var out []widgets.SheetField
	for _, f := range study.Describe(d.kind) {
		if !f.Applies(word) || d.idle(f.Key) {
			continue
		}
		s := fieldOf(f, toSheet(f, titleOf(d.kind, f.Key, study.GetField(item, f.Key))))
		if named := titles(d.kind, f.Key); named != nil {
			s.Choices = named
		}
		s.Choices = append(s.Choices, d.choices(f)...)
		if s.Kind == widgets.FieldText && len(s.Choices) > 0 {
			s.Kind = widgets.FieldChoice
			if len(f.Ref) > 0 {
				s.Kind = widgets.FieldReference
			}
		}
		if p, ok := study.ProvenanceOf(item)[f.Key]; ok {
			s.Origin, s.Note = string(p.Origin), p.Note
		}
		if problem, remedy := d.problem(f.Key); problem != "" && !(d.was == "" && s.Text == "") {
			s.Error, s.Remedy = problem, remedy // an empty field of a new item is not yet wrong
		}
		out = append(out, s)
	}
	return out
}

// idle reports whether a field has no effect as the item is now: the lines of a
// spectrum that is not typed.
func (d *draft) idle(key string) bool {
	load, ok := d.item().(*study.NonlinearLoad)
	return ok && key == "lines" && load.Spectrum != study.Typed && len(load.Lines) == 0
}

// fieldOf translates a field's description.
func fieldOf(f study.Field, text string) widgets.SheetField {
	s := widgets.SheetField{Key: f.Key, Label: f.Label, Unit: f.Unit, Help: f.Help, Default: f.Default, Need: f.Need, Text: text}
	if f.Typical.Has {
		s.Typical = fmt.Sprintf("%s to %s", short(f.Typical.Min), short(f.Typical.Max))
	}
	switch f.Type {
	case study.Text:
		s.Kind = widgets.FieldText
		if len(f.Choices) > 0 {
			s.Kind = widgets.FieldChoice
			if !f.Need {
				s.Choices = append(s.Choices, "")
			}
			s.Choices = append(s.Choices, f.Choices...)
		}
	case study.Number, study.Whole:
		s.Kind, s.Sourced = widgets.FieldNumber, true
	case study.Switch:
		s.Kind = widgets.FieldBool
	case study.Names:
		s.Kind = widgets.FieldMulti
	case study.Rows:
		s.Kind, s.Sourced = widgets.FieldLines, true
		for _, c := range f.Columns {
			s.Columns = append(s.Columns, widgets.Column{Label: c.Label, Unit: c.Unit, Default: c.Default,
				Optional: !c.Need, Text: c.Type == study.Text})
		}
	}
	return s
}

// choices returns the names of items that a field may hold.
func (d *draft) choices(f study.Field) []string {
	var out []string
	if d.kind == study.KindAssessment && f.Key == "set" {
		out = append(out, d.study.LimitSetNames()...) // after the published ones
	}
	if len(f.Ref) > 0 && !f.Need && f.Type == study.Text {
		out = append(out, "")
	}
	for _, kind := range f.Ref {
		for _, item := range d.study.Items(kind) {
			if name := study.NameOf(item); name != d.name {
				out = append(out, name)
			}
		}
	}
	return out
}

// problem returns what the whole study has against a field of the item.
func (d *draft) problem(key string) (problem, remedy string) {
	for _, e := range d.study.Validate() {
		if e.Item == d.name && e.Field == key {
			return e.Problem, e.Remedy
		}
	}
	return "", ""
}

// check tries a text in a field and returns what is wrong with it.
func (d *draft) check(key, text string) (problem, remedy string) {
	try := &draft{base: d.base, study: d.study.Clone(), kind: d.kind, name: d.name, was: d.was}
	if err := try.set(key, text); err != nil {
		var field *study.FieldError
		if errors.As(err, &field) {
			return field.Problem, field.Remedy
		}
		return err.Error(), ""
	}
	return try.problem(key)
}

// set puts a text into a field of the copy. A new name is a renaming: what
// refers to the item follows.
func (d *draft) set(key, text string) error {
	if key == "name" {
		text = strings.TrimSpace(text)
		if text == d.name {
			return nil
		}
		if err := d.study.Rename(d.name, text); err != nil {
			return err
		}
		d.name = text
		return nil
	}
	if err := study.SetField(d.item(), key, fromSheet(study.FieldOf(d.kind, key), wordOf(d.kind, key, text))); err != nil || key != "kind" {
		return err
	}
	return d.clearOthers()
}

// clearOthers empties the fields that do not belong to the item's kind word.
func (d *draft) clearOthers() error {
	item, word := d.item(), d.word()
	for _, f := range study.Describe(d.kind) {
		if f.Applies(word) || study.GetField(item, f.Key) == "" {
			continue
		}
		if err := study.SetField(item, f.Key, ""); err != nil {
			return err
		}
		study.SetProvenance(item, f.Key, study.Provenance{})
	}
	return nil
}

// toSheet writes a field's text as a sheet has it: true and false for a
// switch, names one a line.
func toSheet(f study.Field, text string) string {
	switch f.Type {
	case study.Switch:
		return fmt.Sprint(text == "yes")
	case study.Names:
		return strings.ReplaceAll(text, ", ", "\n")
	}
	return text
}

// fromSheet is the inverse of toSheet.
func fromSheet(f *study.Field, text string) string {
	if f != nil && f.Type == study.Names {
		return strings.ReplaceAll(text, "\n", ",")
	}
	return text
}

// notice returns a problem of the item that belongs to none of the fields
// shown.
func (d *draft) notice() string {
	shown := map[string]bool{}
	for _, f := range d.fields() {
		shown[f.Key] = true
	}
	for _, e := range d.study.Validate() {
		if e.Item == d.name && !shown[e.Field] {
			return capital(e.Problem) + "; " + e.Remedy + "."
		}
	}
	return ""
}

// title returns the heading of the sheet.
func (d *draft) title() string {
	word := study.InfoOf(d.kind).Singular
	if d.was == "" {
		return "New " + word
	}
	return capital(word) + " " + d.was
}

// edit opens the sheet of an item.
func (w *Window) edit(name string) {
	d, err := editDraft(w.project.Study(), name)
	if err != nil {
		return // it is gone, or a low-pass outlet that has no sheet
	}
	w.openSheet(d)
}

// add opens the sheet of a new item.
func (w *Window) add(kind study.Kind, bus string) {
	if bus == "" {
		bus = w.sel.Bus
	}
	d, err := newDraft(w.project.Study(), kind, bus)
	if err != nil {
		w.fail("That cannot be added", err)
		return
	}
	w.openSheet(d)
}

// remove takes an item out. What other items still refer to stays, and the
// message names them.
func (w *Window) remove(name string) {
	if _, item := w.project.Study().Find(name); item == nil {
		return
	}
	if w.do("Remove "+name, func(s *study.Study) error { return s.Remove(name) }) {
		w.status.Say("Removed " + name + "; undo brings it back")
	}
}

// openSheet shows the sheet of a draft until it is applied or cancelled.
func (w *Window) openSheet(d *draft) {
	sheet := widgets.NewSheet(d.title())
	sheet.Fields = d.fields
	sheet.Check = d.check
	sheet.CheckRows = d.checkRows
	sheet.OnChanged = func(key, text, problem string) {
		if problem == "" {
			if err := d.set(key, text); err != nil {
				sheet.SetNotice(errorText(err))
				return
			}
		}
		sheet.SetNotice(d.notice())
	}
	sheet.OnOrigin = func(key, origin, note string) {
		study.SetProvenance(d.item(), key, study.Provenance{Origin: study.Origin(origin), Note: note})
	}
	apply := func() {
		name := "Edit " + d.name
		if d.was == "" {
			name = "Add " + d.name
		}
		if w.do(name, func(s *study.Study) error { *s = *d.study; return nil }) {
			w.pick(selectionOf(w.project.Study(), d.name))
		}
	}
	if d.was != "" {
		sheet.OnRemove = func() {
			sheet.OnCancel()
			w.remove(d.was)
		}
	}
	w.sheet(sheet, d.title(), apply)
}

// checkRows checks a field of lines row by row.
func (d *draft) checkRows(key string, rows [][]string) []string {
	out := make([]string, len(rows))
	for i := range rows {
		out[i], _ = d.check(key, widgets.JoinRows(rows[:i+1]))
		if out[i] != "" {
			break // what follows is not worth more words until this is mended
		}
	}
	return out
}

// modal shows an object over the window, of the size asked for as far as there
// is room.
func (w *Window) modal(o fyne.CanvasObject, width, height float32) *widget.PopUp {
	size := w.win.Canvas().Size()
	k := max(w.look.scale, 1)
	pop := widget.NewModalPopUp(container.NewPadded(o), w.win.Canvas())
	pop.Resize(fyne.NewSize(min(width*k, size.Width-40), min(height*k, size.Height-80)))
	return pop
}
