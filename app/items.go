//go:build !headless

package main

import (
	"fyne.io/fyne/v2"

	"quietbus/study"
	"quietbus/widgets"
)

// itemsPart lists every item of the study by kind, with buttons to add, edit
// and remove: a study can be built from it alone.
type itemsPart struct {
	w    *Window
	pane *widgets.ListPane
}

func newItemsPart(w *Window) *itemsPart {
	p := &itemsPart{w: w, pane: widgets.NewListPane()}
	p.pane.OnSelected = func(name string) { w.pick(selectionOf(w.project.Study(), name)) }
	p.pane.OnOpened = w.edit
	p.pane.OnRemoved = w.remove
	p.pane.OnAdd = func(kind string) { w.add(study.Kind(kind), "") }
	return p
}

func (p *itemsPart) object() fyne.CanvasObject { return p.pane }

// refresh lists the study anew, each item with what is wrong with it.
func (p *itemsPart) refresh() {
	s := p.w.project.Study()
	problems := map[string]string{}
	for _, e := range s.Validate() {
		if problems[e.Item] == "" {
			problems[e.Item] = e.Problem + "; " + e.Remedy
		}
	}
	var groups []widgets.ListGroup
	for _, kind := range study.Kinds() {
		g := widgets.ListGroup{Kind: string(kind.Kind), Title: kind.Plural, Add: "Add"}
		for _, item := range s.Items(kind.Kind) {
			name := study.NameOf(item)
			g.Items = append(g.Items, widgets.ListItem{ID: name, Name: name, Detail: summary(item), Problem: problems[name]})
		}
		groups = append(groups, g)
	}
	p.pane.SetGroups(groups)
	p.pane.Select(p.w.sel.item())
}

// follow selects what is selected elsewhere.
func (p *itemsPart) follow() { p.pane.Select(p.w.sel.item()) }
