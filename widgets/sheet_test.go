package widgets

import (
	"strings"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/test"
)

func someFields() []SheetField {
	return []SheetField{
		{Key: "name", Label: "Name", Help: "Unique name; other items refer to it.", Kind: FieldText, Text: "T1", Need: true},
		{Key: "hvBus", Label: "HV bus", Help: "Bus of the high-voltage winding.", Kind: FieldReference, Text: "MV", Choices: []string{"MV", "LV1", "LV2"}, Need: true},
		{Key: "ratedKVA", Label: "Rated power", Unit: "kVA", Help: "Nameplate power.", Typical: "25 to 63000", Kind: FieldNumber, Text: "630", Need: true, Sourced: true, Origin: OriginGiven, Note: "nameplate"},
		{Key: "impedancePercent", Label: "Impedance", Unit: "%", Help: "Short-circuit impedance on own rating, from the nameplate or the routine test, not from the catalogue if there is a choice.", Typical: "3.5 to 13", Kind: FieldNumber, Text: "6", Need: true, Sourced: true, Origin: OriginAssumed, Note: "typical for the size"},
		{Key: "tap", Label: "Tap", Unit: "%", Kind: FieldNumber, Default: "0", Help: "Tap position.", Sourced: true},
		{Key: "skin", Label: "Skin effect", Kind: FieldChoice, Choices: []string{"", "none", "round"}, Default: "round", Help: "Law."},
		{Key: "closed", Label: "Earthed star point", Kind: FieldBool, Text: "true", Help: "Closed or not."},
		{Key: "replaces", Label: "Replaces", Kind: FieldMulti, Text: "M2", Choices: []string{"M1", "M2"}, Help: "Measures it replaces."},
		{Key: "spectrum", Label: "Spectrum", Kind: FieldLines, Text: "5\t20\t180\n7\t14\t0", Help: "Per cent of order 1.",
			Columns: []Column{{Label: "Order"}, {Label: "Current", Unit: "%"}, {Label: "Angle", Unit: "deg", Optional: true}}},
	}
}

// openSheet shows a sheet of the fields above.
func openSheet(t *testing.T, l look, size fyne.Size, set func(s *Sheet)) (*Sheet, fyne.Window) {
	t.Helper()
	var s *Sheet
	w := stage(t, l, size, func() fyne.CanvasObject {
		s = NewSheet("Transformer T1")
		s.Fields = someFields
		if set != nil {
			set(s)
		}
		s.Reload()
		return s
	})
	return s, w
}

func TestSheetLooks(t *testing.T) {
	for _, l := range looks {
		s, w := openSheet(t, l, fyne.NewSize(620, 720), func(s *Sheet) {
			s.OnRemove = func() {}
			s.SetNotice("T1 and T2 stand in parallel, but their vector groups disagree by 30 degrees.")
			live := canvas.NewRectangle(paletteOf(s).Grid)
			live.SetMinSize(fyne.NewSize(100, 120))
			if l.size == 1 {
				s.SetLive(live)
			}
		})
		assertFits(t, l.name, w)
		s.SetText("ratedKVA", "6e")
		s.FocusField("impedancePercent")
		settle(w)
		assertFits(t, l.name+" in use", w)
		golden(t, "sheet-"+l.name, w.Canvas().Capture())
		s.SetText("spectrum", "5\t20\t180\n7\tx\t0\n5\t3\t")
		s.scroll.ScrollToBottom()
		assertFits(t, l.name+" low", w)
		keep(t, "sheet-low-"+l.name, w.Canvas().Capture())
	}
}

