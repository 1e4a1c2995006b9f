package main

import (
	"context"
	"fmt"
	"math"
	"slices"

	"quietbus/study"
)

// Worths is what each measure buys: the worst share of any limit, at any
// assessment point, with it and without.
type Worths struct {
	Base  float64            // no measure
	Now   float64            // those that are on
	Alone map[string]float64 // the measure alone
	Flip  map[string]float64 // those that are on, this one flipped

	some bool // whether any is on
}

// worstShare returns the highest share of a limit in an outcome, NaN when none
// was assessed.
func worstShare(o *study.Outcome) float64 {
	worst := math.NaN()
	for i := range o.Points {
		if row := o.Points[i].Worst(); row != nil && !(row.Share <= worst) {
			worst = row.Share
		}
	}
	return worst
}

// worths evaluates each measure alone and flipped. It returns nil when nothing
// is assessed or the time is needed for a newer job. A combination that cannot
// be evaluated is left out.
func (b *bench) worths(ctx context.Context, p *Picture) *Worths {
	w := &Worths{Base: worstShare(p.Before), Now: worstShare(p.After), Alone: map[string]float64{}, Flip: map[string]float64{}, some: len(p.On) > 0}
	if math.IsNaN(w.Base) {
		return nil
	}
	for i := range p.Study.Measures {
		name := p.Study.Measures[i].Name
		if _, known := b.alone[name]; !known {
			if o, err := b.prepared.Evaluate(ctx, []string{name}); err == nil {
				b.alone[name] = worstShare(o)
			}
		}
		if v, known := b.alone[name]; known {
			w.Alone[name] = v
		}
		next, _ := p.Study.Switched(p.On, name)
		switch {
		case len(next) == 0:
			w.Flip[name] = w.Base
		case slices.Equal(next, []string{name}):
			if v, known := w.Alone[name]; known {
				w.Flip[name] = v
			}
		default:
			if o, err := b.prepared.Evaluate(ctx, next); err == nil {
				w.Flip[name] = worstShare(o)
			}
		}
		if ctx.Err() != nil {
			return nil
		}
	}
	return w
}

// text says what a measure buys, in two short lines.
func (w *Worths) text(name string, on bool) string {
	if w == nil {
		return ""
	}
	alone, known := w.Alone[name]
	if !known {
		return ""
	}
	text := fmt.Sprintf("Alone: worst limit %s to %s", times(w.Base), times(alone))
	if flip, known := w.Flip[name]; known && (on || w.some) {
		if on {
			text += fmt.Sprintf("\nWithout it now: %s", times(flip))
		} else {
			text += fmt.Sprintf("\nOn top of what is on: %s", times(flip))
		}
	}
	return text
}

// times prints a share of a limit.
func times(share float64) string { return fmt.Sprintf("%.2f x", share) }
