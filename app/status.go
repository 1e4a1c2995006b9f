//go:build !headless

package main

import (
	"fmt"

	"quietbus/widgets"
)

// checkText says in one quiet line how well the solution satisfies its own
// equations.
func checkText(p *Picture) string {
	if p == nil || p.After == nil {
		return "Not solved"
	}
	c := p.After.Check
	text := fmt.Sprintf("Solution checked: residual %.0e, power balance %.0e, reciprocity %.0e", c.Residual, c.Balance, c.Reciprocity)
	if c.Fallback > 0 {
		text += fmt.Sprintf(", %s by the dense solver", count(c.Fallback, "order"))
	}
	text += ". Sources: " + p.After.Study.SummationShort()
	return text + fmt.Sprintf(". Numbers in %s ms", short(float64(p.Took.Microseconds())/1000))
}

// newStatus returns the line at the foot of the window.
func newStatus() *widgets.StatusLine {
	s := widgets.NewStatusLine()
	s.SetCheck("Not solved")
	return s
}
