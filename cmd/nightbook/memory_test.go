package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"runtime"
	"runtime/debug"
	"strings"
	"testing"

	"nightbook/samples"
	"nightbook/schema"
)

// pages are positions that take so many bytes to be read, and so many for each piece.
type pages struct{ reading, piece int64 }

func (p pages) Memory() (int64, int64, error) { return p.reading, p.piece, nil }
func (p pages) Market() int64                 { return 8 * mib }
func (p pages) LimitTexts(_, _ int64)         {}

// What a run is said to take is enough for it, though more memory may mean larger
// row groups.
func TestEnoughMemory(t *testing.T) {
	defer debug.SetMemoryLimit(debug.SetMemoryLimit(-1))
	for _, formats := range [][]string{{"parquet"}, {"csv"}, {"xlsx", "parquet"}, {"xlsx", "parquet", "csv"}} {
		for _, extra := range [][]string{nil, make([]string, 400)} {
			columns := schema.LinesTable(extra).Columns
			for _, memory := range []int64{1, 20 * mib, 60 * mib, 80 * mib} {
				o := &options{formats: formats, workers: 2, memory: memory}
				_, err := o.divide(columns, pages{})
				if err == nil {
					continue
				}
				var says *hinted
				var enough int64
				_, after, _ := strings.Cut(err.Error(), "which takes ")
				if _, scan := fmt.Sscan(after, &enough); !errors.As(err, &says) || scan != nil {
					t.Fatalf("%v: %v", err, scan)
				}
				o.memory = enough * mib
				if s, err := o.divide(columns, pages{}); err != nil || s.workers < 1 || s.live <= 0 {
					t.Errorf("%v, %d columns, %s and then %d MiB: %+v %v", formats, len(columns), sizeText(memory), enough, s, err)
				}
			}
		}
	}
}

// A run that fits under a ceiling fits under a higher one, though its row groups
// are larger.
func TestMoreMemoryIsEnough(t *testing.T) {
	defer debug.SetMemoryLimit(debug.SetMemoryLimit(-1))
	columns := schema.LinesTable(nil).Columns
	for _, in := range []pages{{}, {20 * mib, 0}, {35 * mib, 20 * mib}, {200 * mib, 1 * mib}} {
		fits := int64(0)
		for memory := int64(64 * mib); memory < 640*mib; memory += 8 * mib {
			o := &options{formats: []string{"xlsx", "parquet"}, workers: 2, memory: memory}
			_, err := o.divide(columns, in)
			if err == nil && fits == 0 {
				fits = memory
			} else if err != nil && fits > 0 {
				t.Errorf("%+v: %s is enough, %s is not: %v", in, sizeText(fits), sizeText(memory), err)
			}
		}
		if fits == 0 {
			t.Errorf("%+v: nothing is enough", in)
		}
	}
}

// What positions say that reading takes is part of what a run takes, and is told
// where the ceiling is too low for it.
func TestMemoryOfInputs(t *testing.T) {
	defer debug.SetMemoryLimit(debug.SetMemoryLimit(-1))
	columns := schema.LinesTable(nil).Columns
	o := &options{formats: []string{"csv"}, workers: 1, memory: 100 * mib}
	if _, err := o.divide(columns, pages{2 * mib, 0}); err != nil {
		t.Error(err)
	}
	for _, many := range []pages{{60 * mib, 0}, {0, 20 * mib}} {
		_, err := o.divide(columns, many)
		var says *hinted
		if !errors.As(err, &says) || !strings.Contains(says.hint, "60 MiB of it are for the pages and dictionaries of the positions") {
			t.Errorf("%v: %v", many, err)
		}
	}
	// Fewer workers have fewer pieces on their way.
	o.workers, o.memory = 4, 150*mib
	for _, c := range []struct {
		piece   int64
		workers int
	}{{0, 4}, {1 * mib, 4}, {15 * mib, 3}, {20 * mib, 2}} {
		if s, err := o.divide(columns, pages{0, c.piece}); err != nil || s.workers > c.workers || s.workers < c.workers-1 {
			t.Errorf("pieces of %d MiB: %d workers, %v", c.piece/mib, s.workers, err)
		}
	}
}

// The limits on what a file may ask for at once are lower under a ceiling, never
// higher than they were, and say why.
func TestLimitsUnderMemory(t *testing.T) {
	var cfg schema.Config
	cfg.Limits[schema.WindowBytes] = 2 * mib
	o := &options{memory: 96 * mib}
	o.bound(&cfg)
	if n := cfg.Limits.Of(schema.HeldBytes); n != 18*mib {
		t.Errorf("held_bytes is %d", n)
	}
	if n := cfg.Limits.Of(schema.WindowBytes); n != 2*mib {
		t.Errorf("window_bytes is %d", n)
	}
	if err := cfg.Limits.Exceeded(schema.HeldBytes); !strings.Contains(err.Error(), "than --memory leaves room for, 18874368 under a ceiling of 96 MiB: give --memory more") {
		t.Error(err)
	}
	if err := cfg.Limits.Exceeded(schema.WindowBytes); !strings.Contains(err.Error(), "give a larger window_bytes under [limits]") {
		t.Error(err)
	}
	cfg.Limits = schema.Limits{}
	if new(options).bound(&cfg); cfg.Limits != (schema.Limits{}) {
		t.Errorf("without a ceiling: %v", cfg.Limits)
	}
}

// A market beyond the ceiling ends the run while it is read.
func TestMarketBeyondMemory(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "desk")
	if err := samples.Write(dir, samples.Options{Lines: 10, Seed: 1}); err != nil {
		t.Fatal(err)
	}
	f, err := os.OpenFile(filepath.Join(dir, "vols.csv"), os.O_APPEND|os.O_WRONLY, 0)
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	for i := range 1_000_000 {
		fmt.Fprintf(&b, "BIG,20%02d-01-01,%d,0.2\n", 27+i%70, 1+i/70)
	}
	if _, err := f.WriteString(b.String()); err != nil {
		t.Fatal(err)
	}
	if err := f.Close(); err != nil {
		t.Fatal(err)
	}
	o := &options{snapshot: dir, out: filepath.Join(t.TempDir(), "out"), formats: []string{"csv"}, workers: 1, memory: 100 * mib}
	b.Reset()
	_, err = pipeline(context.Background(), o, newConsole(os.Stderr, "text"))
	if err == nil || !strings.Contains(err.Error(), "--memory 100MiB is too little for the market") {
		t.Errorf("%v", err)
	}
	if limit := debug.SetMemoryLimit(-1); limit < 1<<40 {
		t.Errorf("a limit of %d bytes is left behind", limit)
	}
	// The user's stop is told as that.
	runtime.GC() // what is in use is as the collector saw it last
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := pipeline(ctx, o, newConsole(os.Stderr, "text")); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}
