//go:build !headless

package main

import (
	"fmt"
	"strings"

	"quietbus/study"
	"quietbus/widgets"
)

// stateOf translates a verdict's state for the widgets. A point that is only
// partly assessed never counts as met.
func stateOf(s study.State) widgets.State {
	switch s {
	case study.Meets:
		return widgets.Meets
	case study.Fails:
		return widgets.Fails
	}
	return widgets.NotAssessed
}

// refreshVerdict shows the sentences of the picture, or why there are none.
func (w *Window) refreshVerdict() {
	p := w.picture
	switch {
	case p == nil:
		w.verdict.SetNote("Computing...")
	case p.Err != nil:
		w.verdict.SetNote(unsolved(p.Study, p.Err))
	default:
		var rows []widgets.Verdict
		for _, s := range study.Verdict(beforeOf(p), p.After) {
			rows = append(rows, widgets.Verdict{State: stateOf(s.State), Text: s.Text, Before: s.Before})
		}
		w.verdict.SetVerdicts(rows)
	}
}

// beforeOf returns the outcome without measures, nil while none is on: the
// sentence would only repeat itself.
func beforeOf(p *Picture) *study.Outcome {
	if len(p.On) == 0 {
		return nil
	}
	return p.Before
}

// unsolved says in a sentence why there is no verdict, and what to do first.
func unsolved(s *study.Study, err error) string {
	switch {
	case len(s.Buses) == 0:
		return "An empty study. Add a bus and a supply under Items, or start with New study."
	case len(s.Supplies) == 0:
		return "Not solved yet: add a supply to one of the buses."
	}
	first, rest, more := strings.Cut(errorText(err), "\n")
	text := "Not solved: " + first
	if n := len(strings.Fields(strings.ReplaceAll(rest, "\n", " "))); more && n > 0 {
		text += fmt.Sprintf(" (more under Items)")
	}
	return text
}

// verdictTapped turns the evidence to the cause of a sentence.
func (w *Window) verdictTapped(i int) {
	p := w.picture
	if p == nil || p.After == nil {
		return
	}
	sentences := study.Verdict(p.Before, p.After)
	if i >= len(sentences) || sentences[i].Bus == "" {
		w.add(study.KindAssessment, "")
		return
	}
	s := sentences[i]
	sel := selection{Bus: s.Bus}
	if s.Worst != nil && s.Worst.Quantity == "current" {
		for _, a := range p.Study.Assessments {
			if a.Name == s.Point {
				sel.Element = a.Current
			}
		}
	}
	w.pick(sel)
}
