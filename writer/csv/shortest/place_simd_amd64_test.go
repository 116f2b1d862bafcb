//go:build goexperiment.simd && amd64

package shortest

import (
	"math/rand/v2"
	"testing"
)

// placeVector must write what place does.
func TestPlaceVector(t *testing.T) {
	if !vectors {
		t.Skip("no AVX2")
	}
	r := rand.New(rand.NewPCG(9, 29))
	for range 2_000_000 {
		sixteen, last := 1e15+r.Uint64N(9e15), r.Uint64N(10)*r.Uint64N(2)
		if last == 0 { // zeros at the end
			cut := uint64(1)
			for range r.IntN(16) {
				cut *= 10
			}
			sixteen -= sixteen % cut
			sixteen = max(sixteen, 1e15)
		}
		point := r.IntN(24) - 8
		if r.IntN(8) == 0 {
			point = r.IntN(634) - 324
		}
		sign := r.IntN(2)
		var a, b [Size]byte
		n, m := place(&a, sign, sixteen, last, point), placeVector(&b, sign, sixteen, last, point)
		if string(a[:n]) != string(b[:m]) {
			t.Fatalf("%d %d %d %d: %q and %q", sign, sixteen, last, point, a[:n], b[:m])
		}
	}
}

// The rest of the tests, with the scalar form.
func TestScalarTier(t *testing.T) {
	defer func(was bool) { vectors = was }(vectors)
	vectors = false
	TestRandom(t)
	TestHardCases(t)
}
