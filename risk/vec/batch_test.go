package vec_test

import (
	"math"
	"math/rand/v2"

	"nightbook/risk/vec"
)

// newBatch returns a batch of n lines with all its slices.
func newBatch(n int) *vec.BSM {
	b := new(vec.BSM)
	for _, s := range append(inputs(b), outputs(b)...) {
		*s = make([]float64, n)
	}
	return b
}

func inputs(b *vec.BSM) []*[]float64 {
	return []*[]float64{&b.Spot, &b.Strike, &b.Time, &b.Vol, &b.Rate, &b.Yield, &b.Sign}
}

func outputs(b *vec.BSM) []*[]float64 {
	return []*[]float64{&b.Price, &b.Delta, &b.Gamma, &b.Vega, &b.Theta, &b.Rho, &b.CarryRho, &b.Vanna, &b.Volga, &b.Charm, &b.Residual}
}

var outputNames = []string{"price", "delta", "gamma", "vega", "theta", "rho", "carry_rho", "vanna", "volga", "charm", "residual"}

// line is one option's inputs.
type line struct{ s, k, t, v, r, q, w float64 }

func (l line) put(b *vec.BSM, i int) {
	b.Spot[i], b.Strike[i], b.Time[i], b.Vol[i], b.Rate[i], b.Yield[i], b.Sign[i] = l.s, l.k, l.t, l.v, l.r, l.q, l.w
}

func lineAt(b *vec.BSM, i int) line {
	return line{b.Spot[i], b.Strike[i], b.Time[i], b.Vol[i], b.Rate[i], b.Yield[i], b.Sign[i]}
}

// value runs All on one line and returns its outputs in the order of outputNames.
func (l line) value() [11]float64 {
	b := newBatch(1)
	l.put(b, 0)
	b.All()
	var o [11]float64
	for j, s := range outputs(b) {
		o[j] = (*s)[0]
	}
	return o
}

// ordinary draws a line such as a book holds.
func ordinary(rng *rand.Rand) line {
	l := line{
		k: math.Exp(rng.Float64()*9 - 2), t: 1.0/365 + 3*rng.Float64()*rng.Float64(), v: 0.05 + 0.8*rng.Float64(),
		r: 0.12*rng.Float64() - 0.02, q: 0.08*rng.Float64() - 0.01, w: float64(1 - 2*rng.IntN(2)),
	}
	l.s = l.k * math.Exp((r2(rng))*2.5*l.v*math.Sqrt(l.t))
	return l
}

func r2(rng *rand.Rand) float64 { return 2*rng.Float64() - 1 }
