package explore

import (
	"context"
	"errors"
	"math"
	"runtime"
	"slices"
	"testing"
	"time"

	"quietbus/study"
	"quietbus/testdata"
)

func named(name string) study.Named { return study.Named{Name: name} }

// demo is the invented demonstration in three operating states.
func demo(t testing.TB) *study.Study {
	t.Helper()
	s, err := study.Parse(testdata.Demo)
	if err != nil {
		t.Fatal(err)
	}
	s.Supplies[0].FaultMinMVA = 130
	s.OperatingStates = []study.OperatingState{{Named: named("Night"), Out: []string{"C2"}, LoadPercent: 40}, {Named: named("Weak supply"), FaultLevel: "min"}}
	return s
}

// thirty is the invented radial site of 30 buses with ten measures in four
// operating states.
func thirty(t testing.TB) *study.Study {
	t.Helper()
	s, err := study.Parse(testdata.Thirty)
	if err != nil {
		t.Fatal(err)
	}
	s.Measures = append(s.Measures,
		study.Measure{Named: named("High-pass"), Kind: study.HighPass, Bus: "B0", Kvar: 60, Order: 11},
		study.Measure{Named: named("Seventh"), Kind: study.SingleTuned, Bus: "B1", Kvar: 60, Order: 6.8},
		study.Measure{Named: named("Eleventh"), Kind: study.SingleTuned, Bus: "B2", Kvar: 40, Order: 10.7})
	for i := range s.Measures {
		s.Measures[i].Cost = 1000 * float64(5+i)
	}
	s.Supplies[0].FaultMinMVA, s.Supplies[0].FaultMaxMVA = 60, 1000
	s.OperatingStates = []study.OperatingState{{Named: named("Light"), LoadPercent: 50}, {Named: named("Weak"), FaultLevel: "min"}, {Named: named("Strong"), FaultLevel: "max", Out: []string{"CB6"}}}
	return s
}

func explorer(t testing.TB, s *study.Study) *Explorer {
	t.Helper()
	p, err := study.Prepare(s)
	if err != nil {
		t.Fatal(err)
	}
	e, err := New(p)
	if err != nil {
		t.Fatal(err)
	}
	return e
}

