package vec_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/vec"
)

// The ratio is that of the distribution function and the density, in every tier
// and at every length with the same bits, and nothing else is written.
func TestMills(t *testing.T) {
	rng := rand.New(rand.NewPCG(51, 1))
	const most = 3*widest + 1
	y, want := make([]float64, most), make([]float64, most)
	for i := range y {
		y[i] = 30 * rng.Float64()
	}
	y[3], y[11], y[17] = 0, 1e300, 1e15
	for i := range y {
		vec.Mills(want[i:i+1], y[i:i+1]) // one at a time: the scalar form
		if ratio := vec.NormCDF1(-y[i]) / vec.NormPDF1(y[i]) / math.Sqrt(2*math.Pi); y[i] < 30 && math.Abs(want[i]/ratio-1) > 3e-15 {
			t.Errorf("Mills(%v) = %v, the quotient is %v", y[i], want[i], ratio)
		}
	}
	if want[11] != want[17] || math.Abs(want[17]*1e15*math.Sqrt(2*math.Pi)-1) > 1e-9 {
		t.Errorf("far out: %v and %v", want[11], want[17])
	}
	for _, tier := range vec.Tiers() {
		defer vec.SetTier(tier)()
		for n := range most + 1 {
			x, xOK := guarded(n, n%widest)
			dst, dstOK := guarded(n, (3*n+1)%widest)
			copy(x, y)
			vec.Mills(dst, x)
			vec.Mills(x, x)
			for i := range dst {
				if !sameBits(dst[i], want[i]) || !sameBits(x[i], want[i]) {
					t.Fatalf("tier %s, length %d, element %d: %v, in place %v, want %v", tier, n, i, dst[i], x[i], want[i])
				}
			}
			if !xOK() || !dstOK() {
				t.Fatalf("tier %s, length %d: wrote outside its slice", tier, n)
			}
		}
	}
}
