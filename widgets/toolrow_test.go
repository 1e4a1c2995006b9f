package widgets

import (
	"strings"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/test"
	"fyne.io/fyne/v2/theme"
)

func someTools(told *[]string) []Tool {
	tap := func(what string) func() { return func() { *told = append(*told, what) } }
	return []Tool{
		{Label: "Open", Icon: theme.FolderOpenIcon(), Hint: "Open a study (Ctrl+O)", OnTapped: tap("open")},
		{Label: "Save", Icon: theme.DocumentSaveIcon(), Hint: "Save the study (Ctrl+S)", OnTapped: tap("save"), Disabled: true},
		{Label: "Undo", Icon: theme.ContentUndoIcon(), Gap: true, OnTapped: tap("undo")},
		{Label: "Handout", Icon: theme.DocumentPrintIcon(), Gap: true, OnTapped: tap("handout")},
	}
}

func TestToolRowLooks(t *testing.T) {
	for _, l := range looks {
		for _, width := range []float32{600, 200} {
			var told []string
			w := stage(t, l, fyne.NewSize(width*l.size, 80*l.size), func() fyne.CanvasObject {
				status := NewStatusLine()
				status.SetCheck("solution checked: residual 3e-15, power balance 2e-14")
				status.Say("Filter at main board is on; Detune bank B1 went off: both change bank B1")
				return container.NewVBox(NewToolRow(someTools(&told)...), status)
			})
			assertFits(t, l.name, w)
			if width == 600 {
				golden(t, "tools-"+l.name, w.Canvas().Capture())
			}
		}
	}
}

func TestToolRow(t *testing.T) {
	var told []string
	var row *ToolRow
	w := stage(t, plain, fyne.NewSize(600, 40), func() fyne.CanvasObject {
		row = NewToolRow(someTools(&told)...)
		row.OnHint = func(h string) { told = append(told, "hint "+h) }
		return container.NewVBox(row)
	})
	middle := func(label string) fyne.Position {
		o := row.Button(label)
		return fyne.CurrentApp().Driver().AbsolutePositionForObject(o).AddXY(o.Size().Width/2, o.Size().Height/2)
	}
	test.TapCanvas(w.Canvas(), middle("Open"))
	test.TapCanvas(w.Canvas(), middle("Save")) // disabled
	test.MoveMouse(w.Canvas(), middle("Open"))
	test.MoveMouse(w.Canvas(), middle("Undo"))
	if got := strings.Join(told, ", "); got != "open, hint Open a study (Ctrl+O), hint " {
		t.Errorf("told %q", got)
	}
	if row.Button("Print") != nil {
		t.Error("a tool that is not there has a button")
	}
	// Too narrow: the rest is under More, and works from there.
	w.Resize(fyne.NewSize(180, 40))
	if row.Button("Handout") != fyne.CanvasObject(row.more.quietButton) {
		t.Fatal("the tool that does not fit is not under More")
	}
	told = nil
	test.TapCanvas(w.Canvas(), middle("Handout"))
	menu := w.Canvas().Overlays().Top()
	if menu == nil {
		t.Fatal("More opens no menu")
	}
	last := shownTexts(menu, w.Canvas().Size())
	if got := last[len(last)-1].text; got != "Handout" {
		t.Errorf("the menu ends with %q", got)
	}
	// What is shown is the head of the row: a short tool does not jump a long one.
	row.SetTools([]Tool{{Label: "A"}, {Label: strings.Repeat("long ", 10)}, {Label: "B"}})
	if row.buttons[1].Visible() || row.buttons[2].Visible() || !row.buttons[0].Visible() {
		t.Error("the tools shown are not the first ones")
	}
	next := someTools(&told)
	next[1].Disabled = false
	row.SetTools(next)
	w.Canvas().Overlays().Remove(menu)
	w.Resize(fyne.NewSize(600, 40))
	test.TapCanvas(w.Canvas(), middle("Save"))
	if len(told) != 1 || told[0] != "save" {
		t.Errorf("told %q", told)
	}
}

func TestStatusLineIsOneLine(t *testing.T) {
	var s *StatusLine
	w := stage(t, plain, fyne.NewSize(400, 30), func() fyne.CanvasObject {
		s = NewStatusLine()
		return container.NewVBox(s)
	})
	height := s.MinSize().Height
	s.SetCheck(strings.Repeat("solution checked ", 20))
	s.Say(strings.Repeat("a measure went off ", 20))
	settle(w)
	assertFits(t, "status", w)
	if s.MinSize().Height != height {
		t.Error("the line grew")
	}
	texts := shownTexts(s, s.Size())
	if len(texts) != 2 || !strings.HasSuffix(texts[0].text, "...") || !strings.HasSuffix(texts[1].text, "...") {
		t.Errorf("shown %v", texts)
	}
	if check, last := s.Texts(); !strings.HasPrefix(check, "solution") || !strings.HasPrefix(last, "a measure") {
		t.Error("the texts were changed")
	}
}
