package study

import (
	"context"
	"runtime"
	"sync"

	"example.org/tailback/ctm"
)

// RunAll runs scenarios on all cores and returns their results in the same order. The first error in that order is
// returned and stops the runs that have not begun. Progress is the sum over the runs.
func RunAll(ctx context.Context, scenarios []*ctm.Scenario, opt *Options) ([]*Result, error) {
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	results := make([]*Result, len(scenarios))
	errs := make([]error, len(scenarios))
	sum := &sharedProgress{tell: opt.Progress, done: make([]float64, len(scenarios)), total: make([]float64, len(scenarios))}
	next := make(chan int)
	var wait sync.WaitGroup
	for range min(runtime.GOMAXPROCS(0), len(scenarios)) {
		wait.Go(func() {
			for i := range next {
				own := *opt
				own.Progress = sum.of(i)
				if results[i], errs[i] = Run(ctx, scenarios[i], &own); errs[i] != nil {
					cancel()
				}
			}
		})
	}
	for i := range scenarios {
		next <- i
	}
	close(next)
	wait.Wait()
	return results, firstError(errs)
}

// firstError is the first error that is not the consequence of another one's.
func firstError(errs []error) error {
	var stopped error
	for _, err := range errs {
		switch {
		case err == nil:
		case err == context.Canceled:
			stopped = err
		default:
			return err
		}
	}
	return stopped
}

// sharedProgress adds up the progress of runs side by side.
type sharedProgress struct {
	lock        sync.Mutex
	tell        func(done, total float64)
	done, total []float64
}

// of is the progress function of run i, nil where nobody listens.
func (p *sharedProgress) of(i int) func(done, total float64) {
	if p.tell == nil {
		return nil
	}
	return func(done, total float64) {
		p.lock.Lock()
		defer p.lock.Unlock()
		p.done[i] = done
		for k := range p.total { // runs of one study have one period
			p.total[k] = total
		}
		sum, all := 0.0, 0.0
		for k := range p.done {
			sum, all = sum+p.done[k], all+p.total[k]
		}
		p.tell(sum, all)
	}
}
