//go:build !headless

package main

import (
	"maps"
	"math"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/widget"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
	"quietbus/study/figure"
	"quietbus/widgets"
)

// linePart is the single-line: a click selects, a click on a switch flips, a
// double click opens the sheet, a drag moves a bus.
type linePart struct {
	w       *Window
	panel   *widgets.Picture
	figure  *figure.Figure
	layout  *figure.Layout
	base    *study.Study // what layout was made for, with drawing
	drawing map[string]study.Point
	moved   string // bus that is being dragged
	movedTo study.Point
}

func newLinePart(w *Window) *linePart {
	l := &linePart{w: w}
	l.panel = widgets.NewPicture(func(c draw.Canvas) []widgets.Hot {
		if l.figure == nil {
			return nil
		}
		return hots(l.figure.Draw(c, w.look.lineStyle()))
	})
	p := l.panel
	p.Zoomable = true
	p.Least = fyne.NewSize(320, 240)
	p.OnTapped = func(h widgets.Hot) {
		switch {
		case h.Role == "switch":
			w.flip(h.ID)
		case h.ID != "":
			w.pick(selectionOf(w.project.Study(), h.ID))
		}
	}
	p.OnDoubleTapped = func(h widgets.Hot) {
		switch {
		case h.Zero():
			p.Fit()
		case h.Role == "switch":
			w.flip(h.ID)
		default:
			w.edit(h.ID)
		}
	}
	p.OnSecondary = l.menu
	p.CanDrag = func(h widgets.Hot) bool { return h.Role == "bus" }
	p.OnDragged = l.drag
	p.OnDragEnd = func(widgets.Hot) { l.drop() }
	p.OnFault = func(err error) { fyne.LogError("single-line", err) }
	return l
}

func (l *linePart) object() fyne.CanvasObject { return l.panel }

// reset shows the whole drawing of another study.
func (l *linePart) reset() {
	l.moved = ""
	l.panel.Fit()
}

// resonances returns those that the impedance at the selected bus shows.
func (l *linePart) resonances() []study.Peak {
	if p := l.w.picture; p != nil && p.ScanAfter != nil {
		return p.ScanAfter.Peaks
	}
	return nil
}

// refresh draws the project as it is now with the newest results, and returns
// how long the drawing took.
func (l *linePart) refresh() time.Duration {
	s := l.w.project.Study()
	if l.moved != "" {
		s = withPlace(s, l.moved, l.movedTo)
	}
	if base := l.w.project.Base(); l.layout == nil || base != l.base || !maps.Equal(s.Drawing, l.drawing) {
		l.layout, l.base, l.drawing = figure.Tidy(s), base, s.Drawing
	}
	var before, after *study.Outcome
	if p := l.w.picture; p != nil {
		before, after = p.Before, p.After
	}
	l.figure = figure.SingleLine(s, before, after, l.layout, figure.View{Selected: l.w.sel.item(), Resonances: l.resonances()})
	l.panel.Natural = l.figure.Size
	if len(s.Buses) == 0 {
		l.panel.Natural = vg.Point{} // a sentence, at the panel's own size
	}
	l.panel.Refresh()
	return l.panel.LastDraw()
}

// withPlace returns a copy of the study, sharing all but the drawing, with a
// bus at a place.
func withPlace(s *study.Study, bus string, at study.Point) *study.Study {
	out := *s
	out.Drawing = map[string]study.Point{bus: at}
	for name, p := range s.Drawing {
		if name != bus {
			out.Drawing[name] = p
		}
	}
	return &out
}

// drag moves a bus by a step of the pointer.
func (l *linePart) drag(h widgets.Hot, dx, dy vg.Length) {
	if l.moved != h.ID {
		b := l.layout.Bus(h.ID)
		if b == nil {
			return
		}
		l.moved, l.movedTo = h.ID, study.Point{X: b.X, Y: b.Y}
	}
	l.movedTo.X += float64(dx / figure.Step)
	l.movedTo.Y -= float64(dy / figure.Step)
	l.refresh()
}

// drop makes the move an edit, on the grid.
func (l *linePart) drop() {
	if l.moved == "" {
		return
	}
	bus, at := l.moved, l.movedTo
	l.moved = ""
	at.X, at.Y = max(math.Round(2*at.X)/2, 0), max(math.Round(2*at.Y)/2, 3)
	l.w.project.Arrange("Move "+bus, withPlace(l.w.project.Study(), bus, at).Drawing)
	l.w.changed()
	l.refresh()
}

// tidy forgets every place given by hand.
func (w *Window) tidy() {
	if len(w.project.Study().Drawing) == 0 {
		w.line.panel.Fit()
		return
	}
	w.project.Arrange("Tidy the single-line", nil)
	w.changed()
	w.line.reset()
	w.line.refresh()
}

// menu offers what can be done at a place.
func (l *linePart) menu(h widgets.Hot, at fyne.Position) {
	w := l.w
	var items []*fyne.MenuItem
	if h.ID != "" {
		items = append(items,
			item("Edit "+h.ID+"...", nil, func() { w.edit(h.ID) }),
			item("Remove "+h.ID, nil, func() { w.remove(h.ID) }))
		add := item("Add at "+h.ID, nil, nil)
		if h.Role == "bus" || h.Role == "place" {
			var kinds []*fyne.MenuItem
			for _, k := range study.Kinds() {
				kinds = append(kinds, item(capital(k.Singular)+"...", nil, func() { w.add(k.Kind, h.ID) }))
			}
			add.ChildMenu = fyne.NewMenu("", kinds...)
			items = append(items, add)
		}
		items = append(items, fyne.NewMenuItemSeparator())
	}
	items = append(items, item("Show all", nil, l.panel.Fit), item("Tidy", nil, w.tidy),
		item("Save this figure...", nil, func() { w.saveFigure(l.paper()) }))
	widget.ShowPopUpMenuAtPosition(fyne.NewMenu("", items...), w.win.Canvas(), at)
}

// paper returns the single-line as it is printed, without switches.
func (l *linePart) paper() *figure.Figure {
	p := l.w.picture
	if p == nil {
		return l.figure
	}
	return figure.SingleLine(l.w.project.Study(), p.Before, p.After, l.layout, figure.View{Plain: true, Resonances: l.resonances()})
}
