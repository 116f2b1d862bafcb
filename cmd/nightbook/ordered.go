package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"runtime/debug"
	"sync"
)

// ordered runs jobs through three steps: next fills them one after the other,
// work treats them on as many goroutines as there are workers, and done takes
// them one after the other in the order in which next filled them.
//
// The jobs are recycled: there are never more of them than make gave, so a slow
// done holds next back, and memory is bounded. next ends the stream with io.EOF.
// The first error of any step ends the others, and is returned once none of
// them runs any more.
func ordered[J any](ctx context.Context, jobs []*J, workers int, next func(*J) error, work func(worker int, j *J) error, done func(*J) error) error {
	ctx, cancel := context.WithCancelCause(ctx)
	defer cancel(nil)

	type ticket struct {
		job   *J
		ready chan struct{}
	}
	free := make(chan *J, len(jobs))
	for _, j := range jobs {
		free <- j
	}
	todo := make(chan ticket, len(jobs))
	line := make(chan ticket, len(jobs)) // in order

	var wg sync.WaitGroup
	defer wg.Wait()
	defer cancel(nil) // runs before wg.Wait

	wg.Go(func() {
		defer close(todo)
		defer close(line)
		defer caught(cancel)
		for {
			select {
			case <-ctx.Done():
				return
			case j := <-free:
				if err := next(j); err != nil {
					if !errors.Is(err, io.EOF) {
						cancel(err)
					}
					return
				}
				t := ticket{j, make(chan struct{})}
				todo <- t // never blocks: there are no more tickets than jobs
				line <- t
			}
		}
	})
	for n := range workers {
		wg.Go(func() {
			for t := range todo {
				if ctx.Err() == nil {
					if err := guarded(func() error { return work(n, t.job) }); err != nil {
						cancel(err)
					}
				}
				close(t.ready)
			}
		})
	}
	for t := range line {
		<-t.ready
		if ctx.Err() != nil {
			break
		}
		if err := done(t.job); err != nil {
			return err
		}
		free <- t.job
	}
	return context.Cause(ctx)
}

// guarded runs f and makes an error of a panic: a fault of the program must
// still let the run end in order, with nothing half-made left behind.
func guarded(f func() error) (err error) {
	defer func() {
		if p := recover(); p != nil {
			err = fault(p)
		}
	}()
	return f()
}

// caught ends the stream with the panic of the goroutine that defers it.
func caught(cancel context.CancelCauseFunc) {
	if p := recover(); p != nil {
		cancel(fault(p))
	}
}

func fault(p any) error {
	return fmt.Errorf("a fault of the program, nothing is written: %v\n%s", p, debug.Stack())
}
