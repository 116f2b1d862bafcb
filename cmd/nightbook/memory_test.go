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

// What a run is said to take is enough for it, though more memory may mean larger
// row groups.
func TestEnoughMemory(t *testing.T) {
	defer debug.SetMemoryLimit(debug.SetMemoryLimit(-1))
	for _, formats := range [][]string{{"parquet"}, {"csv"}, {"xlsx", "parquet"}, {"xlsx", "parquet", "csv"}} {
		for _, extra := range [][]string{nil, make([]string, 400)} {
			columns := schema.LinesTable(extra).Columns
			for _, memory := range []int64{1, 20 * mib, 60 * mib, 80 * mib} {
				o := &options{formats: formats, workers: 2, memory: memory}
				_, err := o.divide(columns)
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
				if s, err := o.divide(columns); err != nil || s.workers < 1 || s.live <= 0 {
					t.Errorf("%v, %d columns, %s and then %d MiB: %+v %v", formats, len(columns), sizeText(memory), enough, s, err)
				}
			}
		}
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
