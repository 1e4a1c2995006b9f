package explore

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
)

// each calls the jobs 0 to n-1 on a number of goroutines, 0 being one for each
// core. start makes what one goroutine needs and returns its job function. The
// first error cancels the rest; each returns when every goroutine has ended.
func each(ctx context.Context, workers, n int, start func() (job func(ctx context.Context, i int) error, stop func())) error {
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	workers = min(workers, n)
	ctx, cancel := context.WithCancelCause(ctx)
	defer cancel(nil)
	var next atomic.Int64
	var wait sync.WaitGroup
	for range workers {
		wait.Go(func() {
			job, stop := start()
			defer stop()
			for ctx.Err() == nil {
				i := int(next.Add(1)) - 1
				if i >= n {
					return
				}
				if err := job(ctx, i); err != nil {
					cancel(err)
					return
				}
			}
		})
	}
	wait.Wait()
	return context.Cause(ctx)
}
