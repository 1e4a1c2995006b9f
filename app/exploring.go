package main

import (
	"context"
	"fmt"
	"runtime"
	"strings"
	"sync"
	"time"

	"quietbus/study"
	"quietbus/study/explore"
	"quietbus/study/figure"
)

// An Exploring evaluates every set of measures of a study in the background.
// The newest study wins: work on an older one is cancelled and nothing of it is
// shown.
type Exploring struct {
	post  func(func()) // runs a function on the main routine
	show  func(*Explored)
	delay time.Duration // how long a study must rest before work on it begins

	mu      sync.Mutex
	study   *study.Study
	cancel  context.CancelFunc
	done    sync.WaitGroup
	stopped bool
}

// Explored is what is known so far of the sets of one study.
type Explored struct {
	Study    *study.Study
	Explorer *explore.Explorer
	Sets     []explore.Set
	Whole    *explore.Combinations // nil while sets are still to come
	Err      error
	Took     time.Duration
}

// NewExploring hands what it finds to show by way of post: now and then while
// it works, and at the end.
func NewExploring(post func(func()), show func(*Explored)) *Exploring {
	return &Exploring{post: post, show: show, delay: 300 * time.Millisecond}
}

// Explore begins with a study that will not change any more. Asking for the
// same study again does nothing.
func (e *Exploring) Explore(s *study.Study) {
	e.mu.Lock()
	defer e.mu.Unlock()
	if e.stopped || e.study == s {
		return
	}
	if e.cancel != nil {
		e.cancel()
	}
	e.study = s
	if len(s.Measures) == 0 {
		e.cancel = nil
		return
	}
	ctx, cancel := context.WithCancel(context.Background())
	e.cancel = cancel
	e.done.Add(1)
	go func() {
		defer e.done.Done()
		defer cancel()
		e.work(ctx, s)
	}()
}

// Stop cancels what is going on and waits for its end.
func (e *Exploring) Stop() {
	e.mu.Lock()
	e.stopped = true
	if e.cancel != nil {
		e.cancel()
	}
	e.mu.Unlock()
	e.done.Wait()
}

// work explores one study.
func (e *Exploring) work(ctx context.Context, s *study.Study) {
	rest := time.NewTimer(e.delay)
	defer rest.Stop()
	select {
	case <-ctx.Done():
		return
	case <-rest.C:
	}
	start := time.Now()
	x := Explored{Study: s}
	last := time.Time{}
	x.Err = guard(func() error {
		p, err := study.Prepare(s)
		if err != nil {
			return err
		}
		if x.Explorer, err = explore.New(p); err != nil {
			return err
		}
		x.Explorer.Workers(max(1, runtime.NumCPU()-1)) // one is left for the switches
		x.Whole, err = x.Explorer.Combinations(ctx, func(set explore.Set) {
			x.Sets = append(x.Sets, set)
			if time.Since(last) > 200*time.Millisecond {
				last = time.Now()
				e.tell(ctx, x)
			}
		})
		return err
	})
	if x.Whole != nil {
		x.Sets = x.Whole.Sets
	}
	x.Took = time.Since(start)
	e.tell(ctx, x)
}

// tell shows a copy of what is known, unless a newer study is at work.
func (e *Exploring) tell(ctx context.Context, x Explored) {
	if ctx.Err() != nil {
		return
	}
	x.Sets = x.Sets[:len(x.Sets):len(x.Sets)]
	e.post(func() {
		if e.newest(x.Study) {
			e.show(&x)
		}
	})
}

func (e *Exploring) newest(s *study.Study) bool {
	e.mu.Lock()
	defer e.mu.Unlock()
	return e.study == s && !e.stopped
}

// guard turns a panic of the engine into an error.
func guard(f func() error) (err error) {
	defer func() {
		if r := recover(); r != nil {
			err = &InternalError{Problem: fmt.Sprint(r)}
		}
	}()
	return f()
}

