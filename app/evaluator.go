package main

import (
	"context"
	"fmt"
	"runtime/debug"
	"slices"
	"sync"
	"time"

	"quietbus/study"
	"quietbus/study/phasor"
)

// A Job asks for the picture of one study at one switch position. The study
// must not change any more.
type Job struct {
	Study   *study.Study // the project's base: its own switches do not count
	On      []string     // measures that are on
	ScanBus string       // bus whose impedance is wanted, "" for none
	Asked   time.Time
}

// A Picture is all that the window shows of one job.
type Picture struct {
	Job
	Before, After         *study.Outcome    // After is nil when Err is not
	ScanBefore, ScanAfter *study.ScanResult // nil when no scan was wanted or possible
	ScanErr               error             // why there is no scan
	Err                   error
	Took                  time.Duration // for the numbers alone
}

// An Evaluator turns jobs into pictures off the main routine. The newest job
// wins: an older one is cancelled and its picture never shown.
type Evaluator struct {
	post func(func()) // runs a function on the main routine
	show func(*Picture)
	work func(context.Context, Job) *Picture

	// More, when set, goes on after a picture was handed over, as long as no
	// newer job waits; what it returns is run on the main routine unless the
	// picture is obsolete by then. It is set before the first job.
	More func(context.Context, *Picture) func()

	mu      sync.Mutex
	wake    chan struct{}
	pending *Job
	newest  int // number of the newest job
	cancel  context.CancelFunc
	stopped bool
	done    chan struct{}

	inbox   []delivery    // for the main routine
	arrived chan struct{} // something is in the inbox
}

// A delivery is what a job has for the main routine.
type delivery struct {
	number int // of the job
	run    func()
}

// NewEvaluator starts an evaluator that hands each picture to show by way of
// post (fyne.Do in the window), and what each measure is worth to worth a
// little later. Stop ends it.
func NewEvaluator(post func(func()), show func(*Picture), worth func(*Worths)) *Evaluator {
	b := new(bench)
	e := newEvaluator(post, show, b.picture)
	e.More = func(ctx context.Context, p *Picture) func() {
		if found := b.worths(ctx, p); found != nil {
			return func() { worth(found) }
		}
		return nil
	}
	return e
}

func newEvaluator(post func(func()), show func(*Picture), work func(context.Context, Job) *Picture) *Evaluator {
	e := &Evaluator{post: post, show: show, work: work, wake: make(chan struct{}, 1), done: make(chan struct{}),
		arrived: make(chan struct{}, 1)}
	go e.loop()
	return e
}

// Submit asks for a picture and makes every earlier job obsolete.
func (e *Evaluator) Submit(j Job) {
	if j.Asked.IsZero() {
		j.Asked = time.Now()
	}
	e.mu.Lock()
	defer e.mu.Unlock()
	if e.stopped {
		return
	}
	e.newest++
	e.pending = &j
	if e.cancel != nil {
		e.cancel()
	}
	select {
	case e.wake <- struct{}{}:
	default:
	}
}

// Stop cancels what is going on and waits for its end. No picture is shown
// after it.
func (e *Evaluator) Stop() {
	e.mu.Lock()
	if e.stopped {
		e.mu.Unlock()
		return
	}
	e.stopped = true
	e.newest++
	if e.cancel != nil {
		e.cancel()
	}
	close(e.wake)
	e.mu.Unlock()
	<-e.done
}

func (e *Evaluator) loop() {
	defer close(e.done)
	for range e.wake {
		e.mu.Lock()
		job, number := e.pending, e.newest
		e.pending = nil
		if job == nil || e.stopped {
			e.mu.Unlock()
			continue
		}
		ctx, cancel := context.WithCancel(context.Background())
		e.cancel = cancel
		e.mu.Unlock()

		pic := e.guarded(ctx, *job)
		if ctx.Err() == nil {
			e.deliver(number, func() { e.show(pic) })
			if then := e.guardedMore(ctx, pic); then != nil && ctx.Err() == nil {
				e.deliver(number, then)
			}
		}
		cancel()
	}
}

// deliver runs f on the main routine if the job of that number is still the
// newest by then.
func (e *Evaluator) deliver(number int, f func()) {
	e.mu.Lock()
	e.inbox = append(e.inbox, delivery{number, f})
	e.mu.Unlock()
	select {
	case e.arrived <- struct{}{}:
	default:
	}
	e.post(e.drain)
}

