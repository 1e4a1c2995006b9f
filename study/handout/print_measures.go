package handout

import (
	"fmt"
	"slices"
	"strings"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
)

// measures writes what was chosen and its cost, and a data sheet for each
// measure that is on.
func (p *printer) measures() {
	if len(p.study.Measures) == 0 {
		p.section("Measures", 20)
		p.paragraph(span{p.body, "The study holds no measures."})
		return
	}
	p.section("Measures", 70)
	p.costTable()
	for i := range p.after.Measures {
		p.dataSheet(&p.after.Measures[i])
	}
}

// costTable lists every measure of the study, those that are on first.
func (p *printer) costTable() {
	t := &table{columns: []column{
		{head: "Measure", min: 90},
		{head: "What it does", flex: 2, min: 120},
		{head: "At", flex: 1, min: 60},
		{head: "Cost", align: right},
	}}
	list := func(on bool) {
		for i := range p.study.Measures {
			m := &p.study.Measures[i]
			if slices.Contains(p.after.On, m.Name) != on {
				continue
			}
			at := m.Bus
			if at == "" {
				at = m.Target
			}
			cells := plain(m.Name, describe(m), at, "")
			if m.Cost > 0 {
				cells[3].text = money(m.Cost)
			}
			t.add(cells...)
		}
	}
	if len(p.after.On) > 0 {
		t.group("On")
		list(true)
		sum := plain("Sum", "", "", money(p.cost(p.after.On)))
		for i := range sum {
			sum[i].style = p.small.bold()
		}
		t.add(sum...)
	}
	if len(p.after.On) < len(p.study.Measures) {
		t.group("Considered, off")
		list(false)
	}
	p.table(t, 0)
	p.note("Capital cost in the study's own currency, as entered; empty where none was entered.")
}

// describe says in a few words what a measure does.
func describe(m *study.Measure) string {
	text := kindWords(m.Kind)
	switch m.Kind {
	case study.SingleTuned, study.HighPass:
		text += fmt.Sprintf(", %s kvar at order %s", short(m.Kvar), short(m.Order))
	case study.DetuneBank, study.LineReactor:
		text += fmt.Sprintf(", %s %%", short(m.Percent))
	case study.ActiveFilter:
		text += fmt.Sprintf(", %s A", short(m.RatedA))
	case study.LowPassRC:
		text += fmt.Sprintf(", %s Ω and %s µF", short(m.ROhm), short(m.CUF))
	case study.LowPassLC:
		text += fmt.Sprintf(", %s mH and %s µF", short(m.LMH), short(m.CUF))
	}
	if len(m.Replaces) > 0 {
		text += "; takes out " + strings.Join(m.Replaces, ", ")
	}
	return text
}

func kindWords(kind string) string {
	words := map[string]string{
		study.SingleTuned:  "Single-tuned filter",
		study.HighPass:     "Second-order high-pass filter",
		study.DetuneBank:   "Detuning reactor before a bank",
		study.RemoveBank:   "Bank taken out",
		study.ActiveFilter: "Active filter",
		study.LineReactor:  "Line reactor before a load",
		study.LowPassRC:    "R-C low-pass before a load",
		study.LowPassLC:    "L-C low-pass before a load",
	}
	if w, ok := words[kind]; ok {
		return w
	}
	return kind
}

// lowerFirst lowers the first letter of a phrase, but not of a symbol such as
// R-C.
func lowerFirst(text string) string {
	if len(text) > 1 && text[1] >= 'a' && text[1] <= 'z' {
		return strings.ToLower(text[:1]) + text[1:]
	}
	return text
}

