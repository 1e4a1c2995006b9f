//go:build !headless

package main

import (
	"slices"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/widget"

	"quietbus/widgets"
)

// dutyPage shows what each measure that is on is made of and must bear.
type dutyPage struct {
	body   *fyne.Container
	list   *fyne.Container
	scroll *container.Scroll
	empty  *widgets.EmptyState
	shown  []string
}

func newDutyPage() *dutyPage {
	d := &dutyPage{list: container.NewVBox(), empty: widgets.NewEmptyState("No measure is on. Switch one on to see what it must bear.", "", nil)}
	d.scroll = container.NewVScroll(d.list)
	d.body = container.NewStack(d.empty, d.scroll)
	d.body.Hide()
	return d
}

// show lists the duties of a picture.
func (d *dutyPage) show(p *Picture) {
	var sheets []dutySheet
	if p != nil && p.After != nil {
		sheets = dutySheets(p.After)
	}
	var all []string
	for _, s := range sheets {
		all = append(append(append(all, s.heading), s.lines...), s.notes...)
	}
	if slices.Equal(all, d.shown) && all != nil {
		return
	}
	d.shown = all
	d.list.RemoveAll()
	for _, s := range sheets {
		heading := widget.NewLabel(s.heading)
		heading.TextStyle.Bold = true
		heading.Wrapping = fyne.TextWrapWord
		d.list.Add(heading)
		for _, line := range append(slices.Clone(s.lines), s.notes...) {
			l := widget.NewLabel(line)
			l.Wrapping = fyne.TextWrapWord
			l.Selectable = true
			d.list.Add(l)
		}
	}
	if len(sheets) == 0 {
		d.scroll.Hide()
		d.empty.Show()
	} else {
		d.empty.Hide()
		d.scroll.Show()
	}
}
