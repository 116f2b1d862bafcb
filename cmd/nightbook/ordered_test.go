package main

import (
	"context"
	"errors"
	"io"
	"math/rand/v2"
	"runtime"
	"strings"
	"testing"
	"time"
)

type numbered struct{ n int }

func numberedJobs(n int) []*numbered {
	jobs := make([]*numbered, n)
	for i := range jobs {
		jobs[i] = new(numbered)
	}
	return jobs
}

func upTo(n int) func(*numbered) error {
	i := 0
	return func(j *numbered) error {
		if i == n {
			return io.EOF
		}
		j.n = i
		i++
		return nil
	}
}

func TestOrderedKeepsOrder(t *testing.T) {
	for workers := 1; workers <= 8; workers++ {
		got := 0
		err := ordered(context.Background(), numberedJobs(2*workers+1), workers, upTo(500),
			func(_ int, j *numbered) error {
				for range rand.IntN(3) {
					runtime.Gosched()
				}
				return nil
			},
			func(j *numbered) error {
				if j.n != got {
					t.Fatalf("job %d came in place %d", j.n, got)
				}
				got++
				return nil
			})
		if err != nil || got != 500 {
			t.Fatalf("%d workers: %d jobs done, error %v", workers, got, err)
		}
	}
}

func TestOrderedStopsAtTheFirstError(t *testing.T) {
	bad := errors.New("bad")
	fail := func(at int) func(*numbered) error {
		return func(j *numbered) error {
			if j.n == at {
				return bad
			}
			return nil
		}
	}
	ok := func(*numbered) error { return nil }
	okWork := func(int, *numbered) error { return nil }
	source := func() func(*numbered) error {
		next := upTo(1000)
		return func(j *numbered) error {
			if err := next(j); err != nil {
				return err
			}
			return fail(77)(j)
		}
	}
	for name, err := range map[string]error{
		"next": ordered(context.Background(), numberedJobs(4), 3, source(), okWork, ok),
		"work": ordered(context.Background(), numberedJobs(4), 3, upTo(1000), func(_ int, j *numbered) error { return fail(77)(j) }, ok),
		"done": ordered(context.Background(), numberedJobs(4), 3, upTo(1000), okWork, fail(77)),
	} {
		if !errors.Is(err, bad) {
			t.Errorf("%s failed, but ordered says %v", name, err)
		}
	}
}

func TestOrderedStopsWhenCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	seen := 0
	err := ordered(ctx, numberedJobs(4), 2, func(*numbered) error { return nil }, // never ends by itself
		func(int, *numbered) error { return nil },
		func(*numbered) error {
			if seen++; seen == 10 {
				cancel()
				time.Sleep(time.Millisecond)
			}
			return nil
		})
	if !errors.Is(err, context.Canceled) {
		t.Fatalf("error is %v", err)
	}
}

func TestOrderedMakesAnErrorOfAPanic(t *testing.T) {
	okWork := func(int, *numbered) error { return nil }
	ok := func(*numbered) error { return nil }
	next := upTo(100)
	for name, err := range map[string]error{
		"work": ordered(context.Background(), numberedJobs(4), 2, upTo(100), func(_ int, j *numbered) error {
			if j.n == 50 {
				panic("lost")
			}
			return nil
		}, ok),
		"next": ordered(context.Background(), numberedJobs(4), 2, func(j *numbered) error {
			if j.n == 50 {
				panic("lost")
			}
			return next(j)
		}, okWork, ok),
	} {
		if err == nil || !strings.Contains(err.Error(), "fault of the program, nothing is written: lost") {
			t.Errorf("%s: error %v", name, err)
		}
	}
}
