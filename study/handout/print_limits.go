package handout

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"strings"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// worthPrinting is the share of its limit above which a row is printed; all
// rows are in the tables and in results.json.
const worthPrinting = 0.25

// againstLimits writes a table for each assessment point, worst rows first.
func (p *printer) againstLimits() {
	if len(p.after.Points) == 0 {
		return
	}
	p.upright()
	p.section("Against the limits", 60)
	text := "Solid bar: after. Hollow bar: before. The line is the limit; a bar ends at twice the limit."
	if p.before == nil {
		text = "The line across a bar is the limit; a bar ends at twice the limit."
	}
	p.paragraph(span{p.muted, text + fmt.Sprintf(" Rows above %.0f %% of their limit, worst first. Several sources: %s.", 100*worthPrinting, p.study.SummationWords())})
	for i := range p.after.Points {
		p.pointTable(i)
	}
	if f := p.figures.margins; f != nil {
		const gap, caption = vg.Length(12), vg.Length(26)
		p.need(gap + caption + 0.7*f.Size.Y)
		p.skip(gap)
		p.placeIn(*f, marginLeft, p.width(), min(f.Size.Y+caption, p.room()))
	}
}

// pair is one limit row after, and before when there is one.
type pair struct {
	after  limits.Row
	before *limits.Row
}

// pairs matches the rows of point i before and after, worst after first.
func pairs(before, after *study.Outcome, i int) []pair {
	var old []limits.Row
	if before != nil && i < len(before.Points) {
		old = before.Points[i].Rows
	}
	var list []pair
	for _, r := range after.Points[i].Rows {
		q := pair{after: r}
		for k := range old {
			if o := &old[k]; o.Quantity == r.Quantity && o.Order == r.Order && o.Index == r.Index {
				q.before = o
				break
			}
		}
		list = append(list, q)
	}
	slices.SortStableFunc(list, func(a, b pair) int {
		switch {
		case a.after.Share > b.after.Share:
			return -1
		case a.after.Share < b.after.Share:
			return 1
		}
		return 0
	})
	return list
}

func (q pair) worth() bool {
	return q.after.Share > worthPrinting || q.before != nil && q.before.Share > worthPrinting
}

func (p *printer) pointTable(i int) {
	pt := &p.after.Points[i]
	title := pt.Name
	if pt.Bus != pt.Name {
		title += ", bus " + pt.Bus
	}
	p.subsection(title+": "+pt.SetTitle, 70)
	if pt.ILA > 0 {
		p.paragraph(span{p.muted, fmt.Sprintf("Currents: Isc %s kA, maximum demand current %s A, ratio %s.", figures3(pt.IscA/1000), figures3(pt.ILA), figures3(pt.IscA/pt.ILA))})
	}
	unit := pt.Unit()
	t := &table{columns: []column{
		{head: "Quantity", min: 104},
		{head: "Phase"},
		{head: "Limit", unit: unit, align: point},
		{head: "Before", unit: unit, align: point, ink: p.palette.Muted},
		{head: p.stated(), unit: unit, align: point, ink: p.palette.After},
		{head: "Share of the limit", unit: "%", align: point},
		{flex: 1, min: 80},
		{head: "Verdict"},
		{head: "Rule"},
	}}
	rules := ruleNotes{}
	hidden := 0
	for _, q := range pairs(p.before, p.after, i) {
		if !q.worth() {
			hidden++
			continue
		}
		t.add(p.limitCells(q, unit, &rules)...)
	}
	if p.before == nil {
		t.dropColumn(3)
	}
	if len(t.rows) > 0 {
		notes, height := p.ruleLines(rules)
		t.tail = min(height+8, 120)
		p.table(t, 0)
		p.rules(notes)
	}
	if hidden > 0 {
		p.note(fmt.Sprintf("%s at or below %.0f %% of the limit: see tables.xlsx or results.json.", counted(hidden, "further row is", "further rows are"), 100*worthPrinting))
	}
	for _, text := range pt.NotAssessed {
		p.skip(3)
		p.item(p.body.italic(), "Not assessed: "+text+".")
	}
}

// dropColumn takes column j out of the table.
func (t *table) dropColumn(j int) {
	t.columns = slices.Delete(t.columns, j, j+1)
	for i := range t.rows {
		if len(t.rows[i].cells) > j {
			t.rows[i].cells = slices.Delete(t.rows[i].cells, j, j+1)
		}
	}
}

