package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

// A digital is what a vanilla option loses as its strike moves: for the cash
// digital −w·∂V/∂K, for the asset digital w·V minus K times that.
func TestDigitalIsTheSlopeOfAVanillaInItsStrike(t *testing.T) {
	rng := rand.New(rand.NewPCG(41, 42))
	cash, asset := newGreeks(1), newGreeks(1)
	for range 2000 {
		d := randomDeal(rng)
		CashDigital(cash, one(d.s), one(d.k), one(1), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		AssetDigital(asset, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		vanilla := func(k float64) float64 {
			p := one(0)
			BSMPrice(p, one(d.s), one(k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
			return p[0]
		}
		h := 2e-3 * d.k * min(1, d.v*math.Sqrt(d.t))
		slope := (8*(vanilla(d.k+h)-vanilla(d.k-h)) - (vanilla(d.k+2*h) - vanilla(d.k-2*h))) / (12 * h)
		if got := cash.Price[0]; !(math.Abs(got+d.w*slope) <= 1e-14*(d.s+d.k)/h+1e-9) {
			t.Fatalf("%+v: cash digital %v, slope of the vanilla %v", d, got, -d.w*slope)
		}
		if got, want := asset.Price[0]-d.k*cash.Price[0], d.w*vanilla(d.k); !(math.Abs(got-want) <= 1e-13*(d.s+d.k)) {
			t.Fatalf("%+v: asset less strike in cash digitals %v, vanilla %v", d, got, want)
		}
	}
}

// Call and put together pay in any case: the discounted payout, or the asset
// without what it yields.
func TestDigitalParity(t *testing.T) {
	rng := rand.New(rand.NewPCG(43, 44))
	sum := func(f *closedForm, d deal) (x [10]float64) {
		g := newGreeks(1)
		for _, d.w = range []float64{1, -1} {
			f.greeks(g, d)
			for i := range x {
				x[i] += (*g.Slices()[i])[0]
			}
		}
		return x
	}
	for range 2000 {
		d := randomDeal(rng)
		cash, asset := d.payout*math.Exp(-d.r*d.t), d.s*math.Exp(-d.q*d.t)
		onFuture := d.s * math.Exp(-d.r*d.t)
		for _, c := range []struct {
			name string
			want [10]float64
		}{
			{"cash digital", [10]float64{0: cash, 4: d.r * cash, 5: -d.t * cash}},
			{"cash digital on a future", [10]float64{0: cash, 4: d.r * cash, 5: -d.t * cash}},
			{"asset digital", [10]float64{0: asset, 1: asset / d.s, 4: d.q * asset, 6: -d.t * asset, 9: d.q * asset / d.s}},
			{"asset digital on a future", [10]float64{0: onFuture, 1: onFuture / d.s, 4: d.r * onFuture, 5: -d.t * onFuture, 9: d.r * onFuture / d.s}},
		} {
			f := closedFormNamed(t, c.name)
			got, units := sum(f, d), f.units(d)
			for i, want := range c.want {
				if !(math.Abs(got[i]-want) <= 1e-13*units[i]) {
					t.Fatalf("%s %s of %+v: call + put %v, want %v", c.name, greekNames[i], d, got[i], want)
				}
			}
		}
	}
}

// Without any spread the forward decides, and exactly at the strike half is paid.
func TestDigitalWithoutSpread(t *testing.T) {
	for _, c := range []struct{ s, k, t, v, r, w, cash, asset float64 }{
		{101, 100, 0, 0.2, 0.05, 1, 7, 101},
		{101, 100, 0, 0.2, 0.05, -1, 0, 0},
		{100, 100, 0, 0.2, 0.05, 1, 3.5, 50},
		{100, 100, 0, 0.2, 0.05, -1, 3.5, 50},
		{99, 100, 2, 0, 0.05, 1, 7 * math.Exp(-0.1), 99}, // the forward is above
		{99, 100, 2, 0, 0, 1, 0, 0},
		{99, 100, 2, 0, 0, -1, 7, 99},
	} {
		g := newGreeks(1)
		CashDigital(g, one(c.s), one(c.k), one(7), one(c.t), one(c.v), one(c.r), one(0), one(c.w))
		if !(math.Abs(g.Price[0]-c.cash) <= 1e-14) || g.Gamma[0] != 0 || g.Vega[0] != 0 || !(g.Residual[0] < 1e-12) {
			t.Errorf("%+v: cash %v, gamma %v, vega %v, residual %v", c, g.Price, g.Gamma, g.Vega, g.Residual)
		}
		AssetDigital(g, one(c.s), one(c.k), one(c.t), one(c.v), one(c.r), one(0), one(c.w))
		if !(math.Abs(g.Price[0]-c.asset) <= 1e-12) || g.Delta[0] != c.asset/c.s || !(g.Residual[0] < 1e-12) {
			t.Errorf("%+v: asset %v, delta %v, residual %v", c, g.Price, g.Delta, g.Residual)
		}
	}
}
