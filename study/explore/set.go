package explore

import (
	"errors"
	"math"
	"math/bits"

	"quietbus/study"
)

// Cause is why a set of measures does not pass.
type Cause string

// The causes. A set over a limit counts as resonant when the order that is
// furthest over is one that a parallel resonance amplifies.
const (
	Passes      Cause = ""
	ByLimit     Cause = "limit"
	ByResonance Cause = "resonance"
	ByStress    Cause = "stress"
	NotAssessed Cause = "not assessed"
	NoSolution  Cause = "no solution"
)

// A Set is one choice of measures, evaluated in every operating state.
type Set struct {
	Mask uint64  // bit i: the study's measure i is on
	Cost float64 // sum of the measures' costs

	Share float64 // highest share of any limit over all points and states; NaN when none was assessed
	Point string  // where that is
	Row   string  // which limit: "11th harmonic voltage"
	Order int     // its order, 0 for a total
	State string  // and in which operating state

	Stress      study.StressShare // hardest over all states
	StressState string
	Resonance   study.Amplified // strongest over all states
	ResonantIn  string          // its state

	Cause     Cause
	ByState   []float64 // highest share of any limit in each state
	Dominated bool      // another set is no worse in cost, share and stress, and better in one
	Err       error     // why there is no solution
}

// Passes reports whether the set meets every limit in every operating state,
// all assessed, without overstressing a part.
func (s *Set) Passes() bool { return s.Cause == Passes }

// Count returns how many measures are on.
func (s *Set) Count() int { return bits.OnesCount64(s.Mask) }

// Near reports whether a resonance lies near an order at which loads draw.
func (s *Set) Near() bool { return s.Resonance.Times >= study.NearResonance }

// gather makes a set of the briefs of all states.
func gather(mask uint64, cost float64, briefs []*study.Brief) Set {
	s := Set{Mask: mask, Cost: cost, Share: math.NaN(), ByState: make([]float64, len(briefs))}
	assessed := len(briefs) > 0 && len(briefs[0].Points) > 0
	over := false
	live := make([]bool, 0, 16)
	for i, b := range briefs {
		s.ByState[i] = math.NaN()
		for k := range b.Points {
			p := &b.Points[k]
			if i == 0 {
				live = append(live, false)
			}
			if b.Dead[k] {
				continue
			}
			live[k] = true
			switch p.State() {
			case study.Fails:
				over = true
			case study.Partly, study.NotAssessed:
				assessed = false
			}
			w := p.Worst()
			if w == nil {
				continue
			}
			if !(w.Share <= s.ByState[i]) {
				s.ByState[i] = w.Share
			}
			if !(w.Share <= s.Share) {
				s.Share, s.Point, s.Row, s.Order, s.State = w.Share, p.Name, study.RowName(*w), w.Order, b.State
			}
		}
		if b.Stress.Share > s.Stress.Share {
			s.Stress, s.StressState = b.Stress, b.State
		}
		if b.Resonance.Times > s.Resonance.Times {
			s.Resonance, s.ResonantIn = b.Resonance, b.State
		}
	}
	for _, ok := range live {
		assessed = assessed && ok
	}
	switch {
	case over:
		s.Cause = ByLimit
		if s.Near() && (s.Order == s.Resonance.Order || s.Order == 0) {
			s.Cause = ByResonance
		}
	case !assessed:
		s.Cause = NotAssessed
	case s.Stress.Share > 1:
		s.Cause = ByStress
	}
	return s
}

// failed makes a set of an error of its evaluation; errors that concern the
// whole work come back.
func failed(mask uint64, cost float64, states int, err error) (Set, error) {
	var several study.FieldErrors
	if errors.As(err, &several) {
		return Set{}, err
	}
	s := Set{Mask: mask, Cost: cost, Share: math.NaN(), Cause: NoSolution, Err: err, ByState: make([]float64, states)}
	for i := range s.ByState {
		s.ByState[i] = math.NaN()
	}
	return s, nil
}
