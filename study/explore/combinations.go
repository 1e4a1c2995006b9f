package explore

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"math/bits"
	"slices"
	"sync"

	"quietbus/study"
)

// AllUpTo is the number of measures up to which every set is evaluated; with
// more, a guided search chooses the sets.
const AllUpTo = 12

// Combinations is every set of measures, or what a guided search saw of them.
type Combinations struct {
	Measures []string // by bit of the masks
	Costs    []float64
	States   []string // operating states in which each set was evaluated
	Sets     []Set    // by number of measures, then mask; only sets that may be on together

	LeftOut   int              // sets with measures that exclude each other; 0 when searched
	Conflicts []study.Conflict // the pairs that exclude each other

	Searched bool // more than AllUpTo measures: a guided search, which may miss the best set
	Cheapest int  // index of the passing set of least cost, -1 when none passes
	Gentlest int  // index of the passing set of least stress, -1 when none passes
}

// Combinations evaluates all sets of measures in every operating state. each,
// which may be nil, is called with each set as it comes, one at a time, in no
// particular order and before it is known which sets are dominated. With a
// study of more than AllUpTo measures it is a guided search.
//
// Errors: cancellation; those of the study. What is named cheapest or gentlest
// was solved again in full; one that then differs is an error.
func (e *Explorer) Combinations(ctx context.Context, each func(Set)) (*Combinations, error) {
	c := &Combinations{States: e.states, Conflicts: e.pairs, Cheapest: -1, Gentlest: -1}
	for i := range e.study.Measures {
		c.Measures, c.Costs = append(c.Measures, e.study.Measures[i].Name), append(c.Costs, e.study.Measures[i].Cost)
	}
	var err error
	if n := len(e.study.Measures); n <= AllUpTo {
		var masks []uint64
		for mask := range uint64(1) << n {
			if e.Allowed(mask) {
				masks = append(masks, mask)
			} else {
				c.LeftOut++
			}
		}
		c.Sets, err = e.sets(ctx, masks, each)
	} else {
		c.Searched = true
		c.Sets, err = e.search(ctx, each)
	}
	if err != nil {
		return nil, err
	}
	slices.SortFunc(c.Sets, func(a, b Set) int {
		return cmp.Or(cmp.Compare(bits.OnesCount64(a.Mask), bits.OnesCount64(b.Mask)), cmp.Compare(a.Mask, b.Mask))
	})
	dominate(c.Sets)
	if c.Cheapest, err = e.best(ctx, c.Sets, func(a, b *Set) int {
		return cmp.Or(cmp.Compare(a.Cost, b.Cost), cmp.Compare(a.Count(), b.Count()), cmp.Compare(a.Share, b.Share))
	}); err != nil {
		return nil, err
	}
	c.Gentlest, err = e.best(ctx, c.Sets, func(a, b *Set) int {
		return cmp.Or(cmp.Compare(a.Stress.Share, b.Stress.Share), cmp.Compare(a.Cost, b.Cost), cmp.Compare(a.Share, b.Share))
	})
	return c, err
}

// sets evaluates the given masks on all cores, few measures first.
func (e *Explorer) sets(ctx context.Context, masks []uint64, seen func(Set)) ([]Set, error) {
	slices.SortFunc(masks, func(a, b uint64) int {
		return cmp.Or(cmp.Compare(bits.OnesCount64(a), bits.OnesCount64(b)), cmp.Compare(a, b))
	})
	out := make([]Set, len(masks))
	var one sync.Mutex
	err := each(ctx, e.workers, len(masks), func() (func(context.Context, int) error, func()) {
		var b *bench
		return func(ctx context.Context, i int) (err error) {
				s, known := e.Known(masks[i])
				if !known {
					if b == nil {
						if b, err = e.take(); err != nil {
							return err
						}
					}
					if s, err = e.evaluate(ctx, b, masks[i]); err != nil {
						return err
					}
				}
				out[i] = s
				if seen != nil {
					one.Lock()
					defer one.Unlock()
					seen(s)
				}
				return nil
			}, func() {
				if b != nil {
					e.give(b)
				}
			}
	})
	if err != nil {
		return nil, err
	}
	return out, nil
}

// dominate marks the sets that another one beats: no worse in cost, share of
// limits and stress, and better in one of them.
func dominate(sets []Set) {
	order := make([]int, len(sets))
	for i := range order {
		order[i] = i
	}
	share := func(s *Set) float64 {
		if math.IsNaN(s.Share) {
			return math.Inf(1)
		}
		return s.Share
	}
	slices.SortStableFunc(order, func(i, k int) int {
		a, b := &sets[i], &sets[k]
		return cmp.Or(cmp.Compare(a.Cost, b.Cost), cmp.Compare(share(a), share(b)), cmp.Compare(a.Stress.Share, b.Stress.Share))
	})
	var front []*Set
	for _, i := range order {
		s := &sets[i]
		s.Dominated = slices.ContainsFunc(front, func(f *Set) bool {
			return share(f) <= share(s) && f.Stress.Share <= s.Stress.Share &&
				(f.Cost < s.Cost || share(f) < share(s) || f.Stress.Share < s.Stress.Share)
		})
		if !s.Dominated {
			front = append(front, s)
		}
	}
}

// best returns the first passing set by an order, solved again in full.
func (e *Explorer) best(ctx context.Context, sets []Set, order func(a, b *Set) int) (int, error) {
	best := -1
	for i := range sets {
		if sets[i].Passes() && (best < 0 || order(&sets[i], &sets[best]) < 0) {
			best = i
		}
	}
	if best < 0 {
		return -1, nil
	}
	s := &sets[best]
	again, err := e.InFull(ctx, s.Mask)
	if err != nil {
		return -1, err
	}
	if again.Cause != s.Cause || math.Abs(again.Share-s.Share) > 1e-6 {
		return -1, fmt.Errorf("explore: the set %v has share %.9g by update and %.9g solved in full; please report this", e.Names(s.Mask), s.Share, again.Share)
	}
	return best, nil
}

// InFull evaluates a set in every state without any shortcut.
func (e *Explorer) InFull(ctx context.Context, mask uint64) (Set, error) {
	var briefs []*study.Brief
	for _, state := range e.states {
		b, err := e.prepared.Brief(ctx, e.Names(mask), state)
		if err != nil {
			return Set{}, study.InState(state, err)
		}
		briefs = append(briefs, b)
	}
	return gather(mask, e.cost(mask), briefs), nil
}
