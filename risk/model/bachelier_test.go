package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

// Call minus put is the discounted distance to the strike, in every result.
func TestBachelierParity(t *testing.T) {
	rng := rand.New(rand.NewPCG(51, 52))
	f := closedFormNamed(t, "bachelier")
	call, put := newGreeks(1), newGreeks(1)
	for range 5000 {
		d := f.deal(randomDeal(rng))
		d.w = 1
		f.greeks(call, d)
		d.w = -1
		f.greeks(put, d)
		discount := math.Exp(-d.r * d.t)
		forward := discount * (d.s - d.k)
		want := [10]float64{0: forward, 1: discount, 4: d.r * forward, 5: -d.t * forward, 9: d.r * discount}
		for i, unit := range f.units(d) {
			got := (*call.Slices()[i])[0] - (*put.Slices()[i])[0]
			if !(math.Abs(got-want[i]) <= 1e-13*max(unit, math.Abs(want[i]))) {
				t.Fatalf("%s of %+v: call − put %v, want %v", greekNames[i], d, got, want[i])
			}
		}
	}
}

// Where the price can hardly move in proportion, the lognormal model with
// volatility σ/F is the same: they part at the order of (σ√T/F)².
func TestBachelierIsTheLimitOfBlack(t *testing.T) {
	for _, c := range []struct{ strike, sign float64 }{{1000, 1}, {1000, -1}, {1001, 1}, {998, -1}, {1002, 1}} {
		normal, lognormal := one(0), newGreeks(1)
		BachelierPrice(normal, one(1000), one(c.strike), one(0.25), one(2), one(0.04), one(c.sign))
		mean := math.Sqrt(1000 * c.strike)
		Black76(lognormal, one(1000), one(c.strike), one(0.25), one(2/mean), one(0.04), one(c.sign))
		if got, want := normal[0], lognormal.Price[0]; !(math.Abs(got-want) <= 2e-6*want) {
			t.Errorf("%+v: normal %v, lognormal %v", c, got, want)
		}
	}
}

// A price of 0 is nothing special: results depend on the distance to the strike alone.
func TestBachelierOnNegativePrices(t *testing.T) {
	for _, w := range []float64{1, -1} {
		a, b := newGreeks(1), newGreeks(1)
		Bachelier(a, one(-3), one(2), one(0.7), one(4), one(0.03), one(w))
		Bachelier(b, one(13), one(18), one(0.7), one(4), one(0.03), one(w))
		for i := range greekNames[:10] {
			if x, y := (*a.Slices()[i])[0], (*b.Slices()[i])[0]; x != y {
				t.Errorf("%s: %v below zero, %v above", greekNames[i], x, y)
			}
		}
	}
}

func TestBachelierWithoutSpread(t *testing.T) {
	e := math.Exp(-0.1)
	for _, c := range []struct{ f, k, t, v, w, price, delta float64 }{
		{5, -2, 0, 3, 1, 7, 1}, {5, -2, 0, 3, -1, 0, 0}, {5, 5, 0, 3, 1, 0, 0.5}, {5, 5, 0, 3, -1, 0, -0.5}, {0, 0, 0, 3, 1, 0, 0.5},
		{-5, -2, 2, 0, -1, 3 * e, -e}, {-5, -2, 2, 0, 1, 0, 0},
	} {
		g := newGreeks(1)
		Bachelier(g, one(c.f), one(c.k), one(c.t), one(c.v), one(0.05), one(c.w))
		if !(math.Abs(g.Price[0]-c.price) < 1e-14) || !(math.Abs(g.Delta[0]-c.delta) < 1e-15) || g.Gamma[0] != 0 || !(g.Residual[0] < 1e-14) {
			t.Errorf("%+v: price %v, delta %v, gamma %v, residual %v", c, g.Price, g.Delta, g.Gamma, g.Residual)
		}
	}
}
