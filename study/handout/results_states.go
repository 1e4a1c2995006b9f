package handout

import "quietbus/study"

// Operating is one operating state of the study with what its limits come to.
type Operating struct {
	Name    string           `json:"name"`
	Changes string           `json:"changes"` // in words, "as stated" for none
	Points  []OperatingPoint `json:"points"`  // in the study's order
}

// OperatingPoint is one assessment point in one operating state. The shares
// are of the row that is closest to its limit, or furthest over.
type OperatingPoint struct {
	Point       string `json:"point"`
	State       string `json:"state"`       // after: "meets", "partly assessed", "over", "not assessed"
	Row         string `json:"row"`         // after; empty when nothing was assessed
	Share       Num    `json:"share"`       // after
	BeforeState string `json:"beforeState"` // empty when there is no before
	BeforeRow   string `json:"beforeRow"`
	BeforeShare Num    `json:"beforeShare"`
	Decides     bool   `json:"decides"` // the verdict at this point is that of this state
}

// operating fills in the states, nil outcomes giving none.
func (b *builder) operating(s *study.Study, before, after []*study.Outcome) []Operating {
	list := []Operating{}
	for i, o := range after {
		b.where = "operating state " + o.State
		x := Operating{Name: o.State, Changes: s.StateWords(o.State), Points: []OperatingPoint{}}
		for k := range o.Points {
			p := OperatingPoint{Point: o.Points[k].Name, State: o.Points[k].State().String(), Decides: study.WorstOver(after, k) == i}
			if w := o.Points[k].Worst(); w != nil {
				p.Row, p.Share = study.RowName(*w), b.num(w.Share)
			}
			if i < len(before) && before[i] != o {
				p.BeforeState = before[i].Points[k].State().String()
				if w := before[i].Points[k].Worst(); w != nil {
					p.BeforeRow, p.BeforeShare = study.RowName(*w), b.num(w.Share)
				}
			}
			x.Points = append(x.Points, p)
		}
		list = append(list, x)
	}
	return list
}
