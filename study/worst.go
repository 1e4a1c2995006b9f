package study

import (
	"errors"
	"fmt"
	"strings"
)

// InState says in which operating state an error arose. Errors that name the
// normal state's own items stay as they are.
func InState(state string, err error) error {
	if err == nil || state == NormalState {
		return err
	}
	var conflict *ConflictError
	if errors.As(err, &conflict) {
		return err // has nothing to do with the state
	}
	return fmt.Errorf("in the operating state %q: %w", state, err)
}

// WorstOver returns, for the assessment point of the given number, which of
// the outcomes (one for each operating state, one choice of measures) decides
// its verdict: the furthest over a limit, else one that could not be wholly
// assessed, else the closest to its limit. A state in which the point has no
// voltage decides nothing unless it is so in every state.
func WorstOver(outcomes []*Outcome, point int) int {
	worst := -1
	for i, o := range outcomes {
		if worst < 0 || worse(o, outcomes[worst], point) {
			worst = i
		}
	}
	return worst
}

// worse reports whether outcome a is worse than b at a point.
func worse(a, b *Outcome, point int) bool {
	ra, rb := a.gravity(point), b.gravity(point)
	if ra != rb {
		return ra > rb
	}
	wa, wb := a.Points[point].Worst(), b.Points[point].Worst()
	return wa != nil && wb != nil && wa.Share > wb.Share
}

// gravity ranks what a point's verdict comes to.
func (o *Outcome) gravity(point int) int {
	p := &o.Points[point]
	if b := o.Bus(p.Bus); b != nil && !b.Live {
		return -1
	}
	return map[State]int{Meets: 0, Partly: 1, NotAssessed: 2, Fails: 3}[p.State()]
}

// MeetsOver reports whether every assessment point meets its limits in every
// operating state in which it has a voltage.
func MeetsOver(outcomes []*Outcome) bool {
	if len(outcomes) == 0 {
		return false
	}
	for i := range outcomes[0].Points {
		if w := WorstOver(outcomes, i); outcomes[w].Points[i].State() != Meets {
			return false
		}
	}
	return true
}

// VerdictOver is Verdict over all operating states: each point's sentence is
// that of its worst state, which it names. before may be nil. Both hold one
// outcome a state, as EvaluateAll returns them.
func VerdictOver(before, after []*Outcome) []Sentence {
	if len(after) == 0 {
		return nil
	}
	if len(after[0].Points) == 0 {
		return Verdict(nil, after[0])
	}
	out := make([]Sentence, 0, len(after[0].Points))
	for i := range after[0].Points {
		a := after[WorstOver(after, i)]
		var b *Outcome
		if len(before) > 0 {
			b = before[WorstOver(before, i)]
		}
		s := Verdict(b, a)[i]
		s.Operating = a.State
		if len(after) > 1 {
			s.Text = inserted(s.Text, fmt.Sprintf(", in the worst of %d operating states: %s", len(after), a.State))
			if b != nil {
				s.Before = inserted(s.Before, ", in the state "+b.State)
			}
		}
		out = append(out, s)
	}
	return out
}

// inserted puts words before the final stop of a sentence.
func inserted(sentence, words string) string {
	if n := len(sentence); n > 0 && sentence[n-1] == '.' {
		return sentence[:n-1] + words + "."
	}
	return sentence + words
}

// StateWords says what an operating state changes: "C2 out of service; load
// 40 %"; "as stated" when nothing.
func (s *Study) StateWords(name string) string {
	x, err := s.state(name)
	if err != nil || x == nil {
		return "as stated"
	}
	var parts []string
	if len(x.Out) > 0 {
		parts = append(parts, join(x.Out)+" out of service")
	}
	if len(x.Close) > 0 {
		parts = append(parts, join(x.Close)+" closed")
	}
	if len(x.Open) > 0 {
		parts = append(parts, join(x.Open)+" open")
	}
	switch x.FaultLevel {
	case "min":
		parts = append(parts, "lowest fault level")
	case "max":
		parts = append(parts, "highest fault level")
	}
	if x.LoadPercent != 0 && x.LoadPercent != 100 {
		parts = append(parts, fmt.Sprintf("load %g %%", x.LoadPercent))
	}
	for _, l := range x.Loads {
		parts = append(parts, fmt.Sprintf("%s %g %%", l.Item, l.Percent))
	}
	if len(parts) == 0 {
		return "as stated"
	}
	return strings.Join(parts, "; ")
}
