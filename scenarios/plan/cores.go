package plan

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
)

// onCores has the numbers 0 to n-1 worked on, shared between the cores; each
// core has a worker of its own. What a number gives must not depend on the
// others, so that the number of cores changes nothing. The error is the
// context's, where it ended first.
func onCores(ctx context.Context, n int, worker func() func(i int)) error {
	var next atomic.Int64
	var wait sync.WaitGroup
	for range min(runtime.GOMAXPROCS(0), n) {
		wait.Go(func() {
			work := worker()
			for i := int(next.Add(1)) - 1; i < n && ctx.Err() == nil; i = int(next.Add(1)) - 1 {
				work(i)
			}
		})
	}
	wait.Wait()
	return ctx.Err()
}
