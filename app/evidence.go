//go:build !headless

package main

import (
	"slices"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
	"quietbus/study/figure"
	"quietbus/widgets"
)

// The pages of the evidence: four figures at once, each alone, and the duties.
const (
	allFour          = "All four"
	dutyName         = "Duty"
	combinationsName = "Combinations"
)

var (
	figureNames   = []string{"Spectrum", "Waveform", "Impedance", "Margins"}
	evidenceNames = append(append([]string{allFour}, figureNames...), dutyName, combinationsName)
)

// evidencePart is the figure side: four panels at once, or one alone.
type evidencePart struct {
	w      *Window
	turned string // which of evidenceNames is shown

	about  *widget.Select
	tabs   *tabRow
	grid   *fyne.Container
	body   *fyne.Container
	panels map[string]*panel // small ones, in the grid
	single *panel            // the one shown alone
	duty   *dutyPage
	sets   *combinationsPage
}

func newEvidencePart(w *Window) *evidencePart {
	e := &evidencePart{w: w, turned: allFour, panels: map[string]*panel{}}
	e.about = widget.NewSelect(nil, e.chosen)
	e.tabs = newTabRow(evidenceNames...)
	e.tabs.turned = e.turn
	e.grid = container.New(layout.NewGridLayoutWithColumns(2))
	for _, name := range figureNames {
		p := newPanel(func(c draw.Canvas) []widgets.Hot { return e.draw(name, c) })
		e.wire(p.picture, name)
		p.picture.OnDoubleTapped = func(widgets.Hot) { e.turn(name) }
		e.panels[name] = p
		e.grid.Add(p.body)
	}
	e.single = newPanel(func(c draw.Canvas) []widgets.Hot { return e.draw(e.turned, c) })
	e.wire(e.single.picture, "")
	e.single.picture.OnDoubleTapped = func(widgets.Hot) { e.turn(allFour) }
	e.duty = newDutyPage()
	e.sets = newCombinationsPage(w)
	head := container.NewBorder(nil, nil, nil, container.NewStack(wide(190), e.about), e.tabs.narrowRow())
	e.body = container.NewBorder(head, nil, nil, nil, container.NewStack(e.grid, e.single.body, e.duty.body, e.sets.body))
	e.single.body.Hide()
	e.sets.body.Hide()
	return e
}

// A panel is a figure under its title.
type panel struct {
	title   *widget.Label
	picture *widgets.Picture
	body    *fyne.Container
}

func newPanel(f func(draw.Canvas) []widgets.Hot) *panel {
	p := &panel{title: widget.NewLabel(""), picture: widgets.NewPicture(f)}
	p.title.SizeName = theme.SizeNameCaptionText
	p.title.TextStyle.Bold = true
	p.title.Truncation = fyne.TextTruncateEllipsis
	p.picture.Least = fyne.NewSize(240, 120)
	p.body = container.NewBorder(p.title, nil, nil, nil, p.picture)
	return p
}

// show draws the panel anew and returns how long the drawing took.
func (p *panel) show(title string) time.Duration {
	p.title.SetText(title)
	p.picture.Refresh()
	return p.picture.LastDraw()
}

func (e *evidencePart) object() fyne.CanvasObject { return e.body }

// wire gives a panel its reactions.
func (e *evidencePart) wire(p *widgets.Picture, name string) {
	p.OnTapped = func(h widgets.Hot) {
		if h.Role == "bus" || h.Role == "item" {
			e.w.pick(selectionOf(e.w.project.Study(), h.ID))
		}
	}
	p.OnSecondary = func(_ widgets.Hot, at fyne.Position) {
		which := name
		if which == "" {
			which = e.turned
		}
		e.w.figureMenu(e.figure(which), at)
	}
	p.OnFault = func(err error) { fyne.LogError("figure", err) }
}

// turn shows one figure alone, or all four.
func (e *evidencePart) turn(name string) {
	e.turned = name
	e.tabs.show(name)
	page := e.single.body
	switch name {
	case allFour:
		page = e.grid
	case dutyName:
		page = e.duty.body
	case combinationsName:
		page = e.sets.body
	}
	for _, other := range []*fyne.Container{e.grid, e.single.body, e.duty.body, e.sets.body} {
		if other != page {
			other.Hide()
		}
	}
	page.Show()
	e.refresh()
}

