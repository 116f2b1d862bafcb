package main

import (
	"context"
	"io"
	"path/filepath"
	"runtime"
	"testing"

	"nightbook/samples"
)

// benchmarkRun runs a demo snapshot from file to file.
func benchmarkRun(b *testing.B, lines int64, formats ...string) {
	dir := filepath.Join(b.TempDir(), "demo")
	if err := samples.Demo(dir, lines, 1); err != nil {
		b.Fatal(err)
	}
	o := &options{snapshot: dir, out: b.TempDir(), formats: formats, workers: runtime.GOMAXPROCS(0), replace: true}
	con := newConsole(io.Discard, "text")
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	for b.Loop() {
		if _, err := pipeline(context.Background(), o, con); err != nil {
			b.Fatal(err)
		}
	}
	runtime.ReadMemStats(&after)
	total := float64(lines) * float64(b.N)
	b.ReportMetric(total/b.Elapsed().Seconds(), "lines/s")
	b.ReportMetric(float64(after.TotalAlloc-before.TotalAlloc)/total, "B/line")
}

// BenchmarkGarbage tells what a line costs the collector in the steady state:
// what a run of twice the lines allocates beyond a run of half, by line.
func BenchmarkGarbage(b *testing.B) {
	const lines = 1 << 19
	var allocated [3]uint64
	for n := 1; n <= 2; n++ {
		dir := filepath.Join(b.TempDir(), "demo")
		if err := samples.Demo(dir, int64(n*lines), 1); err != nil {
			b.Fatal(err)
		}
		o := &options{snapshot: dir, out: b.TempDir(), formats: []string{"parquet"}, workers: runtime.GOMAXPROCS(0)}
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		if _, err := pipeline(context.Background(), o, newConsole(io.Discard, "text")); err != nil {
			b.Fatal(err)
		}
		runtime.ReadMemStats(&after)
		allocated[n] = after.TotalAlloc - before.TotalAlloc
	}
	for b.Loop() {
	}
	b.ReportMetric(0, "ns/op")
	b.ReportMetric((float64(allocated[2])-float64(allocated[1]))/lines, "B/line")
}

func BenchmarkRunParquet(b *testing.B) { benchmarkRun(b, 200_000, "parquet") }
func BenchmarkRunCSV(b *testing.B)     { benchmarkRun(b, 200_000, "csv") }
func BenchmarkRunXLSX(b *testing.B)    { benchmarkRun(b, 10_000, "xlsx") }
