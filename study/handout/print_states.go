package handout

import (
	"fmt"

	"quietbus/study"
)

// operatingStates writes what each operating state changes and what it comes
// to at each assessment point; the state that decides a verdict is in bold.
func (p *printer) operatingStates() {
	if len(p.doc.States) < 2 {
		return
	}
	p.upright()
	p.section("Operating states", 60)
	p.paragraph(span{p.muted, fmt.Sprintf("Every verdict is that of the worst of %d operating states. For each assessment point the row closest to its limit, or furthest over it; the state that decides is in bold.", len(p.doc.States))})
	what := &table{columns: []column{{head: "State", min: 80}, {head: "What differs from the study as stated", flex: 1, min: 200}}}
	for _, x := range p.doc.States {
		what.add(plain(x.Name, x.Changes)...)
	}
	p.table(what, 0)
	for k, first := range p.doc.States[0].Points {
		p.subsection(first.Point, 50)
		t := &table{columns: []column{
			{head: "State", min: 80}, {head: "Closest to its limit", flex: 1, min: 110},
			{head: p.stated(), unit: "%", align: point, ink: p.palette.After}, {head: "Verdict"},
		}}
		if p.before != nil {
			t.columns = append(t.columns, column{head: "Before", unit: "%", align: point, ink: p.palette.Muted})
		}
		for _, x := range p.doc.States {
			s := x.Points[k]
			cells := plain(x.Name, s.Row, "", s.State, "")[:len(t.columns)]
			if s.Row != "" {
				cells[2].text = figures3(100 * float64(s.Share))
			}
			if p.before != nil && s.BeforeRow != "" {
				cells[4].text = figures3(100 * float64(s.BeforeShare))
			}
			if s.State == study.NotAssessed.String() && s.Row == "" {
				cells[1].text = "nothing assessed in this state"
			}
			if s.Decides {
				for i := range cells {
					cells[i].style = p.small.bold()
				}
			}
			t.add(cells...)
		}
		p.table(t, 0)
	}
	p.note("Shares of the limit. A point without voltage in a state decides nothing there.")
}
