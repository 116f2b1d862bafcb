package aggregate

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// exact is the sum of xs by arbitrary-precision arithmetic of the standard
// library, rounded once.
func exact(xs []float64) float64 {
	sum := new(big.Float).SetPrec(2200)
	for _, x := range xs {
		sum.Add(sum, new(big.Float).SetPrec(2200).SetFloat64(x))
	}
	f, _ := sum.Float64()
	return f
}

func sumOf(xs []float64) float64 {
	var s Sum
	for _, x := range xs {
		s.Add(x)
	}
	return s.Round()
}

// anyFinite draws from all finite doubles, subnormals included.
func anyFinite(rng *rand.Rand) float64 {
	for {
		if x := math.Float64frombits(rng.Uint64()); !math.IsNaN(x) && !math.IsInf(x, 0) {
			return x
		}
	}
}

func TestSumIsExactlyRounded(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	draw := map[string]func() float64{
		"any":       func() float64 { return anyFinite(rng) },
		"subnormal": func() float64 { return math.Float64frombits(rng.Uint64() & (1<<63 | 1<<53 - 1)) },
		"money":     func() float64 { return (rng.Float64() - 0.5) * 1e9 },
		"integers":  func() float64 { return float64(rng.Int64N(1<<20) - 1<<19) },
		"huge":      func() float64 { return math.Copysign(math.MaxFloat64*rng.Float64(), rng.Float64()-0.5) },
		"ties":      func() float64 { return math.Ldexp(1, 53*rng.IntN(3)-53) * float64(rng.IntN(5)-2) },
	}
	for name, f := range draw {
		for range 300 {
			xs := make([]float64, 1+rng.IntN(40))
			for i := range xs {
				xs[i] = f()
			}
			if n := len(xs); n > 4 && rng.IntN(2) == 0 { // massive cancellation
				for i := range n / 2 {
					xs[n-1-i] = -xs[i]
				}
			}
			got, want := sumOf(xs), exact(xs)
			if got != want {
				t.Fatalf("%s: sum of %v = %v, want %v", name, xs, got, want)
			}
		}
	}
}

func TestSumOfManyNeedsCarries(t *testing.T) {
	var s Sum
	x := math.Nextafter(1, 0) // a full mantissa
	const n = 5_000_000
	for range n {
		s.Add(x)
		s.Add(-x / 4)
	}
	want := new(big.Float).Mul(big.NewFloat(n), new(big.Float).SetPrec(200).Sub(big.NewFloat(x), big.NewFloat(x/4)))
	w, _ := want.Float64()
	if got := s.Round(); got != w {
		t.Fatalf("got %v, want %v", got, w)
	}
}

func TestSumDoesNotDependOnOrderOrGrouping(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	xs := make([]float64, 10_000)
	for i := range xs {
		xs[i] = math.Ldexp(rng.NormFloat64(), rng.IntN(200)-100)
	}
	want := sumOf(xs)
	for range 20 {
		rng.Shuffle(len(xs), func(i, j int) { xs[i], xs[j] = xs[j], xs[i] })
		parts := make([]Sum, 1+rng.IntN(9))
		for _, x := range xs {
			parts[rng.IntN(len(parts))].Add(x)
		}
		var all Sum
		for i := range parts {
			all.Merge(&parts[i])
		}
		if got := all.Round(); math.Float64bits(got) != math.Float64bits(want) {
			t.Fatalf("got %v, want %v", got, want)
		}
	}
}

func TestSumSpecialCases(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	for _, c := range []struct {
		xs   []float64
		want float64
	}{
		{nil, 0}, {[]float64{0, math.Copysign(0, -1)}, 0}, {[]float64{1, -1}, 0},
		{[]float64{inf, 1}, inf}, {[]float64{-inf, math.MaxFloat64}, -inf},
		{[]float64{inf, -inf}, nan}, {[]float64{nan, 1}, nan},
		{[]float64{math.MaxFloat64, math.MaxFloat64}, inf},
		{[]float64{math.MaxFloat64, math.MaxFloat64, -math.MaxFloat64}, math.MaxFloat64},
		{[]float64{-5e-324, 5e-324, -5e-324}, -5e-324},
		{[]float64{1, 1e-300}, 1}, {[]float64{1, 0x1p-53}, 1}, {[]float64{1, 0x1p-53, 5e-324}, 1 + 0x1p-52},
	} {
		got := sumOf(c.xs)
		if got != c.want && !(math.IsNaN(got) && math.IsNaN(c.want)) {
			t.Errorf("sum of %v = %v, want %v", c.xs, got, c.want)
		}
	}
}

func BenchmarkSumAdd(b *testing.B) {
	rng := rand.New(rand.NewPCG(5, 6))
	xs := make([]float64, 4096)
	for i := range xs {
		xs[i] = rng.NormFloat64() * 1e5
	}
	var s Sum
	for b.Loop() {
		for _, x := range xs {
			s.Add(x)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/4096, "ns/add")
}
