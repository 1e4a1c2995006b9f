package explore

import (
	"context"
	"fmt"
	"slices"
	"sync"

	"quietbus/study"
)

// An Explorer evaluates one prepared study many times and remembers every set
// it has evaluated. It is safe for concurrent use. An edited study needs a new
// one; Renewed keeps what the edit leaves as it was.
type Explorer struct {
	prepared *study.Prepared
	study    *study.Study
	states   []string
	clash    []uint64 // by measure: those that it cannot be together with
	pairs    []study.Conflict
	workers  int

	mu    sync.Mutex
	known map[uint64]Set
	idle  []*bench
}

// bench is what one goroutine evaluates with: one evaluator a state.
type bench struct{ quick []*study.Quick }

// MaxMeasures is the highest number of measures that a study may have here.
const MaxMeasures = 64

// New returns an explorer of a prepared study.
//
// Errors: more than MaxMeasures measures.
func New(p *study.Prepared) (*Explorer, error) {
	s := p.Study()
	if len(s.Measures) > MaxMeasures {
		return nil, &study.FieldError{Item: "study", Field: "measures", Problem: fmt.Sprintf("there are %d measures; combinations are made of up to %d", len(s.Measures), MaxMeasures), Remedy: "remove those that are out of the question"}
	}
	e := &Explorer{prepared: p, study: s, states: p.States(), clash: make([]uint64, len(s.Measures)), known: map[uint64]Set{}}
	for i := range s.Measures {
		for k := range i {
			if c := s.Conflicts([]string{s.Measures[k].Name, s.Measures[i].Name}); len(c) > 0 {
				e.clash[i] |= 1 << k
				e.clash[k] |= 1 << i
				e.pairs = append(e.pairs, c...)
			}
		}
	}
	return e, nil
}

// Workers sets the number of goroutines, 0 being one for each core.
func (e *Explorer) Workers(n int) { e.workers = n }

// Study returns the study that is explored.
func (e *Explorer) Study() *study.Study { return e.study }

// States returns the operating states, the normal one first.
func (e *Explorer) States() []string { return e.states }

// Names returns the names of the measures of a mask, in file order.
func (e *Explorer) Names(mask uint64) []string {
	var on []string
	for i := range e.study.Measures {
		if mask>>i&1 == 1 {
			on = append(on, e.study.Measures[i].Name)
		}
	}
	return on
}

// Mask returns the mask of named measures; names that are none are left out.
func (e *Explorer) Mask(on []string) (mask uint64) {
	for i := range e.study.Measures {
		if slices.Contains(on, e.study.Measures[i].Name) {
			mask |= 1 << i
		}
	}
	return mask
}

// Allowed reports whether the measures of a mask may be on together.
func (e *Explorer) Allowed(mask uint64) bool {
	for i := range e.clash {
		if mask>>i&1 == 1 && mask&e.clash[i] != 0 {
			return false
		}
	}
	return true
}

// cost returns what the measures of a mask cost together.
func (e *Explorer) cost(mask uint64) (sum float64) {
	for i := range e.study.Measures {
		if mask>>i&1 == 1 {
			sum += e.study.Measures[i].Cost
		}
	}
	return sum
}

// At returns one set, evaluated in every state unless it is known already.
//
// Errors: *study.ConflictError, cancellation. A set without a solution is no
// error: its Err says why.
func (e *Explorer) At(ctx context.Context, mask uint64) (Set, error) {
	if s, ok := e.Known(mask); ok {
		return s, nil
	}
	b, err := e.take()
	if err != nil {
		return Set{}, err
	}
	defer e.give(b)
	return e.evaluate(ctx, b, mask)
}

// Known returns a set that was evaluated before.
func (e *Explorer) Known(mask uint64) (Set, bool) {
	e.mu.Lock()
	defer e.mu.Unlock()
	s, ok := e.known[mask]
	return s, ok
}

// evaluate works a set out and remembers it.
func (e *Explorer) evaluate(ctx context.Context, b *bench, mask uint64) (Set, error) {
	briefs, err := e.briefs(ctx, b, mask)
	var s Set
	if err == nil {
		s = gather(mask, e.cost(mask), briefs)
	} else if ctx.Err() != nil {
		return Set{}, ctx.Err()
	} else if _, conflict := err.(*study.ConflictError); conflict {
		return Set{}, err
	} else if s, err = failed(mask, e.cost(mask), len(e.states), err); err != nil {
		return Set{}, err
	}
	e.mu.Lock()
	e.known[mask] = s
	e.mu.Unlock()
	return s, nil
}

// briefs evaluates a set in every state.
func (e *Explorer) briefs(ctx context.Context, b *bench, mask uint64) ([]*study.Brief, error) {
	on := e.Names(mask)
	briefs := make([]*study.Brief, len(b.quick))
	for i, q := range b.quick {
		var err error
		if briefs[i], err = q.Brief(ctx, on); err != nil {
			return nil, study.InState(q.State(), err)
		}
	}
	return briefs, nil
}

// take returns a bench that nobody uses.
func (e *Explorer) take() (*bench, error) {
	e.mu.Lock()
	if n := len(e.idle); n > 0 {
		b := e.idle[n-1]
		e.idle = e.idle[:n-1]
		e.mu.Unlock()
		return b, nil
	}
	e.mu.Unlock()
	b := &bench{}
	for _, state := range e.states {
		q, err := e.prepared.Quick(state)
		if err != nil {
			return nil, err
		}
		b.quick = append(b.quick, q)
	}
	return b, nil
}

func (e *Explorer) give(b *bench) {
	e.mu.Lock()
	e.idle = append(e.idle, b)
	e.mu.Unlock()
}
