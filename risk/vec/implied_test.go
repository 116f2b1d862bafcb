package vec

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

func implied1(f, k, t, price, w float64) (float64, Implied) {
	v, o := []float64{0}, []Implied{0}
	ImpliedVol(v, o, []float64{f}, []float64{k}, []float64{t}, []float64{price}, []float64{w})
	return v[0], o[0]
}

// The volatility that gives a price back: prices computed with mpmath at 50
// digits and rounded, F, K, σ√T. Computed independently, no publication.
func TestImpliedVolCheckValues(t *testing.T) {
	for _, c := range []struct{ f, k, s, price float64 }{
		{100, 150, 0.64, 12.169781339576034},
		{100, 150, 0.16, 0.035217137219419473},
		{100, 150, 0.04, 9.0100203092428457e-25},
		{100, 100, 0.01, 0.39894061814816446},
		{100, 100, 3, 86.638559746228387},
	} {
		if s, o := implied1(c.f, c.k, 1, c.price, 1); o != ImpliedOK || math.Abs(s/c.s-1) > 8*0x1p-53 {
			t.Errorf("%+v: %v (%v), relative error %.2g", c, s, o, s/c.s-1)
		}
	}
}

// roundTrip prices n random options with BSM and inverts the prices. What is
// found may differ by what the price's own rounding, a few ε of its two terms, makes of it.
func roundTrip(t *testing.T, rng *rand.Rand, n int) (worst float64) {
	t.Helper()
	eps := 0x1p-53
	for range n {
		f := math.Exp(rng.Float64()*8 - 2)
		s := math.Exp(math.Log(1e-4) + rng.Float64()*math.Log(6/1e-4))
		// |x|/s up to 37 and |x| up to 30
		x := -min(s*37*math.Pow(rng.Float64(), 2), 30)
		k := f * math.Exp(-x)
		if rng.IntN(2) == 0 {
			k = f * math.Exp(x)
		}
		w := 1.0
		if k < f {
			w = -1
		}
		T := math.Exp(rng.Float64()*6 - 4)
		b := BSM{Spot: []float64{f}, Strike: []float64{k}, Time: []float64{1}, Vol: []float64{s}, Rate: []float64{0}, Yield: []float64{0}, Sign: []float64{w},
			Price: []float64{0}, Delta: []float64{0}, Gamma: []float64{0}, Vega: []float64{0}, Theta: []float64{0}, Rho: []float64{0}}
		b.Core()
		price, vega := b.Price[0], b.Vega[0]
		terms := math.Abs(b.Delta[0]*f) + math.Abs(b.Rho[0])
		if !(price > 1e-290) {
			continue
		}
		got, o := implied1(f, k, T, price, w)
		if o == ImpliedAbove && price >= min(f, k) {
			continue
		}
		if o != ImpliedOK {
			t.Fatalf("F %v K %v s %v price %v: outcome %d", f, k, s, price, o)
		}
		err := math.Abs(got*math.Sqrt(T)/s - 1)
		// what rounding does to the price computed here, and to x
		limit := 8*eps + 10*eps*terms/(s*vega)
		if !(err <= limit) {
			t.Fatalf("F %v K %v s %v price %v: s %v, relative error %.3g, limit %.3g", f, k, s, price, got*math.Sqrt(T), err, limit)
		}
		if limit < 1 {
			worst = max(worst, err/limit)
		}
	}
	return worst
}

func TestImpliedVolRoundTrip(t *testing.T) {
	worst := roundTrip(t, rand.New(rand.NewPCG(21, 22)), 200_000)
	t.Logf("largest error: %.2f of the limit", worst)
}

func TestImpliedVolOutcomes(t *testing.T) {
	inf := math.Inf(1)
	for _, c := range []struct {
		f, k, t, price, w float64
		want              Implied
	}{
		{100, 90, 1, 10, 1, ImpliedBelow}, {100, 90, 1, 9.99, 1, ImpliedBelow}, {100, 90, 1, 0, -1, ImpliedBelow}, {100, 100, 1, 0, 1, ImpliedBelow},
		{100, 90, 1, 100, 1, ImpliedAbove}, {100, 90, 1, 90, -1, ImpliedAbove}, {100, 90, 1, 1e300, 1, ImpliedAbove},
		{100, 90, 1, 10.0001, 1, ImpliedOK}, {100, 90, 1, 99.999999, 1, ImpliedOK}, {100, 90, 1, 89.99999, -1, ImpliedOK},
		{100, 90, 1, 5e-324, -1, ImpliedOK}, {1e300, 1e300, 1, 1e299, 1, ImpliedOK}, {1e-300, 1e-300, 1, 1e-301, 1, ImpliedOK}, {1e-200, 1e200, 1, 1e-201, 1, ImpliedOK},
		{math.Nextafter(1, 2), 1, 1, 1e-20, -1, ImpliedOK},
		{nan, 90, 1, 1, 1, ImpliedNaN}, {100, 0, 1, 1, 1, ImpliedNaN}, {-1, 90, 1, 1, 1, ImpliedNaN}, {100, 90, 0, 11, 1, ImpliedNaN},
		{100, 90, -1, 11, 1, ImpliedNaN}, {100, 90, 1, -1, 1, ImpliedNaN}, {100, 90, 1, 11, 0, ImpliedNaN}, {inf, 90, 1, 11, 1, ImpliedNaN},
		{100, inf, 1, 11, 1, ImpliedNaN}, {100, 90, inf, 11, 1, ImpliedNaN}, {100, 90, 1, nan, 1, ImpliedNaN}, {100, 90, 1, inf, 1, ImpliedNaN},
	} {
		v, got := implied1(c.f, c.k, c.t, c.price, c.w)
		if got != c.want || (got == ImpliedOK) != (v > 0 && v-v == 0) {
			t.Errorf("%+v: vol %v, outcome %d", c, v, got)
		}
	}
}

func FuzzImpliedVol(f *testing.F) {
	f.Add(100.0, 150.0, 1.0, 9e-25, 1.0)
	f.Add(1e-200, 1e200, 3.0, 1e-201, 1.0)
	f.Fuzz(func(t *testing.T, fw, k, T, price, w float64) {
		v, o := implied1(fw, k, T, price, w)
		if (o == ImpliedOK) != (v > 0) || v != v && o == ImpliedOK {
			t.Fatalf("F %v K %v T %v price %v sign %v: vol %v, outcome %d", fw, k, T, price, w, v, o)
		}
		// The scalar form has done the one; a slice is for the vector forms.
		const n = 8
		col := func(x float64) []float64 { return slices.Repeat([]float64{x}, n) }
		vols, outcomes := col(0), make([]Implied, n)
		ImpliedVol(vols, outcomes, col(fw), col(k), col(T), col(price), col(w))
		if got := vols[n-1]; math.Float64bits(got) != math.Float64bits(v) && got == got || outcomes[n-1] != o {
			t.Fatalf("F %x K %x T %x price %x sign %v: vol %x, outcome %d; of eight alike %x, %d", fw, k, T, price, w, v, o, got, outcomes[n-1])
		}
	})
}
