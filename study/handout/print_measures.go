package handout

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
)

// measures writes what was chosen and its cost, and a data sheet for each
// measure that is on.
func (p *printer) measures() {
	p.upright()
	if len(p.study.Measures) == 0 {
		p.section("Measures", 20)
		p.paragraph(span{p.body, "The study holds no measures."})
		return
	}
	p.section("Measures", 70)
	p.costTable()
	capacitors := false
	for i := range p.after.Measures {
		r := &p.after.Measures[i]
		p.dataSheet(r)
		capacitors = capacitors || r.Duty != nil && r.Duty.RatedV > 0
	}
	if capacitors {
		p.note("Capacitors: rating and duty of one phase, star equivalent. \"Over\" is said above 1.3 times rated current (IEC 60831-1), rated rms voltage, or 1.2 times the crest of rated voltage (IEEE 18); limits from memory, to be confirmed against the documents and the manufacturer.")
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
	case study.SingleTuned, study.DoubleTuned, study.FirstOrder, study.HighPass, study.ThirdOrder, study.CType:
		text += fmt.Sprintf(", %s kvar at order %s", short(m.Kvar), short(m.Order))
		if m.Order2 > 0 {
			text += " and " + short(m.Order2)
		}
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
	switch kind { // with what they stand before
	case study.DetuneBank:
		return "Detuning reactor before a bank"
	case study.LineReactor, study.LowPassRC, study.LowPassLC:
		return study.KindTitle(kind) + " before a load"
	}
	return study.KindTitle(kind)
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
	left := p.width() * 0.62
	p.subsection(title, p.tableHeight(parts, p.width())+max(p.tableHeight(duty, left), p.tableHeight(response, p.width()-left-gap))+8)
	if r.Saturated {
		p.paragraph(span{p.body.bold().in(p.palette.Over), "Saturated: "}, span{p.body, "the loads ask for more than its rating, so that all it injects is scaled down to it."})
		p.skip(2)
	}
	if parts != nil {
		p.table(parts, 0)
		p.skip(4)
	}
	switch {
	case duty != nil && response != nil:
		p.beside(duty, response, left, gap)
	case duty != nil:
		p.table(duty, left)
	case response != nil:
		p.table(response, p.width()-left-gap)
	}
	if len(r.Response) > 0 {
		p.note("Gain: outlet voltage over bus voltage, with the load behind the filter as the study describes it. Every order is in tables.xlsx.")
	}
	for _, text := range r.Notes {
		p.skip(2)
		p.paragraph(span{p.small, text})
	}
}

// beside sets two short tables next to each other on one page, the first one
// in width w.
func (p *printer) beside(a, b *table, w, gap vg.Length) {
	rest := p.width() - w - gap
	p.need(max(p.tableHeight(a, w), p.tableHeight(b, rest)))
	top := p.y
	p.tableIn(a, marginLeft, w)
	low := p.y
	p.y = top
	p.tableIn(b, marginLeft+w+gap, rest)
	p.y = min(p.y, low)
}

func (p *printer) partsTable(r *study.MeasureResult) *table {
	if len(r.Components) == 0 {
		return nil
	}
	t := &table{columns: []column{
		{head: "Component, per phase", min: 70}, {head: ""}, {head: "Value", align: right}, {head: ""}, {head: "", flex: 1, min: 60},
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
		{head: "Duty, worst phase", flex: 1, min: 80}, {head: ""}, {head: "Order 1", align: point}, {head: "All orders", align: point}, {head: "Rating", align: point}, {head: "Of rating", unit: "%", align: point},
	}}
	add := func(name, unit string, first, all, rating, bearable float64) {
		if all == 0 {
			return
		}
		cells := plain(name, unit, "", figures3(all), "", "")
		if first > 0 {
			cells[2].text = figures3(first)
		}
		if rating > 0 {
			cells[4].text, cells[5].text = figures3(rating), figures3(100*all/rating)
			if all > bearable*rating*(1+1e-9) {
				cells[5] = cell{text: figures3(100*all/rating) + " over", style: p.small.bold().in(p.palette.Over)}
			}
		}
		t.add(cells...)
	}
	bearable := 1.0
	if d.RatedV > 0 {
		bearable = capacitorOvercurrent
	}
	add("Line current, rms", "A", d.CurrentA1, d.CurrentA, d.RatedA, bearable)
	add("Capacitor voltage, rms", "V", d.VoltageV1, d.VoltageV, d.RatedV, 1)
	add("Capacitor voltage, peak", "V", 0, d.PeakV, math.Sqrt2*d.RatedV, capacitorOverpeak)
	add("Loss, three phases", "W", d.LossW1, d.LossW, 0, 0)
	if d.KvarOutput > 0 {
		cells := plain("Output, three phases", "kvar", figures3(d.KvarOutput), "", "", "")
		if d.KvarRated > 0 {
			cells[4].text = figures3(d.KvarRated)
		}
		t.add(cells...)
	}
	if len(t.rows) == 0 {
		return nil
	}
	if d.RatedA == 0 && d.RatedV == 0 && d.KvarRated == 0 {
		t.dropColumn(5)
		t.dropColumn(4)
	}
	return t
}

// What a capacitor bears for long beyond its rated current and the crest of
// its rated voltage: IEC 60831-1 (current, from memory) and IEEE 18 (peak,
// from memory).
const (
	capacitorOvercurrent = 1.3
	capacitorOverpeak    = 1.2
)

// respondsAt are the orders of which the gain of a low-pass is printed; all
// are in the tables.
var respondsAt = []int{1, 2, 3, 5, 7, 9, 11, 13, 17, 19, 23, 25}

func responseTable(r *study.MeasureResult) *table {
	if len(r.Response) == 0 {
		return nil
	}
	t := &table{columns: []column{
		{head: "Order", align: right}, {head: "Gain", align: point}, {head: "Lag", unit: "deg", align: point}, {head: "", flex: 1},
	}}
	for _, g := range r.Response {
		if !slices.Contains(respondsAt, g.Order) {
			continue
		}
		t.add(plain(short(float64(g.Order)), figures3(g.Ratio), figures3(g.LagDeg), "")...)
	}
	return t
}
