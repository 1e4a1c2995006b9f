package main

import (
	"context"
	"fmt"
	"strconv"
	"sync"
	"testing"
	"time"
)

// mainRoutine stands in for the window's: posted functions run on it in order.
type mainRoutine struct{ queue chan func() }

func newMainRoutine(t *testing.T) *mainRoutine {
	m := &mainRoutine{make(chan func(), 1000)}
	done := make(chan struct{})
	go func() {
		defer close(done)
		for f := range m.queue {
			f()
		}
	}()
	t.Cleanup(func() { close(m.queue); <-done })
	return m
}

func (m *mainRoutine) post(f func()) { m.queue <- f }

// do runs f on the main routine and waits for it.
func (m *mainRoutine) do(f func()) {
	done := make(chan struct{})
	m.queue <- func() { f(); close(done) }
	<-done
}

func TestEvaluatorNewestWinsRace(t *testing.T) {
	m := newMainRoutine(t)
	var mu sync.Mutex
	begun := 0
	work := func(ctx context.Context, j Job) *Picture {
		mu.Lock()
		begun++
		mu.Unlock()
		select {
		case <-ctx.Done():
		case <-time.After(2 * time.Millisecond):
		}
		return &Picture{Job: j}
	}
	asked := 0 // both belong to the main routine
	var shown []int
	last := make(chan struct{})
	e := newEvaluator(m.post, func(p *Picture) {
		if p.ScanBus != strconv.Itoa(asked) {
			t.Errorf("picture %s shown while %d is asked for", p.ScanBus, asked)
		}
		shown = append(shown, asked)
		if asked == 300 {
			close(last)
		}
	}, work)
	for i := 1; i <= 300; i++ {
		m.do(func() {
			asked = i
			e.Submit(Job{ScanBus: strconv.Itoa(i)})
		})
		if i%50 == 0 {
			time.Sleep(10 * time.Millisecond)
		}
	}
	select {
	case <-last:
	case <-time.After(5 * time.Second):
		t.Fatal("the picture of the newest job never came")
	}
	e.Stop()
	m.do(func() {
		for i := 1; i < len(shown); i++ {
			if shown[i] <= shown[i-1] {
				t.Errorf("pictures out of order: %v", shown)
			}
		}
		if len(shown) > begun || len(shown) < 1 {
			t.Errorf("%d pictures of %d jobs begun", len(shown), begun)
		}
	})
}

func TestEvaluatorCancelsObsoleteRace(t *testing.T) {
	m := newMainRoutine(t)
	begun, ended := make(chan struct{}, 1), make(chan error, 1)
	got := make(chan string, 10)
	work := func(ctx context.Context, j Job) *Picture {
		if j.ScanBus == "1" {
			begun <- struct{}{}
			<-ctx.Done() // would hang for ever without cancellation
			ended <- ctx.Err()
		}
		return &Picture{Job: j}
	}
	e := newEvaluator(m.post, func(p *Picture) { got <- p.ScanBus }, work)
	defer e.Stop()
	e.Submit(Job{ScanBus: "1"})
	<-begun
	e.Submit(Job{ScanBus: "2"})
	select {
	case err := <-ended:
		if err != context.Canceled {
			t.Fatalf("ended with %v", err)
		}
	case <-time.After(5 * time.Second):
		t.Fatal("the obsolete job was not cancelled")
	}
	if n := <-got; n != "2" {
		t.Fatalf("picture of job %s, want 2", n)
	}
}

func TestEvaluatorAwaitShowsAtOnceRace(t *testing.T) {
	m := newMainRoutine(t)
	shown := ""
	e := newEvaluator(m.post, func(p *Picture) { shown = p.ScanBus }, func(ctx context.Context, j Job) *Picture {
		if j.ScanBus == "slow" {
			<-ctx.Done()
		}
		return &Picture{Job: j}
	})
	defer e.Stop()
	m.do(func() {
		for i := range 50 {
			want := strconv.Itoa(i)
			e.Submit(Job{ScanBus: "slow"})
			e.Submit(Job{ScanBus: want})
			if e.Await(5 * time.Second); shown != want {
				t.Errorf("after waiting for %s the picture is %s", want, shown)
			}
		}
		start := time.Now()
		e.Submit(Job{ScanBus: "slow"})
		if e.Await(10 * time.Millisecond); shown == "slow" || time.Since(start) > time.Second {
			t.Errorf("waiting for a slow job took %s, shown %s", time.Since(start), shown)
		}
	})
}