// refresh draws what is in view from the newest picture, and returns how long
// the drawing took.
func (e *evidencePart) refresh() time.Duration {
	e.offer()
	var took time.Duration
	if e.turned == combinationsName || e.sets.small.body.Visible() {
		took = e.sets.refresh()
	}
	switch e.turned {
	case allFour:
	case combinationsName:
		return took
	case dutyName:
		e.duty.show(e.w.picture)
		return 0
	default:
		return took + e.single.show(e.title(e.turned))
	}
	for _, name := range figureNames {
		took += e.panels[name].show(e.title(name))
	}
	return took
}

// title returns what stands above a figure.
func (e *evidencePart) title(name string) string {
	if f := e.figure(name); f != nil && e.w.picture != nil && e.w.picture.After != nil {
		return f.Title
	}
	return name
}

// offer lists what the evidence can be about.
func (e *evidencePart) offer() {
	options, current := subjects(e.w.project.Study(), e.w.picture, e.w.sel)
	if !slices.Equal(options, e.about.Options) {
		e.about.Options = options
	}
	if e.about.Selected != current {
		e.about.Selected = current // without telling OnChanged
	}
	e.about.Refresh()
}

// The words before a subject in the list.
const (
	voltageOf = "Voltage of "
	currentOf = "Current of "
)

// subjects returns the entries of the list, and the one that is selected.
func subjects(s *study.Study, p *Picture, sel selection) (options []string, current string) {
	for i := range s.Buses {
		options = append(options, voltageOf+s.Buses[i].Name)
	}
	if sel.Bus != "" {
		current = voltageOf + sel.Bus
	}
	if p != nil && p.After != nil {
		for i := range p.After.Buses[min(len(s.Buses), len(p.After.Buses)):] {
			options = append(options, voltageOf+p.After.Buses[len(s.Buses)+i].Name)
		}
		for i := range p.After.Elements {
			options = append(options, currentOf+p.After.Elements[i].Name)
		}
	}
	if sel.Element != "" {
		current = currentOf + sel.Element
	}
	return options, current
}

// chosen follows the list.
func (e *evidencePart) chosen(option string) {
	s := e.w.project.Study()
	switch {
	case len(option) > len(voltageOf) && option[:len(voltageOf)] == voltageOf:
		e.w.pick(selection{Bus: option[len(voltageOf):]})
	case len(option) > len(currentOf) && option[:len(currentOf)] == currentOf:
		name := option[len(currentOf):]
		sel := selectionOf(s, name)
		sel.Element = name // a measure that carries current, too
		e.w.pick(sel)
	}
}

// figure returns a figure of the newest picture; without one the figure says in
// a sentence that there is nothing to show yet.
func (e *evidencePart) figure(name string) *figure.Figure {
	var before, after *study.Outcome
	var scanBefore, scanAfter []*study.ScanResult
	if p := e.w.picture; p != nil && p.After != nil {
		before, after = beforeOf(p), p.After
		scanBefore, scanAfter = e.scanBefore(), scans(p.ScanAfter)
	}
	sel := figure.Selection{Bus: e.w.sel.Bus, Element: e.w.sel.Element}
	if sel.Bus == "" && (name == "Spectrum" || name == "Waveform") {
		return nil
	}
	switch name {
	case "Spectrum":
		return figure.Spectrum(before, after, sel)
	case "Waveform":
		return figure.Waveform(before, after, sel)
	case "Impedance":
		return figure.Impedance(scanBefore, scanAfter, nil)
	case "Margins":
		return figure.Margins(before, after)
	}
	return nil
}

// scanBefore returns the scan without measures, none while none is on: it would
// cover the other.
func (e *evidencePart) scanBefore() []*study.ScanResult {
	if p := e.w.picture; len(p.On) > 0 {
		return scans(p.ScanBefore)
	}
	return nil
}

func scans(s *study.ScanResult) []*study.ScanResult {
	if s == nil {
		return nil
	}
	return []*study.ScanResult{s}
}

// draw draws a figure in a panel.
func (e *evidencePart) draw(name string, c draw.Canvas) []widgets.Hot {
	f := e.figure(name)
	if f == nil {
		return nil
	}
	return hots(f.Draw(c, e.w.look.style()))
}

// hots translates the places of a figure for a panel.
func hots(in []figure.Hot) []widgets.Hot {
	out := make([]widgets.Hot, len(in))
	for i, h := range in {
		out[i] = widgets.Hot{Rect: h.Rect, ID: h.ID, Role: h.Role, Text: h.Text}
	}
	return out
}