func TestSheetChecksAsOneTypes(t *testing.T) {
	type change struct{ key, text, problem string }
	var changes []change
	applied, cancelled := 0, 0
	s, w := openSheet(t, plain, fyne.NewSize(620, 720), func(s *Sheet) {
		s.Check = func(key, text string) (string, string) {
			if key == "ratedKVA" && strings.HasPrefix(text, "-") {
				return "must be above 0", "give the nameplate power"
			}
			return "", ""
		}
		s.OnChanged = func(key, text, problem string) { changes = append(changes, change{key, text, problem}) }
		s.OnApply, s.OnCancel = func() { applied++ }, func() { cancelled++ }
	})
	s.FocusField("ratedKVA")
	entry := w.Canvas().Focused().(*fieldEntry)
	if entry.Text != "630" {
		t.Fatalf("the focus is on a field of text %q", entry.Text)
	}
	row := s.row("ratedKVA")
	if !row.help.Visible() || !strings.Contains(row.help.text, "Typical: 25 to 63000 kVA") {
		t.Errorf("help of the focused field: %q", row.help.text)
	}

	entry.SetText("")
	test.Type(entry, "-4")
	want := change{"ratedKVA", "-4", "must be above 0"}
	if got := changes[len(changes)-1]; got != want {
		t.Errorf("told %v, want %v", got, want)
	}
	if got := row.trouble.text; got != "Must be above 0. Give the nameplate power." || !row.trouble.Visible() {
		t.Errorf("under the field: %q", got)
	}
	entry.TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	if applied != 0 {
		t.Error("a sheet with a problem was applied")
	}

	// A decimal comma is told as a point; the field keeps what was typed.
	entry.SetText("")
	test.Type(entry, "12,5")
	if got := changes[len(changes)-1]; got != (change{"ratedKVA", "12.5", ""}) || entry.Text != "12,5" {
		t.Errorf("told %v, the field says %q", got, entry.Text)
	}
	// So does the field's own unit.
	entry.SetText("")
	test.Type(entry, "800 kva")
	if got := changes[len(changes)-1]; got != (change{"ratedKVA", "800", ""}) {
		t.Errorf("told %v", got)
	}
	entry.SetText("")
	if s.Problem("ratedKVA") == "" {
		t.Error("an empty field that is needed passes")
	}
	s.SetText("tap", "abc")
	if got := s.Problem("tap"); got != `"abc" is not a number` {
		t.Errorf("problem %q", got)
	}
	if keys := s.Problems(); len(keys) != 2 || keys[0] != "ratedKVA" || keys[1] != "tap" {
		t.Errorf("problems in %v", keys)
	}

	// Apply goes to the first problem.
	test.Tap(s.apply)
	if f := w.Canvas().Focused(); f != fyne.Focusable(entry) || applied != 0 {
		t.Errorf("apply focused %v and applied %d times", f, applied)
	}
	s.SetText("ratedKVA", "1000")
	s.SetText("tap", "")
	test.Tap(s.apply)
	if applied != 1 {
		t.Errorf("applied %d times", applied)
	}
	s.FocusField("name")
	w.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: fyne.KeyEscape})
	if cancelled != 1 {
		t.Errorf("escape cancelled %d times", cancelled)
	}
}

// Fields that belong to a choice come and go with it; what was typed elsewhere
// and does not pass stays.
func TestSheetFieldsFollowAChoice(t *testing.T) {
	kind, name := "single-tuned", "F1"
	fault := "" // of the name, as the study sees it
	var s *Sheet
	stage(t, plain, fyne.NewSize(620, 720), func() fyne.CanvasObject {
		s = NewSheet("Filter")
		s.Fields = func() []SheetField {
			f := []SheetField{
				{Key: "name", Label: "Name", Kind: FieldText, Text: name, Need: true, Error: fault},
				{Key: "kind", Label: "Kind", Kind: FieldChoice, Text: kind, Choices: []string{"single-tuned", "active"}, Need: true},
			}
			if kind == "active" {
				return append(f, SheetField{Key: "ratedA", Label: "Rating", Unit: "A", Kind: FieldNumber, Need: true})
			}
			return append(f, SheetField{Key: "order", Label: "Order", Kind: FieldNumber, Text: "4.8", Need: true})
		}
		s.Check = func(key, text string) (string, string) {
			if key == "name" && text == "taken" {
				return "is taken", "choose another"
			}
			return "", ""
		}
		s.OnChanged = func(key, text, problem string) {
			switch {
			case problem != "":
			case key == "kind":
				kind = text
			case key == "name":
				name = text
			}
		}
		s.Reload()
		return s
	})
	fault = "is too short"
	s.SetText("name", "taken")
	s.row("kind").input.(*fieldSelect).SetSelected("active")
	if _, ok := s.Text("ratedA"); !ok {
		t.Fatal("the rating did not come with its kind")
	}
	if _, ok := s.Text("order"); ok {
		t.Fatal("the order stayed")
	}
	if text, _ := s.Text("name"); text != "taken" || s.Problem("name") != "is taken" {
		t.Errorf("the name that does not pass became %q, problem %q", text, s.Problem("name"))
	}
	s.SetText("name", "F22")
	s.Reload()
	if text, _ := s.Text("name"); text != "F22" || s.Problem("name") != "is too short" {
		t.Errorf("after a good text the field shows %q, problem %q", text, s.Problem("name"))
	}
}