func combinations(t testing.TB, e *Explorer) *Combinations {
	t.Helper()
	c, err := e.Combinations(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// Every set equals its own single evaluation, worst over the states.
func TestEverySetEqualsItsOwnEvaluation(t *testing.T) {
	s := demo(t)
	e := explorer(t, s)
	c := combinations(t, e)
	if len(c.Sets)+c.LeftOut != 1<<len(s.Measures) || c.LeftOut == 0 || len(c.Conflicts) == 0 || c.Searched {
		t.Fatalf("%d sets, %d left out, %d conflicts", len(c.Sets), c.LeftOut, len(c.Conflicts))
	}
	p, err := study.Prepare(s)
	if err != nil {
		t.Fatal(err)
	}
	for i := range c.Sets {
		set := &c.Sets[i]
		on := e.Names(set.Mask)
		if i%7 == 0 { // the rest by the test of study.Quick
			all, err := p.EvaluateAll(context.Background(), on)
			if err != nil {
				t.Fatal(err)
			}
			worst := 0.0
			for _, o := range all {
				for k := range o.Points {
					worst = max(worst, o.Points[k].Worst().Share)
				}
			}
			if math.Abs(worst-set.Share) > 1e-9*worst {
				t.Errorf("%v: share %v, evaluated by itself %v", on, set.Share, worst)
			}
			if set.Passes() && !study.MeetsOver(all) || set.Cause == ByStress && !study.MeetsOver(all) {
				t.Errorf("%v: %q, but the limits are met: %v", on, set.Cause, study.MeetsOver(all))
			}
		}
		cost := 0.0
		for k := range s.Measures {
			if slices.Contains(on, s.Measures[k].Name) {
				cost += s.Measures[k].Cost
			}
		}
		if set.Cost != cost {
			t.Errorf("%v costs %v, not %v", on, cost, set.Cost)
		}
	}
	if c.Cheapest < 0 || c.Gentlest < 0 {
		t.Fatal("nothing passes in the demo")
	}
	for i := range c.Sets {
		if a, best := &c.Sets[i], &c.Sets[c.Cheapest]; a.Passes() && a.Cost < best.Cost {
			t.Errorf("%v passes for less than %v", e.Names(a.Mask), e.Names(best.Mask))
		}
		if a, best := &c.Sets[i], &c.Sets[c.Gentlest]; a.Passes() && a.Stress.Share < best.Stress.Share {
			t.Errorf("%v stresses less than %v", e.Names(a.Mask), e.Names(best.Mask))
		}
	}
}

// A set is dominated when, and only when, another is no worse on all counts
// and better on one: checked pair by pair.
func TestDominated(t *testing.T) {
	c := combinations(t, explorer(t, demo(t)))
	for i := range c.Sets {
		s, beaten := &c.Sets[i], false
		for k := range c.Sets {
			o := &c.Sets[k]
			beaten = beaten || o.Cost <= s.Cost && o.Share <= s.Share && o.Stress.Share <= s.Stress.Share &&
				(o.Cost < s.Cost || o.Share < s.Share || o.Stress.Share < s.Stress.Share)
		}
		if beaten != s.Dominated {
			t.Errorf("set %b: dominated %v, pair by pair %v", s.Mask, s.Dominated, beaten)
		}
	}
}

// The demo without measures fails by a resonance of its old bank near the
// seventh order, which its remark speaks of; taking the bank out ends that.
func TestCauses(t *testing.T) {
	e := explorer(t, demo(t))
	none, err := e.At(context.Background(), 0)
	if err != nil {
		t.Fatal(err)
	}
	if none.Cause != ByResonance || none.Resonance.Order != 7 || none.Resonance.Bus != "Compressors" {
		t.Errorf("without measures: %q, %+v, %s", none.Cause, none.Resonance, none.Row)
	}
	out, err := e.At(context.Background(), e.Mask([]string{"Remove C1"}))
	if err != nil {
		t.Fatal(err)
	}
	if out.Near() || out.Cause == ByResonance {
		t.Errorf("without the bank: %q, %+v", out.Cause, out.Resonance)
	}
	if _, err := e.At(context.Background(), e.Mask([]string{"Remove C1", "Detune C1"})); err == nil {
		t.Error("a set that excludes itself is evaluated")
	}
}

// Sets come as a stream, each once, and a second time from memory; one, two and
// four goroutines say the same.
func TestStreamAndWorkers(t *testing.T) {
	var first *Combinations
	for _, workers := range []int{1, 2, 4} {
		e := explorer(t, demo(t))
		e.Workers(workers)
		for range 2 {
			seen := map[uint64]int{}
			c, err := e.Combinations(context.Background(), func(s Set) { seen[s.Mask]++ })
			if err != nil {
				t.Fatal(err)
			}
			for i := range c.Sets {
				if seen[c.Sets[i].Mask] != 1 {
					t.Fatalf("set %b came %d times", c.Sets[i].Mask, seen[c.Sets[i].Mask])
				}
			}
			if first == nil {
				first = c
			}
			for i := range c.Sets {
				if a, b := c.Sets[i], first.Sets[i]; a.Share != b.Share || a.Stress != b.Stress || a.Cause != b.Cause || a.Dominated != b.Dominated {
					t.Fatalf("%d workers: %+v, one: %+v", workers, a, b)
				}
			}
		}
	}
}

// Work stops soon after it is cancelled, and leaves no goroutine behind.
func TestCancel(t *testing.T) {
	before := runtime.NumGoroutine()
	for _, after := range []int{0, 1, 5, 20} {
		e := explorer(t, demo(t))
		ctx, cancel := context.WithCancel(context.Background())
		n := 0
		_, err := e.Combinations(ctx, func(Set) {
			if n++; n > after {
				cancel()
			}
		})
		if !errors.Is(err, context.Canceled) {
			t.Fatalf("after %d sets: %v", after, err)
		}
		if n > after+8 {
			t.Errorf("%d sets came after the word to stop at %d", n, after)
		}
		cancel()
		if _, err := e.Combinations(context.Background(), nil); err != nil {
			t.Errorf("the explorer is of no use after a cancelled run: %v", err)
		}
	}
	for range 100 {
		if runtime.NumGoroutine() <= before {
			return
		}
		time.Sleep(time.Millisecond)
	}
	t.Errorf("%d goroutines, %d before", runtime.NumGoroutine(), before)
}

// Worth is the difference that single evaluations show.
func TestWorth(t *testing.T) {
	s := demo(t)
	e := explorer(t, s)
	on := []string{"Filter 5", "Reactor K1"}
	list, err := e.Worth(context.Background(), on)
	if err != nil {
		t.Fatal(err)
	}
	share := func(on []string) float64 {
		set, err := e.InFull(context.Background(), e.Mask(on))
		if err != nil {
			t.Fatal(err)
		}
		return set.Share
	}
	base, now := share(nil), share(on)
	for i, w := range list {
		next, _ := s.Switched(on, s.Measures[i].Name)
		for _, x := range []struct{ got, want float64 }{{w.Base, base}, {w.Now, now}, {w.Alone, share([]string{w.Name})}, {w.Flip, share(next)}} {
			if math.Abs(x.got-x.want) > 1e-9 {
				t.Errorf("%s: %+v; %v should be %v", w.Name, w, x.got, x.want)
			}
		}
		if w.Name == "Filter 5" && len(w.Loses) == 0 {
			t.Error("without the filter the seventh order is over again")
		}
		if w.Name == "Detune C1" && (len(w.Off) == 0 || w.Loses != nil) {
			t.Errorf("the detuning puts the filter off: %+v", w)
		}
	}
}

// With more measures than can all be combined a guided search says so, and
// finds on a study small enough to check what all sets give.
func TestGuidedSearch(t *testing.T) {
	s := demo(t)
	all := combinations(t, explorer(t, s))
	e := explorer(t, s)
	found, err := e.search(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	best := math.Inf(1)
	for i := range found {
		if found[i].Passes() {
			best = min(best, found[i].Cost)
		}
	}
	if want := all.Sets[all.Cheapest].Cost; best != want {
		t.Errorf("the search finds %v, all sets %v", best, want)
	}
	for i := range 8 {
		s.Measures = append(s.Measures, study.Measure{Named: named(string(rune('p' + i))), Kind: study.SingleTuned, Bus: "Yard", Kvar: 20 + 5*float64(i), Order: 4.8, Cost: 500})
	}
	c := combinations(t, explorer(t, s))
	if !c.Searched || c.Cheapest < 0 || c.LeftOut != 0 || len(c.Sets) > searchBudget {
		t.Errorf("searched %v, cheapest %d of %d", c.Searched, c.Cheapest, len(c.Sets))
	}
}

// A set that the network cannot bear is said to have no solution; the others
// are evaluated all the same.
func TestNoSolution(t *testing.T) {
	s := demo(t)
	s.Measures = append(s.Measures, study.Measure{Named: named("Far too much"), Kind: study.SingleTuned, Bus: "Office", Kvar: 90000, Order: 4.8})
	c := combinations(t, explorer(t, s))
	bad := 0
	for i := range c.Sets {
		set := &c.Sets[i]
		if set.Err != nil {
			bad++
			if set.Cause != NoSolution || set.Mask>>len(s.Measures)-1 == 0 && set.Mask>>(len(s.Measures)-1)&1 == 0 || set.Passes() {
				t.Errorf("%+v", set)
			}
		}
	}
	if bad == 0 || c.Cheapest < 0 {
		t.Errorf("%d sets without solution, cheapest %d", bad, c.Cheapest)
	}
}

// BenchmarkCombinations1024 is 1,024 sets in 4 operating states, 30 buses, 50
// orders, from a prepared study.
func BenchmarkCombinations1024(b *testing.B) {
	s := thirty(b)
	p, err := study.Prepare(s)
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		e, err := New(p)
		if err != nil {
			b.Fatal(err)
		}
		c, err := e.Combinations(context.Background(), nil)
		if err != nil || len(c.Sets) != 1024 {
			b.Fatal(len(c.Sets), err)
		}
	}
}