func counted(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}

func (p *printer) limitCells(q pair, unit string, rules *ruleNotes) []cell {
	r := q.after
	name := study.RowName(r)
	if r.Unit != unit {
		name += ", " + r.Unit
	}
	cells := plain(strings.ToUpper(name[:1])+name[1:], r.Phase, figures3(r.Limit), "", figures3(r.Value), figures3(100*r.Share), "", "meets", rules.letter(r))
	before := 0.0
	cells[3].style = p.muted
	if q.before != nil {
		before = q.before.Share
		cells[3].text = figures3(q.before.Value)
	}
	cells[6].draw = func(x0, y0, x1, y1 vg.Length) { p.shareBar(before, r.Share, x0, y0, x1, y1) }
	if !r.Meets() {
		over := p.small.bold().in(p.palette.Over)
		cells[4].style, cells[5].style = over, over
		cells[7] = cell{text: fmt.Sprintf("over, %.2f x", r.Share), style: over}
	}
	return cells
}

// shareBar draws how much of a limit is used: after as a solid bar, before as
// a hollow one, the limit as a line; what is over the limit is hatched.
func (p *printer) shareBar(before, after float64, x0, y0, x1, y1 vg.Length) {
	const full = 2.0 // the bar's end stands for twice the limit
	at := func(share float64) vg.Length { return x0 + (x1-x0)*vg.Length(math.Min(share, full)/full) }
	mid := (y0 + y1) / 2
	if before > 0 {
		p.SetColor(p.palette.Before)
		p.SetLineWidth(0.7)
		p.Stroke(rectangle(x0, mid-3.6, at(before), mid+3.6))
	}
	p.box(x0, mid-1.9, at(math.Min(after, 1)), mid+1.9, p.palette.After)
	if after > 1 {
		p.hatch(at(1), mid-1.9, at(after), mid+1.9)
	}
	limit := at(1)
	p.SetColor(p.palette.Limit)
	p.SetLineWidth(1)
	p.Stroke(vg.Path{{Type: vg.MoveComp, Pos: vg.Point{X: limit, Y: y0 + 1}}, {Type: vg.LineComp, Pos: vg.Point{X: limit, Y: y1 - 1}}})
}

// hatch fills a rectangle with slanted strokes and outlines it.
func (p *printer) hatch(x0, y0, x1, y1 vg.Length) {
	p.SetColor(p.palette.Over)
	p.SetLineWidth(0.7)
	p.Stroke(rectangle(x0, y0, x1, y1))
	h := y1 - y0
	for x := x0; x < x1; x += 2.4 {
		top := min(x+h, x1)
		p.Stroke(vg.Path{{Type: vg.MoveComp, Pos: vg.Point{X: x, Y: y0}}, {Type: vg.LineComp, Pos: vg.Point{X: top, Y: y0 + (top - x)}}})
	}
}

// ruleNotes gives each rule a letter, in the order in which they are met.
type ruleNotes struct {
	texts []string
}

func (n *ruleNotes) letter(r limits.Row) string {
	text := signs.Replace(r.Rule) + markWords(r.Mark)
	i := slices.Index(n.texts, text)
	if i < 0 {
		i = len(n.texts)
		n.texts = append(n.texts, text)
	}
	return letter(i)
}

// signs puts mathematical signs for what rules write with ASCII letters.
var signs = strings.NewReplacer("<=", "≤", ">=", "≥")

// letter returns a, b, ... z, aa, ab, ...
func letter(i int) string {
	if i < 26 {
		return string(rune('a' + i))
	}
	return letter(i/26-1) + string(rune('a'+i%26))
}

// markWords says how sure a published value is in this program.
func markWords(m limits.Mark) string {
	switch m {
	case limits.Memory:
		return " (value from memory: to be confirmed against the document)"
	case limits.Given:
		return " (value given by the user)"
	case limits.Derived:
		return " (value derived: anyone can recompute it)"
	}
	return " (value found in public material)"
}

// ruleLines wraps the notes and returns how high they stand.
func (p *printer) ruleLines(n ruleNotes) (notes [][]line, height vg.Length) {
	for _, text := range n.texts {
		lines := p.wrap(p.width()-14, []span{{p.muted, text}})
		notes = append(notes, lines)
		height += p.muted.line() * vg.Length(len(lines))
	}
	return notes, height
}

