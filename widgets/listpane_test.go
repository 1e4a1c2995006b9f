package widgets

import (
	"fmt"
	"strings"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"
)

func someGroups() []ListGroup {
	return []ListGroup{
		{Kind: "supply", Title: "Supplies", Add: "Add", Items: []ListItem{{ID: "Grid", Name: "Grid", Detail: "on MV, 250 MVA, X/R 10"}}},
		{Kind: "bus", Title: "Buses", Add: "Add", Items: []ListItem{
			{ID: "MV", Name: "MV", Detail: "11 kV"}, {ID: "LV1", Name: "LV1", Detail: "0.4 kV"},
			{ID: "LV2", Name: "A bus with a name that goes on and on beyond the width of the pane", Detail: "0.4 kV", Problem: "No supply reaches it; join it to another bus."}}},
		{Kind: "transformer", Title: "Transformers", Add: "Add"},
	}
}

func showList(t *testing.T, l look, size fyne.Size) (*ListPane, fyne.Window, *[]string) {
	t.Helper()
	told := new([]string)
	say := func(what string) func(string) { return func(id string) { *told = append(*told, what+" "+id) } }
	var p *ListPane
	w := stage(t, l, size, func() fyne.CanvasObject {
		p = NewListPane()
		p.OnSelected, p.OnOpened, p.OnRemoved, p.OnAdd = say("select"), say("open"), say("remove"), say("add")
		p.SetGroups(someGroups())
		return p
	})
	return p, w, told
}

func TestListPaneLooks(t *testing.T) {
	for _, l := range looks {
		p, w, _ := showList(t, l, fyne.NewSize(340*l.size, 360*l.size))
		p.Select("LV1")
		test.FocusNext(w.Canvas())
		assertFits(t, l.name, w)
		golden(t, "list-"+l.name, w.Canvas().Capture())
	}
}

func TestListPaneKeyboard(t *testing.T) {
	p, w, told := showList(t, plain, fyne.NewSize(340, 400))
	test.FocusNext(w.Canvas())
	if w.Canvas().Focused() != fyne.Focusable(p) {
		t.Fatalf("the focus went to %T", w.Canvas().Focused())
	}
	for _, name := range []fyne.KeyName{fyne.KeyDown, fyne.KeyDown, fyne.KeyReturn, fyne.KeyInsert, fyne.KeyEnd, fyne.KeyDelete, fyne.KeyHome, fyne.KeyUp, fyne.KeyEnter} {
		w.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: name})
	}
	want := "select Grid, select MV, open MV, add bus, select LV2, remove LV2, select Grid, open Grid"
	if got := strings.Join(*told, ", "); got != want {
		t.Errorf("told %q,\nwant %q", got, want)
	}
	// Every add button is reached by tab, and nothing else.
	adds := 0
	for range 3 {
		test.FocusNext(w.Canvas())
		if b, ok := w.Canvas().Focused().(*quietButton); ok {
			adds++
			b.TypedKey(&fyne.KeyEvent{Name: fyne.KeySpace})
		}
	}
	if adds != 3 || (*told)[len(*told)-1] != "add transformer" {
		t.Errorf("tab reached %d buttons, told %q", adds, *told)
	}
}

func TestListPaneTapsAndKeepsSelection(t *testing.T) {
	p, w, told := showList(t, plain, fyne.NewSize(340, 400))
	height := listRowHeight(p)
	at := func(line int) fyne.Position { return fyne.NewPos(60, (float32(line)+0.5)*(height+4)) }
	test.TapCanvas(w.Canvas(), at(4)) // LV1: heading, Grid, heading, MV, LV1
	test.TapCanvas(w.Canvas(), at(4))
	if got := strings.Join(*told, ", "); got != "select LV1, open LV1" {
		t.Fatalf("told %q", got)
	}
	groups := someGroups()
	groups[0].Items = append(groups[0].Items, ListItem{ID: "Second", Name: "Second"})
	p.SetGroups(groups)
	if p.Selected() != "LV1" {
		t.Errorf("the selection went to %q", p.Selected())
	}
	groups[1].Items = groups[1].Items[:1]
	p.SetGroups(groups)
	if p.Selected() != "" {
		t.Errorf("an item that is gone is selected: %q", p.Selected())
	}
	p.Select("no such")
	p.SetGroups(nil)
	for _, name := range []fyne.KeyName{fyne.KeyDown, fyne.KeyUp, fyne.KeyReturn, fyne.KeyDelete, fyne.KeyInsert, fyne.KeyHome, fyne.KeyEnd} {
		p.TypedKey(&fyne.KeyEvent{Name: name})
	}
	if len(*told) != 2 {
		t.Errorf("an empty pane told %q", (*told)[2:])
	}
}

func BenchmarkListPane10000(b *testing.B) {
	test.NewTempApp(b)
	groups := someGroups()
	for i := range 10000 {
		id := fmt.Sprint("Bus ", i)
		groups[1].Items = append(groups[1].Items, ListItem{ID: id, Name: id, Detail: "0.4 kV"})
	}
	p := NewListPane()
	w := test.NewTempWindow(b, p)
	w.Resize(fyne.NewSize(340, 600))
	b.ResetTimer()
	for range b.N {
		p.SetGroups(groups)
	}
}