// dataSheet writes components, duty, response and notes of one measure.
func (p *printer) dataSheet(r *study.MeasureResult) {
	title := r.Name + ": " + lowerFirst(kindWords(r.Kind))
	if r.Bus != "" {
		title += ", bus " + r.Bus
	}
	const gap = vg.Length(22)
	parts, duty, response := p.partsTable(r), p.dutyTable(r), responseTable(r)
	if duty == nil {
		duty, response = response, nil
	}
	half := (p.width() - gap) / 2
	p.subsection(title, max(p.tableHeight(parts, half), p.tableHeight(duty, half)))
	if r.Saturated {
		p.paragraph(span{p.body.bold().in(p.palette.Over), "Saturated: "}, span{p.body, "the loads ask for more than its rating, so that all it injects is scaled down to it."})
		p.skip(2)
	}
	switch {
	case parts != nil && duty != nil:
		p.beside(parts, duty, half, gap)
	case parts != nil:
		p.table(parts, half)
	case duty != nil:
		p.table(duty, half)
	}
	if response != nil {
		p.skip(4)
		p.table(response, half)
	}
	if len(r.Response) > 0 {
		p.note("Outlet voltage over bus voltage by order, with the load behind the filter as the study describes it.")
	}
	for _, text := range r.Notes {
		p.skip(2)
		p.paragraph(span{p.small, text})
	}
}

// beside sets two short tables next to each other on one page.
func (p *printer) beside(a, b *table, half, gap vg.Length) {
	ha, hb := p.tableHeight(a, half), p.tableHeight(b, half)
	p.need(max(ha, hb))
	top := p.y
	p.tableIn(a, marginLeft, half)
	low := p.y
	p.y = top
	p.tableIn(b, marginLeft+half+gap, half)
	p.y = min(p.y, low)
}

func (p *printer) partsTable(r *study.MeasureResult) *table {
	if len(r.Components) == 0 {
		return nil
	}
	t := &table{columns: []column{
		{head: "Component, per phase", min: 70}, {head: ""}, {head: "Value", align: right}, {head: ""}, {head: "", flex: 1, min: 30},
	}}
	for _, c := range r.Components {
		value, unit := partValue(c)
		t.add(plain(c.Part, c.Symbol, value, unit, c.Note)...)
	}
	return t
}

// partValue gives a component's value in the unit its trade uses.
func partValue(c study.Component) (value, unit string) {
	switch c.Symbol {
	case "C":
		return significant(c.Value*1e6, 4), "µF"
	case "L":
		return significant(c.Value*1e3, 4), "mH"
	}
	if c.Value < 1 {
		return significant(c.Value*1e3, 4), "mΩ"
	}
	return significant(c.Value, 4), "Ω"
}

// dutyTable lists what a measure bears beside its ratings.
func (p *printer) dutyTable(r *study.MeasureResult) *table {
	d := r.Duty
	if d == nil {
		return nil
	}
	t := &table{columns: []column{
		{head: "Duty, worst phase", flex: 1, min: 80}, {head: "Order 1", align: point}, {head: "All orders", align: point}, {head: "Rating", align: point}, {head: ""},
	}}
	add := func(name string, first, all, rating float64, unit string) {
		if all == 0 {
			return
		}
		cells := plain(name, "", figures3(all), "", unit)
		if first > 0 {
			cells[1].text = figures3(first)
		}
		if rating > 0 {
			cells[3].text = figures3(rating)
			if all > rating*(1+1e-9) {
				cells[2].style = p.small.bold().in(p.palette.Over)
				cells[4].text += ", over"
				cells[4].style = cells[2].style
			}
		}
		t.add(cells...)
	}
	add("Line current, rms", d.CurrentA1, d.CurrentA, d.RatedA, "A")
	add("Capacitor voltage, rms", d.VoltageV1, d.VoltageV, d.RatedV, "V")
	add("Capacitor voltage, peak", 0, d.PeakV, 0, "V")
	add("Loss, three phases", d.LossW1, d.LossW, 0, "W")
	if d.KvarOutput > 0 {
		cells := plain("Output, three phases", figures3(d.KvarOutput), "", "", "kvar")
		if d.KvarRated > 0 {
			cells[3].text = figures3(d.KvarRated)
		}
		t.add(cells...)
	}
	if len(t.rows) == 0 {
		return nil
	}
	return t
}

func responseTable(r *study.MeasureResult) *table {
	if len(r.Response) == 0 {
		return nil
	}
	t := &table{columns: []column{
		{head: "Order", align: right}, {head: "Gain", align: point}, {head: "Lag", unit: "deg", align: point}, {head: "", flex: 1},
	}}
	for _, g := range r.Response {
		t.add(plain(short(float64(g.Order)), figures3(g.Ratio), figures3(g.LagDeg), "")...)
	}
	return t
}
