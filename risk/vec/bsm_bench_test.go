package vec_test

import (
	"math"
	"math/rand/v2"
	"testing"
	"time"

	"nightbook/risk/vec"
)

// benchLines is the batch of the benchmarks and of gen/cbench.
const benchLines = 4096

// benchBatch fills a batch the way gen/cbench/core.c does: calls and puts in
// random order, strikes within 20 % of the spot.
func benchBatch() *vec.BSM {
	b := newBatch(benchLines)
	rng := rand.New(rand.NewPCG(3, 4))
	for i := range benchLines {
		line{
			s: 80 + 40*rng.Float64(), k: 100, t: 0.05 + 2*rng.Float64(), v: 0.1 + 0.5*rng.Float64(),
			r: 0.03, q: 0.01, w: float64(1 - 2*rng.IntN(2)),
		}.put(b, i)
	}
	return b
}

func benchTiers(bench *testing.B, f func(*vec.BSM)) {
	for _, name := range vec.Tiers() {
		bench.Run(name, func(bench *testing.B) {
			defer vec.SetTier(name)()
			b := benchBatch()
			perOption(bench, func() { f(b) })
		})
	}
}

// perOption reports the mean time of an option and the best: the latter is what
// the code takes when nothing else disturbs the machine.
func perOption(bench *testing.B, f func()) {
	best := time.Duration(math.MaxInt64)
	for bench.Loop() {
		start := time.Now()
		f()
		best = min(best, time.Since(start))
	}
	bench.ReportMetric(float64(bench.Elapsed().Nanoseconds())/float64(bench.N)/benchLines, "ns/opt")
	bench.ReportMetric(float64(best.Nanoseconds())/benchLines, "best-ns/opt")
}

func BenchmarkBSMCore(b *testing.B)   { benchTiers(b, (*vec.BSM).Core) }
func BenchmarkBSMAll(b *testing.B)    { benchTiers(b, (*vec.BSM).All) }
func BenchmarkBSMPrices(b *testing.B) { benchTiers(b, (*vec.BSM).Prices) }

// BenchmarkPlainLoop is Core as one writes it over package math.
func BenchmarkPlainLoop(bench *testing.B) {
	b := benchBatch()
	perOption(bench, func() { plainCore(b) })
}

func plainCore(b *vec.BSM) {
	for i, s := range b.Spot {
		k, t, v, r, q, w := b.Strike[i], b.Time[i], b.Vol[i], b.Rate[i], b.Yield[i], b.Sign[i]
		root := math.Sqrt(t)
		vs := v * root
		rf, qf := math.Exp(-r*t), math.Exp(-q*t)
		d1 := (math.Log(s/k) + (r-q+0.5*v*v)*t) / vs
		d2 := d1 - vs
		n1, n2 := 0.5*math.Erfc(-w*d1/math.Sqrt2), 0.5*math.Erfc(-w*d2/math.Sqrt2)
		pdf := math.Exp(-0.5*d1*d1) * 0.3989422804014327 // 1/√(2π)
		a, bb := s*qf, k*rf
		b.Price[i] = w * (a*n1 - bb*n2)
		b.Delta[i] = w * qf * n1
		b.Gamma[i] = qf * pdf / (s * vs)
		b.Vega[i] = a * pdf * root
		b.Theta[i] = -a*pdf*v/(2*root) + w*(q*a*n1-r*bb*n2)
		b.Rho[i] = w * t * bb * n2
	}
}

func benchSlices(bench *testing.B, f func(dst, x []float64), lo, hi float64) {
	for _, name := range vec.Tiers() {
		bench.Run(name, func(bench *testing.B) {
			defer vec.SetTier(name)()
			rng := rand.New(rand.NewPCG(5, 6))
			x, dst := make([]float64, benchLines), make([]float64, benchLines)
			for i := range x {
				x[i] = lo + (hi-lo)*rng.Float64()
			}
			perOption(bench, func() { f(dst, x) })
		})
	}
}

func BenchmarkExp(b *testing.B)     { benchSlices(b, vec.Exp, -2, 2) }
func BenchmarkLog(b *testing.B)     { benchSlices(b, vec.Log, 0.1, 10) }
func BenchmarkNormCDF(b *testing.B) { benchSlices(b, vec.NormCDF, -6, 6) }

func BenchmarkImpliedVol(bench *testing.B) {
	for _, name := range vec.Tiers() {
		bench.Run(name, func(bench *testing.B) {
			defer vec.SetTier(name)()
			b := benchBatch()
			for i := range b.Spot {
				b.Rate[i], b.Yield[i] = 0, 0
			}
			b.Prices()
			outcome := make([]vec.Implied, benchLines)
			perOption(bench, func() { vec.ImpliedVol(b.Vega, outcome, b.Spot, b.Strike, b.Time, b.Price, b.Sign) })
		})
	}
}
