package study

import (
	"fmt"
	"strings"

	"quietbus/study/limits"
)

// State is what an assessment point's verdict comes to.
type State int

// The states. Partly means that every assessed row meets its limit but that
// something asked for could not be assessed; it never counts as met.
const (
	Meets State = iota
	Partly
	Fails
	NotAssessed
)

// String returns the state in a word or two.
func (s State) String() string {
	return [...]string{"meets", "partly assessed", "over", "not assessed"}[s]
}

// A Sentence is the verdict at one assessment point, in plain words.
type Sentence struct {
	Point     string      // name of the assessment
	Bus       string      // bus assessed
	State     State       // after
	Text      string      // after: "PCC: meets IEEE 519-2022 with 18 % to spare (closest: 11th harmonic current)."
	Before    string      // before: "Before: 11th harmonic voltage at 1.40 x its limit.", empty when there is no before
	Operating string      // operating state that decides, when several were evaluated
	Worst     *limits.Row // the row closest to or furthest over its limit, nil when none was assessed
}

// Worst returns the row with the highest share of its limit, nil without rows.
func (p *PointResult) Worst() *limits.Row {
	var worst *limits.Row
	for i := range p.Rows {
		if worst == nil || p.Rows[i].Share > worst.Share {
			worst = &p.Rows[i]
		}
	}
	return worst
}

// Unit returns the unit that all rows of the point share, "" when they differ.
func (p *PointResult) Unit() string {
	unit := ""
	for i := range p.Rows {
		if u := p.Rows[i].Unit; i > 0 && u != unit {
			return ""
		} else {
			unit = u
		}
	}
	return unit
}

// State returns what the point's rows come to.
func (p *PointResult) State() State {
	worst := p.Worst()
	switch {
	case worst == nil:
		return NotAssessed
	case !worst.Meets():
		return Fails
	case len(p.NotAssessed) > 0:
		return Partly
	}
	return Meets
}

// MeetsAll reports whether every assessment point meets its limits. A point
// that could not be assessed, wholly or in part, does not.
func (o *Outcome) MeetsAll() bool {
	for i := range o.Points {
		if o.Points[i].State() != Meets {
			return false
		}
	}
	return true
}

// Verdict says for each assessment point of after whether its limits are met,
// and by what the worst limit was missed or kept before. before may be nil.
// A study without assessment points yields one sentence that says so.
func Verdict(before, after *Outcome) []Sentence {
	if after == nil {
		return nil
	}
	if len(after.Points) == 0 {
		return []Sentence{{State: NotAssessed, Text: "No assessment point yet: add one to compare with a limit set."}}
	}
	out := make([]Sentence, 0, len(after.Points))
	for i := range after.Points {
		p := &after.Points[i]
		s := Sentence{Point: p.Name, Bus: p.Bus, State: p.State(), Worst: p.Worst(), Text: p.Name + ": " + phrase(p) + "."}
		if before != nil && i < len(before.Points) {
			s.Before = "Before: " + phraseBefore(&before.Points[i]) + "."
		}
		out = append(out, s)
	}
	return out
}

func phrase(p *PointResult) string {
	worst := p.Worst()
	switch p.State() {
	case NotAssessed:
		return "not assessed, because " + strings.Join(p.NotAssessed, "; ")
	case Fails:
		return overs(p) + fmt.Sprintf(" (%s)", p.SetTitle)
	case Partly:
		return fmt.Sprintf("keeps what was assessed of %s, closest %s at %s of its limit; not assessed: %s",
			p.SetTitle, RowName(*worst), percent(worst.Share), strings.Join(p.NotAssessed, "; "))
	}
	return fmt.Sprintf("meets %s with %s to spare; closest is the %s", p.SetTitle, percent(1-worst.Share), RowName(*worst))
}

// overs words the failing rows: the worst in full, the others counted.
func overs(p *PointResult) string {
	worst, n := p.Worst(), 0
	for _, r := range p.Rows {
		if !r.Meets() {
			n++
		}
	}
	text := fmt.Sprintf("%s at %.2f x its limit (%.3g %s against %.3g %s)", RowName(*worst), worst.Share, worst.Value, worst.Unit, worst.Limit, worst.Unit)
	if worst.Limit == 0 {
		text = fmt.Sprintf("%s of %.3g %%, which is not allowed", RowName(*worst), worst.Value)
	}
	switch {
	case n == 2:
		text += " and one more over"
	case n > 2:
		text += fmt.Sprintf(" and %d more over", n-1)
	}
	return text
}

func phraseBefore(p *PointResult) string {
	worst := p.Worst()
	switch p.State() {
	case NotAssessed:
		return "not assessed"
	case Fails:
		if worst.Limit == 0 {
			return RowName(*worst) + ", which is not allowed"
		}
		return fmt.Sprintf("%s at %.2f x its limit", RowName(*worst), worst.Share)
	}
	return fmt.Sprintf("closest %s at %s of its limit", RowName(*worst), percent(worst.Share))
}

func percent(share float64) string { return fmt.Sprintf("%.3g %%", 100*share) }

// RowName names a limit row: "11th harmonic voltage", "voltage THD", "TDD".
func RowName(r limits.Row) string {
	switch {
	case r.Index == "TDD":
		return "current TDD"
	case r.Index != "":
		return r.Quantity + " " + r.Index
	case r.Order == 0:
		return "direct " + r.Quantity
	}
	return Ordinal(r.Order) + " harmonic " + r.Quantity
}

// Ordinal returns "1st", "2nd", "3rd", "11th" ...
func Ordinal(n int) string {
	suffix := "th"
	if n%100 < 11 || n%100 > 13 {
		switch n % 10 {
		case 1:
			suffix = "st"
		case 2:
			suffix = "nd"
		case 3:
			suffix = "rd"
		}
	}
	return fmt.Sprintf("%d%s", n, suffix)
}
