package explore

import (
	"cmp"
	"context"
	"math"
	"slices"
)

// Bounds of the guided search: how many sets it grows at a time, and how many
// it evaluates in all.
const (
	searchWidth  = 24
	searchBudget = 4096
)

// search looks for good sets among more measures than can all be combined: it
// grows the best sets by one measure at a time, once judged by their share of
// limits and once by what they cost to get under them, then tries to leave out
// or swap one measure of each set that passes. It is deterministic, and it may
// miss the best set.
func (e *Explorer) search(ctx context.Context, seen func(Set)) ([]Set, error) {
	found := map[uint64]Set{}
	evaluate := func(masks []uint64) error {
		fresh := masks[:0]
		for _, m := range masks {
			if _, done := found[m]; !done && e.Allowed(m) && len(found)+len(fresh) < searchBudget {
				found[m] = Set{} // so that it stands once in the list
				fresh = append(fresh, m)
			}
		}
		for i := range fresh {
			delete(found, fresh[i])
		}
		sets, err := e.sets(ctx, slices.Clone(fresh), seen)
		for _, s := range sets {
			found[s.Mask] = s
		}
		return err
	}
	n := len(e.study.Measures)
	front := []uint64{0}
	if err := evaluate([]uint64{0}); err != nil {
		return nil, err
	}
	for range n {
		var next []uint64
		for _, m := range front {
			for i := range n {
				if m>>i&1 == 0 {
					next = append(next, m|1<<i)
				}
			}
		}
		slices.Sort(next)
		next = slices.Compact(next)
		grown := slices.Clone(next)
		if err := evaluate(next); err != nil {
			return nil, err
		}
		front = e.front(found, grown)
		if len(front) == 0 || len(found) >= searchBudget {
			break
		}
	}
	for range 3 { // leave out or swap one measure of what passes
		var near []uint64
		for _, s := range e.passing(found) {
			for i := range n {
				if s.Mask>>i&1 == 0 {
					continue
				}
				near = append(near, s.Mask&^(1<<i))
				for k := range n {
					if s.Mask>>k&1 == 0 {
						near = append(near, s.Mask&^(1<<i)|1<<k)
					}
				}
			}
		}
		slices.Sort(near)
		if err := evaluate(slices.Compact(near)); err != nil {
			return nil, err
		}
	}
	out := make([]Set, 0, len(found))
	for _, s := range found {
		out = append(out, s)
	}
	return out, nil
}

// front picks the sets that are grown next: half by share of limits, half by
// how cheaply they come near them.
func (e *Explorer) front(found map[uint64]Set, masks []uint64) []uint64 {
	var sets []Set
	for _, m := range masks {
		if s, ok := found[m]; ok && s.Err == nil && !math.IsNaN(s.Share) {
			sets = append(sets, s)
		}
	}
	var picked []uint64
	for _, by := range []func(s *Set) float64{
		func(s *Set) float64 { return max(s.Share, s.Stress.Share) },
		func(s *Set) float64 { return (1 + s.Cost) * max(1, s.Share, s.Stress.Share) },
	} {
		slices.SortFunc(sets, func(a, b Set) int { return cmp.Or(cmp.Compare(by(&a), by(&b)), cmp.Compare(a.Mask, b.Mask)) })
		for i := range min(len(sets), searchWidth/2) {
			picked = append(picked, sets[i].Mask)
		}
	}
	slices.Sort(picked)
	return slices.Compact(picked)
}

// passing returns the passing sets of least cost.
func (e *Explorer) passing(found map[uint64]Set) []Set {
	var sets []Set
	for _, s := range found {
		if s.Passes() {
			sets = append(sets, s)
		}
	}
	slices.SortFunc(sets, func(a, b Set) int { return cmp.Or(cmp.Compare(a.Cost, b.Cost), cmp.Compare(a.Mask, b.Mask)) })
	return sets[:min(len(sets), searchWidth)]
}
