package study

import (
	"fmt"
	"slices"
	"strings"
)

// OnMeasures returns the names of the measures whose switch is on, in file
// order.
func (s *Study) OnMeasures() []string {
	var on []string
	for i := range s.Measures {
		if s.Measures[i].On {
			on = append(on, s.Measures[i].Name)
		}
	}
	return on
}

// A Conflict is a pair of measures that cannot be on together.
type Conflict struct {
	A, B   string
	Reason string // "both change bank C1"
}

// ConflictError is returned when measures that cannot coexist are asked for
// together.
type ConflictError struct{ Conflicts []Conflict }

func (e *ConflictError) Error() string {
	words := make([]string, len(e.Conflicts))
	for i, c := range e.Conflicts {
		words[i] = fmt.Sprintf("measures %q and %q cannot be on together: %s; switch one of them off", c.A, c.B, c.Reason)
	}
	return strings.Join(words, "; ")
}

// Conflicts returns every pair among the named measures that cannot coexist:
// because one excludes the other, because both change the same item, or
// because one takes out what the other changes.
func (s *Study) Conflicts(on []string) []Conflict {
	var found []Conflict
	chosen := s.chosen(on)
	for i, a := range chosen {
		for _, b := range chosen[i+1:] {
			if reason := clash(a, b); reason != "" {
				found = append(found, Conflict{A: a.Name, B: b.Name, Reason: reason})
			}
		}
	}
	return found
}

func clash(a, b *Measure) string {
	if slices.Contains(a.Excludes, b.Name) || slices.Contains(b.Excludes, a.Name) {
		return "the study says that they exclude each other"
	}
	if a.Target != "" && a.Target == b.Target {
		return "both change " + a.Target
	}
	for _, pair := range [2][2]*Measure{{a, b}, {b, a}} {
		out, other := pair[0], pair[1]
		if other.Target != "" && slices.Contains(out.Replaces, other.Target) {
			return fmt.Sprintf("%s takes out %s, which %s changes", out.Name, other.Target, other.Name)
		}
	}
	return ""
}

// chosen returns the measures with the given names, in file order.
func (s *Study) chosen(on []string) []*Measure {
	var list []*Measure
	for i := range s.Measures {
		if slices.Contains(on, s.Measures[i].Name) {
			list = append(list, &s.Measures[i])
		}
	}
	return list
}

// Switched returns the set of measures that is on after the named one is
// flipped: a measure that goes on takes those off that it cannot coexist with.
// The second result names what was taken off, with the reason.
func (s *Study) Switched(on []string, name string) ([]string, []Conflict) {
	if i := slices.Index(on, name); i >= 0 {
		return slices.Delete(slices.Clone(on), i, i+1), nil
	}
	next := append(slices.Clone(on), name)
	var taken []Conflict
	for _, c := range s.Conflicts(next) {
		other := c.A
		if other == name {
			other = c.B
		}
		if c.A != name && c.B != name {
			continue
		}
		if i := slices.Index(next, other); i >= 0 {
			next = slices.Delete(next, i, i+1)
			taken = append(taken, c)
		}
	}
	return next, taken
}