// drain runs what has been delivered. It runs on the main routine.
func (e *Evaluator) drain() {
	for {
		e.mu.Lock()
		if len(e.inbox) == 0 {
			e.mu.Unlock()
			return
		}
		next := e.inbox[0]
		e.inbox = e.inbox[1:]
		current := next.number == e.newest
		e.mu.Unlock()
		if current {
			next.run()
		}
	}
}

// Await gives the newest job a short while, so that its picture is shown in the
// same frame as the switch that asked for it. It is called on the main routine.
func (e *Evaluator) Await(limit time.Duration) {
	timeout := time.NewTimer(limit)
	defer timeout.Stop()
	for {
		select {
		case <-e.arrived:
			e.mu.Lock()
			current := len(e.inbox) > 0 && e.inbox[len(e.inbox)-1].number == e.newest
			e.mu.Unlock()
			e.drain()
			if current {
				return
			}
		case <-timeout.C:
			return
		}
	}
}

// guardedMore leaves the extra work undone when the engine fails in it: the
// picture itself is shown already.
func (e *Evaluator) guardedMore(ctx context.Context, pic *Picture) (then func()) {
	if e.More == nil || pic.Err != nil {
		return nil
	}
	defer func() {
		if recover() != nil {
			then = nil
		}
	}()
	return e.More(ctx, pic)
}

// guarded turns a panic of the engine into an error on the picture.
func (e *Evaluator) guarded(ctx context.Context, j Job) (pic *Picture) {
	defer func() {
		if r := recover(); r != nil {
			pic = &Picture{Job: j, Err: &InternalError{Problem: fmt.Sprint(r), Stack: string(debug.Stack())}}
		}
	}()
	return e.work(ctx, j)
}

// InternalError is a mistake of this program, not of the study.
type InternalError struct{ Problem, Stack string }

func (e *InternalError) Error() string {
	return "internal failure: " + e.Problem + ". The study is unharmed; please save it and report this."
}

// A bench keeps between jobs what does not depend on the switches: the study
// prepared for evaluation, the outcome without measures and its scans. It is
// used by one routine.
type bench struct {
	study    *study.Study
	prepared *study.Prepared
	err      error
	before   *study.Outcome
	scans    map[string]*study.ScanResult // before, by bus
	alone    map[string]float64           // worst limit share with one measure alone
}

// picture works one job out.
func (b *bench) picture(ctx context.Context, j Job) *Picture {
	start := time.Now()
	pic := &Picture{Job: j}
	defer func() { pic.Took = time.Since(start) }()

	if b.study != j.Study {
		*b = bench{study: j.Study, scans: map[string]*study.ScanResult{}, alone: map[string]float64{}}
		b.prepared, b.err = study.Prepare(j.Study)
	}
	if b.err != nil {
		pic.Err = b.err
		return pic
	}
	if b.before == nil {
		before, err := b.prepared.Evaluate(ctx, nil)
		if err != nil {
			pic.Err = err
			return pic
		}
		b.before = before
	}
	pic.Before, pic.After = b.before, b.before
	if len(j.On) > 0 {
		after, err := b.prepared.Evaluate(ctx, j.On)
		if err != nil {
			pic.After, pic.Err = nil, err
			return pic
		}
		pic.After = after
	}
	if j.ScanBus != "" {
		pic.ScanBefore, pic.ScanAfter, pic.ScanErr = b.scan(ctx, j)
	}
	return pic
}

func (b *bench) scan(ctx context.Context, j Job) (before, after *study.ScanResult, err error) {
	known := slices.ContainsFunc(b.study.Buses, func(s study.Bus) bool { return s.Name == j.ScanBus })
	if !known { // an outlet behind a low-pass measure, or a bus that is gone
		return nil, nil, fmt.Errorf("no impedance scan is made at %s, which is not a bus of the study itself", j.ScanBus)
	}
	look := func(on []string) (*study.ScanResult, error) {
		return b.prepared.Impedance(ctx, on, j.ScanBus, phasor.Positive, 1, float64(b.study.Order()))
	}
	before = b.scans[j.ScanBus]
	if before == nil {
		if before, err = look(nil); err != nil {
			return nil, nil, err
		}
		b.scans[j.ScanBus] = before
	}
	if len(j.On) == 0 {
		return before, before, nil
	}
	after, err = look(j.On)
	return before, after, err
}