func TestEvaluatorStopShowsNothingMoreRace(t *testing.T) {
	m := newMainRoutine(t)
	begun := make(chan struct{})
	e := newEvaluator(m.post, func(p *Picture) { t.Error("shown after Stop") }, func(ctx context.Context, j Job) *Picture {
		close(begun)
		<-ctx.Done()
		return &Picture{Job: j}
	})
	e.Submit(Job{ScanBus: "1"})
	<-begun
	e.Stop()
	e.Submit(Job{ScanBus: "2"})
	m.do(func() {})
}

func TestEvaluatorSurvivesPanicRace(t *testing.T) {
	m := newMainRoutine(t)
	got := make(chan *Picture, 2)
	e := newEvaluator(m.post, func(p *Picture) { got <- p }, func(ctx context.Context, j Job) *Picture {
		if j.ScanBus == "1" {
			panic(fmt.Sprint("index out of range"))
		}
		return &Picture{Job: j}
	})
	defer e.Stop()
	e.Submit(Job{ScanBus: "1"})
	p := <-got
	if _, ok := p.Err.(*InternalError); !ok {
		t.Fatalf("error %T, want *InternalError", p.Err)
	}
	e.Submit(Job{ScanBus: "2"})
	if p := <-got; p.Err != nil || p.ScanBus != "2" {
		t.Fatalf("after a panic: %+v", p)
	}
}

// TestPictureOfAnotherStudyIsNotMixedUp opens two studies one after the other:
// what was kept of the first must not colour the second.
func TestPictureOfAnotherStudyIsNotMixedUp(t *testing.T) {
	first, second := small(), small()
	second.NonlinearLoads[0].KW = 30
	b := new(bench)
	a := b.picture(context.Background(), Job{Study: NewProject(first).Base()})
	c := b.picture(context.Background(), Job{Study: NewProject(second).Base(), ScanBus: "LV"})
	if a.Err != nil || c.Err != nil {
		t.Fatal(a.Err, c.Err)
	}
	if x, y := worstShare(a.After), worstShare(c.After); !(y < x/2) {
		t.Errorf("worst limit %.3g for 300 kW and %.3g for 30 kW", x, y)
	}
	if c.ScanAfter == nil || c.ScanErr != nil {
		t.Errorf("no scan: %v", c.ScanErr)
	}
}

// TestPictureKeepsBefore flips a measure: the before must be the same object,
// not computed again, and the after the one of the new switch position.
func TestPictureKeepsBefore(t *testing.T) {
	s := small()
	b := new(bench)
	off := b.picture(context.Background(), Job{Study: s, ScanBus: "LV"})
	on := b.picture(context.Background(), Job{Study: s, On: []string{"Detune C1"}, ScanBus: "LV"})
	if off.Err != nil || on.Err != nil {
		t.Fatal(off.Err, on.Err)
	}
	if on.Before != off.Before || on.ScanBefore != off.ScanBefore {
		t.Error("the before was computed again for a switch")
	}
	if on.After == on.Before || worstShare(on.After) >= worstShare(on.Before) {
		t.Errorf("detuning the bank: worst limit %.3g before, %.3g after", worstShare(on.Before), worstShare(on.After))
	}
	w := b.worths(context.Background(), on)
	if w == nil || w.Alone["Detune C1"] != worstShare(on.After) || w.Flip["Detune C1"] != worstShare(on.Before) {
		t.Errorf("what detuning is worth: %+v", w)
	}
}

func BenchmarkFlip(b *testing.B) {
	s, err := demoStudy()
	if err != nil {
		b.Fatal(err)
	}
	bench := new(bench)
	bus := s.Assessments[0].Bus
	on := [][]string{nil, {s.Measures[0].Name}}
	for i := 0; b.Loop(); i++ {
		if p := bench.picture(context.Background(), Job{Study: s, On: on[i%2], ScanBus: bus}); p.Err != nil {
			b.Fatal(p.Err)
		}
	}
}
