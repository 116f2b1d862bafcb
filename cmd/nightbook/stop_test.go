package main

import (
	"context"
	"errors"
	"io"
	"runtime"
	"sync/atomic"
	"testing"
	"time"

	"nightbook/samples"
)

// patience is a context that ends when it has been asked often enough.
type patience struct {
	context.Context
	left atomic.Int64
}

func (p *patience) Err() error {
	if p.left.Add(-1) < 0 {
		return context.Canceled
	}
	return nil
}

// A run can be stopped at any step, up to the last one of sealing the results,
// and leaves nothing.
func TestStopsAnywhere(t *testing.T) {
	dir := t.TempDir() + "/demo"
	if err := samples.Demo(dir, 300, 1); err != nil {
		t.Fatal(err)
	}
	// run is a run that is stopped when it has asked for the right time to go on.
	run := func(patient int64) (asked int64, err error) {
		out := t.TempDir()
		ctx := &patience{Context: context.Background()}
		ctx.left.Store(patient)
		_, err = pipeline(ctx, &options{snapshot: dir, out: out, formats: []string{"xlsx", "parquet", "csv"}, workers: 1}, newConsole(io.Discard, "text"))
		if err != nil && !errors.Is(err, context.Canceled) {
			t.Errorf("stopped at step %d: %v", patient, err)
		}
		if err != nil {
			if found := filesIn(t, out); len(found) > 0 {
				t.Errorf("stopped at step %d: %v is left", patient, found)
			}
		}
		return patient - ctx.left.Load(), err
	}
	all, err := run(1 << 40)
	if err != nil || all < 50 {
		t.Fatalf("%d steps at which the run can be stopped, %v", all, err)
	}
	stopped := 0
	for step := int64(0); step < all; step++ {
		if _, err := run(step); err != nil {
			stopped++
		}
		if step < all-8 { // some of them, and the last ones all
			step = min(step+all/30, all-8)
		}
	}
	if stopped < 30 {
		t.Errorf("stopped %d times", stopped)
	}
}

// A run of several workers, whose rows are written beside what formats them, ends
// when all of it has ended: nothing is left, neither files nor goroutines.
func TestStopsAllWorkers(t *testing.T) {
	dir := t.TempDir() + "/demo"
	if err := samples.Demo(dir, 10_000, 1); err != nil {
		t.Fatal(err)
	}
	before := runtime.NumGoroutine()
	run := func(patient int64) (asked int64, err error) {
		out := t.TempDir()
		ctx := &patience{Context: context.Background()}
		ctx.left.Store(patient)
		_, err = pipeline(ctx, &options{snapshot: dir, out: out, formats: []string{"csv"}, workers: 3}, newConsole(io.Discard, "text"))
		left := ctx.left.Load()
		time.Sleep(10 * time.Millisecond)
		if n := left - ctx.left.Load(); n > 0 {
			t.Errorf("stopped at step %d: something goes on, and asks %d times whether it may", patient, n)
		}
		for wait := 0; runtime.NumGoroutine() > before; wait++ {
			if wait == 1000 {
				t.Fatalf("stopped at step %d: %d goroutines more", patient, runtime.NumGoroutine()-before)
			}
			time.Sleep(time.Millisecond)
		}
		if err != nil && (!errors.Is(err, context.Canceled) || len(filesIn(t, out)) > 0) {
			t.Errorf("stopped at step %d: %v, %v is left", patient, err, filesIn(t, out))
		}
		return patient - left, err
	}
	all, err := run(1 << 40)
	if err != nil {
		t.Fatal(err)
	}
	stopped := 0
	for step := range int64(24) {
		if _, err := run(all * step / 24); err != nil {
			stopped++
		}
	}
	if stopped < 12 {
		t.Errorf("stopped %d times", stopped)
	}
}