// rules writes the notes below their table.
func (p *printer) rules(notes [][]line) {
	p.skip(2)
	for i, lines := range notes {
		for k, l := range lines {
			p.need(l.height)
			p.y -= l.height
			if k == 0 {
				p.text(p.small.bold(), marginLeft, p.y+l.height*0.27, letter(i))
			}
			p.set(l, marginLeft+14, p.y+l.height*0.27)
		}
	}
}

// busTable writes each bus's voltage and distortion.
func (p *printer) busTable() {
	p.upright()
	p.section("Voltage at each bus", 60)
	t := &table{columns: []column{
		{head: "Bus", flex: 1, min: 90},
		{head: "Nominal", unit: "V", align: point},
		{head: "Before", unit: "V", align: point, ink: p.palette.Muted},
		{head: p.stated(), unit: "V", align: point, ink: p.palette.After},
		{head: "Of nominal", unit: "%", align: point},
		{head: "THD before", unit: "%", align: point, ink: p.palette.Muted},
		{head: "THD " + strings.ToLower(p.stated()), unit: "%", align: point, ink: p.palette.After},
		{head: "Largest", unit: "order", align: right},
		{head: "", unit: "%", align: point},
	}}
	if p.before == nil {
		t.columns[6].head = "THD"
	}
	partly := ""
	for i := range p.after.Buses {
		r := &p.after.Buses[i]
		t.add(p.busCells(r)...)
		if singlePhase(r) {
			partly = " Where a phase is not fed: √3 times the highest phase voltage."
		}
	}
	if p.before == nil {
		t.dropColumn(5)
		t.dropColumn(2)
	}
	p.table(t, 0)
	p.note("Line-to-line voltage of the positive sequence at order 1. THD over orders 2 to " + short(float64(p.study.Order())) +
		" and the largest harmonic, of each bus's own fundamental, the worst phase." + partly)
}

func (p *printer) busCells(r *study.BusResult) []cell {
	if !r.Live {
		cells := plain(r.Name, figures3(r.NominalV), "", "", "", "", "", "no supply", "")
		cells[7].style = p.small.italic()
		return cells
	}
	h, percent := largest(r)
	volts := lineVolts(r)
	cells := plain(r.Name, figures3(r.NominalV), "", figures4(volts), figures4(100*volts/r.NominalV), "", figures3(worstTHD(r)), short(float64(h)), figures3(percent))
	if h == 0 {
		cells[7].text, cells[8].text = "–", ""
	}
	if old := busOf(p.before, r.Name); old != nil && old.Live {
		cells[2] = cell{text: figures4(lineVolts(old)), style: p.muted}
		cells[5] = cell{text: figures3(worstTHD(old)), style: p.muted}
	}
	return cells
}

func figures4(v float64) string { return significant(v, 4) }

// lineVolts returns the positive-sequence line-to-line voltage at order 1; of a
// bus that one or two phases feed, the square root of three times its phase
// voltage.
func lineVolts(r *study.BusResult) float64 {
	if !singlePhase(r) {
		return math.Sqrt(3) * cmplx.Abs(r.Seq[phasor.Positive].At(1))
	}
	highest := 0.0
	for _, x := range r.Phase {
		highest = math.Max(highest, cmplx.Abs(x.At(1)))
	}
	return math.Sqrt(3) * highest
}

// singlePhase reports whether a live bus has a phase without voltage.
func singlePhase(r *study.BusResult) bool {
	for _, x := range r.Phase {
		if x.At(1) == 0 {
			return r.Live
		}
	}
	return false
}

// worstTHD returns the highest THD of the three phases in per cent.
func worstTHD(r *study.BusResult) (worst float64) {
	for _, x := range r.Phase {
		if x.At(1) != 0 {
			worst = math.Max(worst, 100*phasor.THD(x))
		}
	}
	return worst
}

// largest returns the order and per cent of the largest harmonic in any phase.
func largest(r *study.BusResult) (order int, percent float64) {
	for _, x := range r.Phase {
		base := cmplx.Abs(x.At(1))
		for h := 2; h < len(x) && base > 0; h++ {
			if v := 100 * cmplx.Abs(x[h]) / base; v > percent+1e-9 {
				order, percent = h, v
			}
		}
	}
	return order, percent
}

// busOf returns a bus of an outcome, nil when either is missing.
func busOf(o *study.Outcome, name string) *study.BusResult {
	if o == nil {
		return nil
	}
	return o.Bus(name)
}
