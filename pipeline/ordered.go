package pipeline

import "sync"

// ordered runs work on blocks 0 to n-1 with the given workers and hands the
// results to consume in block order, on the caller's goroutine. At most
// 2 x workers results wait at a time, so memory does not grow with n. worker
// numbers the goroutine, for scratch memory of its own. The first error of
// consume or work ends it; blocks under way are finished and dropped.
func ordered[R any](n, workers int, work func(worker, block int) (R, error), consume func(block int, r R) error) error {
	type result struct {
		r   R
		err error
	}
	workers = max(1, min(workers, n))
	window := make(chan chan result, 2*workers)
	jobs := make(chan struct {
		block int
		to    chan result
	})
	stop := make(chan struct{})
	var wg sync.WaitGroup
	for w := range workers {
		wg.Go(func() {
			for j := range jobs {
				r, err := work(w, j.block)
				j.to <- result{r, err}
			}
		})
	}
	wg.Go(func() {
		defer close(window)
		defer close(jobs)
		for b := range n {
			to := make(chan result, 1)
			select {
			case window <- to:
			case <-stop:
				return
			}
			jobs <- struct {
				block int
				to    chan result
			}{b, to}
		}
	})
	var err error
	b := 0
	for to := range window {
		if err != nil {
			continue // drain, so that the feeder ends
		}
		r := <-to
		if err = r.err; err == nil {
			err = consume(b, r.r)
		}
		if err != nil {
			close(stop)
		}
		b++
	}
	wg.Wait()
	return err
}