// Marks returns the strip's marks. on are the measures that are on now.
func (x *Explored) Marks(on []string) []figure.SetMark {
	if x == nil || x.Explorer == nil {
		return nil
	}
	now := x.Explorer.Mask(on)
	out := make([]figure.SetMark, 0, len(x.Sets))
	for i := range x.Sets {
		s := &x.Sets[i]
		m := figure.SetMark{ID: fmt.Sprint(s.Mask), Cost: s.Cost, Share: s.Share, Cause: string(s.Cause), Faded: s.Dominated, Now: s.Mask == now}
		if x.Whole != nil {
			switch i {
			case x.Whole.Cheapest:
				m.Named = "least cost"
				if i == x.Whole.Gentlest {
					m.Named = "least cost and stress"
				}
			case x.Whole.Gentlest:
				m.Named = "least stress"
			}
		}
		m.Detail = x.detail(s)
		out = append(out, m)
	}
	return out
}

// SetName names a set of measures: "Filter 5 + Detune C1".
func (x *Explored) SetName(mask uint64) string {
	if mask == 0 {
		return "no measure"
	}
	return strings.Join(x.Explorer.Names(mask), " + ")
}

// detail says in lines what a set comes to.
func (x *Explored) detail(s *explore.Set) string {
	text := x.SetName(s.Mask)
	if s.Cost > 0 {
		text += "\ncost\t" + grouped(s.Cost)
	}
	if s.Row != "" {
		text += fmt.Sprintf("\nclosest to its limit\t%s, %s: %.3g %%", s.Point, s.Row, 100*s.Share)
		if len(x.Explorer.States()) > 1 {
			text += "\nin state\t" + s.State
		}
	}
	if s.Stress.Share > 0 {
		text += fmt.Sprintf("\nhardest stressed\t%s: %.3g %%", s.Stress.Item, 100*s.Stress.Share)
	}
	text += "\n" + causeWords(s)
	return text
}

// causeWords says why a set passes or not.
func causeWords(s *explore.Set) string {
	switch s.Cause {
	case explore.Passes:
		return "meets every limit in every state"
	case explore.ByLimit:
		return "does not pass: over a limit"
	case explore.ByResonance:
		return fmt.Sprintf("does not pass: over a limit at a resonance near order %d", s.Resonance.Order)
	case explore.ByStress:
		return "does not pass: a part is overloaded"
	case explore.NoSolution:
		return "no solution: " + errorText(s.Err)
	}
	return "does not count as passing: not everything is assessed"
}

// Words sums up in sentences what is known of all sets.
func (x *Explored) Words() string {
	switch {
	case x == nil:
		return "Sets of measures are being worked out."
	case x.Err != nil:
		return "Sets of measures: " + errorText(x.Err)
	case x.Whole == nil:
		return fmt.Sprintf("%s worked out so far.", count(len(x.Sets), "set"))
	}
	passing := 0
	for i := range x.Sets {
		if x.Sets[i].Passes() {
			passing++
		}
	}
	states := ""
	if n := len(x.Whole.States); n > 1 {
		states = fmt.Sprintf(" in %d operating states", n)
	}
	text := fmt.Sprintf("%s%s in %s s; %d meet everything.", count(len(x.Sets), "set"), states, short(x.Took.Seconds()), passing)
	if x.Whole.Searched {
		text += " A guided search looked at these; there may be a better one."
	}
	if x.Whole.LeftOut > 0 {
		text += fmt.Sprintf(" %s with measures that exclude each other left out.", count(x.Whole.LeftOut, "set"))
	}
	if c := x.Whole.Cheapest; c >= 0 {
		text += fmt.Sprintf(" Least cost: %s.", x.SetName(x.Sets[c].Mask))
	}
	if g := x.Whole.Gentlest; g >= 0 && g != x.Whole.Cheapest {
		text += fmt.Sprintf(" Least stress: %s.", x.SetName(x.Sets[g].Mask))
	}
	return text
}
