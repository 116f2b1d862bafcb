package american

import (
	"math/rand/v2"
	"testing"
	"time"
)

const benchLines = 1920

func benchmark(b *testing.B, all []line) {
	for _, c := range []struct {
		name    string
		setting Setting
	}{{"fast", Fast}, {"default", Default}} {
		for _, width := range widths() {
			b.Run(c.name+map[int]string{1: "/scalar", 4: "/avx2", 8: "/avx512"}[width], func(b *testing.B) {
				s := NewSolver(c.setting)
				s.width = width
				l, r := linesOf(all...), new(Results)
				r.Resize(len(all))
				best := time.Hour
				for b.Loop() {
					start := time.Now()
					s.Solve(r, l)
					best = min(best, time.Since(start))
				}
				b.ReportMetric(float64(len(all))*float64(b.N)/b.Elapsed().Seconds(), "lines/s")
				b.ReportMetric(float64(len(all))/best.Seconds(), "best-lines/s")
			})
		}
	}
}

// BenchmarkDistinct values lines of which no two share a boundary; all have one.
func BenchmarkDistinct(b *testing.B) {
	rng := rand.New(rand.NewPCG(41, 42))
	var all []line
	for len(all) < benchLines {
		o := ordinary(rng)
		o.r, o.q = o.r+1e-4, o.q+1e-4
		all = append(all, o)
	}
	benchmark(b, all)
}

// BenchmarkStrikes values lines of which twenty strikes each share a boundary.
func BenchmarkStrikes(b *testing.B) {
	rng := rand.New(rand.NewPCG(43, 44))
	var all []line
	for len(all) < benchLines {
		o := ordinary(rng)
		o.s, o.r, o.q = 100, o.r+1e-4, o.q+1e-4
		for k := range 20 {
			o.k = 80 + 2*float64(k)
			all = append(all, o)
		}
	}
	benchmark(b, all)
}
