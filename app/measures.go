//go:build !headless

package main

import (
	"fmt"
	"slices"
	"strings"

	"fyne.io/fyne/v2"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
	"quietbus/study/figure"
	"quietbus/widgets"
)

// measuresPart is the row of measure cards.
type measuresPart struct {
	w     *Window
	row   *widgets.MeasureRow
	worth *Worths
	shown []widgets.Measure
}

func newMeasuresPart(w *Window) *measuresPart {
	p := &measuresPart{w: w, row: widgets.NewMeasureRow()}
	p.row.OnChanged = func(name string, _ bool) { w.flip(name) }
	p.row.OnEdit = w.edit
	p.row.OnTapped = func(name string) { w.pick(selectionOf(w.project.Study(), name)) }
	p.row.OnAdd = func() { w.add(study.KindMeasure, w.sel.Bus) }
	return p
}

func (p *measuresPart) object() fyne.CanvasObject { return p.row }

// refresh shows the measures as the project has them now, with what the newest
// picture knows about them.
func (p *measuresPart) refresh() {
	s := p.w.project.Study()
	on := s.OnMeasures()
	var cards []widgets.Measure
	for i := range s.Measures {
		m := &s.Measures[i]
		c := widgets.Measure{ID: m.Name, Name: m.Name, Kind: kindWord(m.Kind), Place: placeOf(m), Facts: facts(s, m, p.w.picture),
			Worth: p.worth.text(m.Name, m.On), On: m.On, Mark: p.w.mark(i, m.On)}
		if m.Cost > 0 {
			c.Cost = "Cost " + grouped(m.Cost)
		}
		if !m.On {
			if clash := clashWith(s, on, m.Name); clash != "" {
				c.Worth = clash
			}
		}
		cards = append(cards, c)
	}
	p.set(cards)
}

// set shows cards, and touches only those that changed: laying text out is what
// a card costs.
func (p *measuresPart) set(cards []widgets.Measure) {
	same := slices.EqualFunc(cards, p.shown, func(a, b widgets.Measure) bool { return a.ID == b.ID })
	if !same {
		p.row.SetMeasures(cards)
	}
	for i, c := range cards {
		if same && !sameCard(c, p.shown[i]) {
			p.row.Card(c.ID).SetMeasure(c)
		}
	}
	p.shown = cards
}

// sameCard compares what two cards show. The mark is the same for the same
// place in the list and switch position.
func sameCard(a, b widgets.Measure) bool {
	return a.ID == b.ID && a.Name == b.Name && a.Kind == b.Kind && a.Place == b.Place && a.Facts == b.Facts &&
		a.Cost == b.Cost && a.Worth == b.Worth && a.Conflict == b.Conflict && a.On == b.On
}

// repaint draws every card anew, in another palette.
func (p *measuresPart) repaint() {
	p.shown = nil
	p.refresh()
}

// clashWith says what goes off when a measure is switched on, "" for nothing.
func clashWith(s *study.Study, on []string, name string) string {
	_, taken := s.Switched(on, name)
	var words []string
	for _, c := range taken {
		other := c.A
		if other == name {
			other = c.B
		}
		words = append(words, fmt.Sprintf("%s (%s)", other, c.Reason))
	}
	if len(words) == 0 {
		return ""
	}
	return "Takes the place of " + strings.Join(words, ", ")
}

// flip turns a measure's switch. What cannot be on with it goes off, and the
// status line says so.
func (w *Window) flip(name string) {
	s := w.project.Study()
	was := s.OnMeasures()
	next, taken := s.Switched(was, name)
	word := "on"
	if slices.Contains(was, name) {
		word = "off"
	}
	w.project.Switch(fmt.Sprintf("%s %s", name, word), next)
	text := fmt.Sprintf("%s is %s", name, word)
	for _, c := range taken {
		other := c.A
		if other == name {
			other = c.B
		}
		text += fmt.Sprintf("; %s went off: %s", other, c.Reason)
	}
	w.status.Say(text)
	w.changed()
}

// places returns the middle of each card's switch in pixels of the window, of
// those that are in view.
func (p *measuresPart) places() map[string][2]int {
	at := map[string][2]int{}
	canvas := p.w.win.Canvas()
	driver := fyne.CurrentApp().Driver()
	inset, _ := canvas.InteractiveArea() // below the menu bar
	for _, m := range p.w.project.Study().Measures {
		card := p.row.Card(m.Name)
		if card == nil {
			continue
		}
		pos, size := driver.AbsolutePositionForObject(card.Switch()), card.Switch().Size()
		x, y := inset.X+pos.X+size.Width/2, inset.Y+pos.Y+size.Height/2
		if x < 0 || x > canvas.Size().Width {
			continue
		}
		at[m.Name] = [2]int{int(x * canvas.Scale()), int(y * canvas.Scale())}
	}
	return at
}

// mark draws a measure's geometric mark, the same as on the single-line.
func (w *Window) mark(i int, on bool) func(draw.Canvas) {
	return func(c draw.Canvas) {
		ink := w.look.palette().Muted
		if on {
			ink = w.look.palette().After
		}
		figure.MeasureMark(c, i, c.Center(), (c.Max.X-c.Min.X)*0.45, ink, on)
	}
}

// placeOf returns where a measure stands, or what it acts on.
func placeOf(m *study.Measure) string {
	if m.Bus != "" {
		return m.Bus
	}
	return m.Target
}

// facts says what a measure is made of: its components when it is on, else its
// ratings.
func facts(s *study.Study, m *study.Measure, p *Picture) string {
	if p != nil && p.After != nil {
		for i := range p.After.Measures {
			if r := &p.After.Measures[i]; r.Name == m.Name {
				if text := componentText(r); text != "" {
					return text
				}
			}
		}
	}
	if m.Kind == study.RemoveBank {
		if _, bank := s.Find(m.Target); bank != nil {
			return summary(bank)
		}
	}
	text, _, _ := strings.Cut(measureSummary(m), " at "+placeOf(m))
	return text
}

// componentText lists C, L and R of a measure, and its load against its rating.
func componentText(r *study.MeasureResult) string {
	var parts []string
	for _, c := range r.Components {
		if c.Part == "reactor resistance" {
			continue // the winding's own resistance: it follows from Q
		}
		parts = append(parts, c.Symbol+" "+engineering(c))
	}
	if d := r.Duty; d != nil && d.CurrentA > 0 {
		parts = append(parts, dutyText(r.Kind, d, r.Saturated))
	}
	return strings.Join(parts, ", ")
}

// dutyText sets a measure's current against its rating: an active filter's own,
// else that of its capacitors, which standards allow to be passed for a part.
func dutyText(kind string, d *study.Duty, saturated bool) string {
	switch {
	case saturated:
		return fmt.Sprintf("all of its %s A: saturated", short(d.RatedA))
	case d.RatedA <= 0:
		return short(d.CurrentA) + " A"
	case kind == study.ActiveFilter:
		return fmt.Sprintf("%s of its %s A", short(d.CurrentA), short(d.RatedA))
	}
	return fmt.Sprintf("%s A (%s %% of rated)", short(d.CurrentA), short(100*d.CurrentA/d.RatedA))
}
