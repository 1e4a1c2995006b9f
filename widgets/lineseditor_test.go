package widgets

import (
	"fmt"
	"reflect"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/test"
)

var spectrumColumns = []Column{{Label: "Order"}, {Label: "Current", Unit: "%"}, {Label: "Angle", Unit: "deg", Optional: true}}

// showLines shows an editor that wants each order once.
func showLines(t *testing.T, l look, size fyne.Size) (*LinesEditor, fyne.Window, *[][]string) {
	t.Helper()
	told := new([][]string)
	var e *LinesEditor
	w := stage(t, l, size, func() fyne.CanvasObject {
		e = NewLinesEditor(spectrumColumns...)
		e.Check = func(rows [][]string) []string {
			problems := make([]string, len(rows))
			seen := map[string]int{}
			for i, row := range rows {
				if first, ok := seen[row[0]]; ok {
					problems[i] = fmt.Sprintf("Order %s is in row %d already.", row[0], first)
				} else {
					seen[row[0]] = i + 1
				}
			}
			return problems
		}
		e.OnChanged = func(rows [][]string) { *told = rows }
		return container.NewVBox(e)
	})
	return e, w, told
}

func TestLinesEditorLooks(t *testing.T) {
	for _, l := range looks {
		e, w, _ := showLines(t, l, fyne.NewSize(520*l.size, 300*l.size))
		e.SetRows([][]string{{"5", "20.1", "180"}, {"7", "14", ""}, {"5", "3", "0"}, {"11", "", ""}, {"x", "3", ""}})
		settle(w)
		assertFits(t, l.name, w)
		golden(t, "lines-"+l.name, w.Canvas().Capture())
		e, w, _ = showLines(t, l, fyne.NewSize(330*l.size, 380*l.size))
		e.SetRows([][]string{{"5", "20.1", "180"}, {"7", "14", ""}, {"5", "3", "0"}})
		settle(w)
		assertFits(t, l.name+" narrow", w)
	}
}

func TestLinesEditorPaste(t *testing.T) {
	e, w, told := showLines(t, plain, fyne.NewSize(520, 400))
	e.SetRows([][]string{{"5", "20", "180"}})
	w.Canvas().Focus(e.rows[1].cells[0])
	clip := fyne.CurrentApp().Clipboard()
	clip.SetContent("Order\tCurrent\tAngle\n7\t14,5\t0\n11\t9\t\n13\t7,25\t-30\n")
	e.rows[1].cells[0].TypedShortcut(&fyne.ShortcutPaste{Clipboard: clip})
	want := [][]string{{"5", "20", "180"}, {"7", "14.5", "0"}, {"11", "9", ""}, {"13", "7.25", "-30"}}
	if !reflect.DeepEqual(*told, want) || !reflect.DeepEqual(e.Rows(), want) {
		t.Errorf("told %q, want %q", *told, want)
	}
	if n := len(e.rows); n != 5 {
		t.Errorf("%d rows are shown, want 4 and an empty one", n)
	}
	// A column pasted over a column.
	clip.SetContent("21\n15")
	e.rows[0].cells[1].TypedShortcut(&fyne.ShortcutPaste{Clipboard: clip})
	if got := *told; got[0][1] != "21" || got[1][1] != "15" || got[2][1] != "9" {
		t.Errorf("told %q", got)
	}
	// One value goes to the cell alone, as in any entry.
	clip.SetContent("23")
	e.rows[4].cells[0].TypedShortcut(&fyne.ShortcutPaste{Clipboard: clip})
	if got := *told; len(got) != 5 || got[4][0] != "23" {
		t.Errorf("told %q", got)
	}
	if p := e.Problems(); p[4] != "Current is missing." || p[3] != "" {
		t.Errorf("problems %q", p)
	}
}

func TestLinesEditorTyping(t *testing.T) {
	e, w, told := showLines(t, plain, fyne.NewSize(520, 400))
	w.Canvas().Focus(e.rows[0].cells[0])
	test.Type(e.rows[0].cells[0], "5")
	if len(e.rows) != 2 {
		t.Fatal("typing into the last row did not add one")
	}
	test.Type(e.rows[0].cells[1], "20,1")
	if !reflect.DeepEqual(*told, [][]string{{"5", "20.1", ""}}) {
		t.Errorf("told %q", *told)
	}
	e.rows[0].cells[0].TypedKey(&fyne.KeyEvent{Name: fyne.KeyReturn})
	if w.Canvas().Focused() != fyne.Focusable(e.rows[1].cells[0]) {
		t.Error("return does not go to the next row")
	}
	test.Type(e.rows[1].cells[0], "5")
	test.Type(e.rows[1].cells[1], "3")
	if p := e.Problems(); p[1] != "Order 5 is in row 1 already." {
		t.Errorf("problems %q", p)
	}
	if tr := e.rows[1].trouble; !tr.Visible() || tr.text != e.Problems()[1] {
		t.Errorf("beside the row stands %q", tr.text)
	}
	// A row that is emptied goes away when the cursor leaves it.
	w.Canvas().Focus(e.rows[0].cells[0])
	e.rows[0].cells[0].SetText("")
	e.rows[0].cells[1].SetText("")
	if !reflect.DeepEqual(*told, [][]string{{"5", "3", ""}}) {
		t.Errorf("told %q", *told)
	}
	w.Canvas().Unfocus()
	if len(e.rows) != 2 || e.rows[0].cells[0].Text != "5" {
		t.Errorf("%d rows stay, the first starts with %q", len(e.rows), e.rows[0].cells[0].Text)
	}
}