func TestSheetOrigin(t *testing.T) {
	var told []string
	s, w := openSheet(t, plain, fyne.NewSize(620, 720), func(s *Sheet) {
		s.OnOrigin = func(key, origin, note string) { told = append(told, key+"|"+origin+"|"+note) }
	})
	row := s.row("tap")
	if e := row.input.(*fieldEntry); e.TextStyle.Italic {
		t.Error("an unstated value stands in italics")
	}
	s.FocusField("tap")
	w.Canvas().Focus(row.origin)
	w.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: fyne.KeySpace})
	if w.Canvas().Overlays().Top() == nil {
		t.Fatal("the origin's menu did not open")
	}
	w.Canvas().Overlays().Remove(w.Canvas().Overlays().Top())
	row.setOrigin(OriginAssumed)
	if e := row.input.(*fieldEntry); !e.TextStyle.Italic {
		t.Error("an assumed value does not stand in italics")
	}
	if !row.note.Visible() {
		t.Fatal("there is no place for the note")
	}
	test.Type(row.note, "usual")
	if got := told[len(told)-1]; got != "tap|assumed|usual" || told[0] != "tap|assumed|" {
		t.Errorf("told %q", told)
	}
}

func TestSheetControls(t *testing.T) {
	got := map[string]string{}
	s, w := openSheet(t, plain, fyne.NewSize(620, 720), func(s *Sheet) {
		s.OnChanged = func(key, text, problem string) { got[key] = text }
	})
	s.row("closed").input.(*Switch).TypedRune(' ')
	s.row("replaces").input.(*fieldSet).boxes[0].TypedRune(' ')
	s.row("skin").input.(*fieldSelect).SetSelected("none")
	if got["closed"] != "false" || got["replaces"] != "M1\nM2" || got["skin"] != "none" {
		t.Errorf("told %v", got)
	}
	options := s.row("skin").input.(*fieldSelect).Options
	if len(options) != 3 || options[0] != "(round)" {
		t.Errorf("options %q", options)
	}
	cell := s.row("spectrum").input.(*LinesEditor).rows[2].cells[0]
	w.Canvas().Focus(cell)
	test.Type(cell, "11")
	if got["spectrum"] != "5\t20\t180\n7\t14\t0\n11\t\t" {
		t.Errorf("told %q", got["spectrum"])
	}
	if p := s.Problem("spectrum"); p != "row 3: Current is missing." {
		t.Errorf("problem %q", p)
	}
	// Tabbing through the sheet reaches every field and ends.
	w.Canvas().Unfocus()
	seen := map[fyne.Focusable]bool{}
	for range 100 {
		test.FocusNext(w.Canvas())
		seen[w.Canvas().Focused()] = true
	}
	for _, row := range s.rows {
		if !seen[row.focusable()] {
			t.Errorf("field %s is not reached by tab", row.field.Key)
		}
	}
	if !seen[s.apply] || !seen[s.cancel] {
		t.Error("the buttons are not reached by tab")
	}
}

// Typing into a field far down keeps it in view.
func TestSheetScrollsToFocus(t *testing.T) {
	s, w := openSheet(t, plain, fyne.NewSize(500, 300), nil)
	s.FocusField("spectrum")
	row := s.row("spectrum")
	if top := row.Position().Y - s.scroll.Offset.Y; top < 0 || top > s.scroll.Size().Height/2 {
		t.Errorf("the field is at %g of a view of %g", top, s.scroll.Size().Height)
	}
	s.FocusField("name")
	if s.scroll.Offset.Y != 0 {
		t.Errorf("scrolled to %g", s.scroll.Offset.Y)
	}
	// The wheel scrolls the form over an entry too.
	at := fyne.CurrentApp().Driver().AbsolutePositionForObject(s.row("name").input)
	test.Scroll(w.Canvas(), at.AddXY(20, 10), 0, -40)
	if s.scroll.Offset.Y != 40 {
		t.Errorf("the wheel over an entry scrolled to %g", s.scroll.Offset.Y)
	}
}

func BenchmarkSheetTyping(b *testing.B) {
	test.NewTempApp(b)
	fyne.CurrentApp().Settings().SetTheme(NewTheme(false, 1))
	s := NewSheet("Transformer")
	s.Fields = someFields
	s.OnChanged = func(string, string, string) { s.SetNotice("") }
	s.Reload()
	w := test.NewTempWindow(b, s)
	w.Resize(fyne.NewSize(620, 720))
	entry := s.row("ratedKVA").input.(*fieldEntry)
	b.ResetTimer()
	for i := range b.N {
		entry.SetText([]string{"630", "631"}[i%2])
	}
}
