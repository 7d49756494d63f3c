package campaigns

import (
	"runtime"
	"sync"
	"sync/atomic"
)

// sideBySide does n pieces of work on all cores, each once, and waits for them. A piece may only write what is its
// own, so that nothing depends on the number of cores. A fault in one of them is the caller's.
func sideBySide(n int, work func(i int)) {
	workers := min(runtime.GOMAXPROCS(0), n)
	if workers <= 1 {
		for i := range n {
			work(i)
		}
		return
	}
	var next atomic.Int64
	var wg sync.WaitGroup
	faults := make([]any, workers)
	for w := range workers {
		wg.Go(func() {
			defer func() { faults[w] = recover() }()
			for i := next.Add(1) - 1; i < int64(n); i = next.Add(1) - 1 {
				work(int(i))
			}
		})
	}
	wg.Wait()
	for _, f := range faults {
		if f != nil {
			panic(f)
		}
	}
}
