package model

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
)

// An option that comes to life and one that dies make the vanilla option, in
// every result.
func TestBarrierInAndOutAreTheVanilla(t *testing.T) {
	rng := rand.New(rand.NewPCG(61, 62))
	in, out, vanilla := newGreeks(1), newGreeks(1), newGreeks(1)
	f := closedFormNamed(t, "barrier")
	for range 5000 {
		d := randomDeal(rng)
		d.rebate, d.knock = 0, 1
		f.greeks(in, d)
		d.knock = -1
		f.greeks(out, d)
		BSM(vanilla, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		for i, unit := range f.units(d) {
			got, want := (*in.Slices()[i])[0]+(*out.Slices()[i])[0], (*vanilla.Slices()[i])[0]
			if !(math.Abs(got-want) <= 1e-13*max(unit, math.Abs(want))) {
				t.Fatalf("%s of %+v: in + out %v, vanilla %v", greekNames[i], d, got, want)
			}
		}
		if in.Price[0] < -1e-13*d.sum() || out.Price[0] < -1e-13*d.sum() {
			t.Fatalf("%+v: in %v, out %v", d, in.Price, out.Price)
		}
	}
}

// A barrier out of reach leaves the vanilla option, or nothing but the rebate at
// expiry.
func TestBarrierOutOfReach(t *testing.T) {
	rng := rand.New(rand.NewPCG(63, 64))
	g, vanilla := newGreeks(1), newGreeks(1)
	f := closedFormNamed(t, "barrier")
	for range 3000 {
		d := randomDeal(rng)
		spread := d.v * math.Sqrt(d.t)
		d.barrier = d.s * math.Exp(d.side*(spread*40+d.t))
		f.greeks(g, d)
		var want [10]float64
		if d.knock < 0 {
			BSM(vanilla, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
			for i := range want {
				want[i] = (*vanilla.Slices()[i])[0]
			}
		} else {
			rebate := d.rebate * math.Exp(-d.r*d.t)
			want[0], want[4], want[5] = rebate, d.r*rebate, -d.t*rebate
		}
		for i, unit := range f.units(d) {
			if got := (*g.Slices()[i])[0]; !(math.Abs(got-want[i]) <= 1e-13*max(unit, math.Abs(want[i]))) {
				t.Fatalf("%s of %+v: %v, want %v", greekNames[i], d, got, want[i])
			}
		}
	}
}

// Towards the barrier an option that dies approaches its rebate, and one that
// comes to life the vanilla option.
func TestBarrierAtTheTouch(t *testing.T) {
	rng := rand.New(rand.NewPCG(65, 66))
	near, vanilla := one(0), one(0)
	for range 3000 {
		d := randomDeal(rng)
		d.t, d.gap = 0.5, 0
		d.barrier = d.s * (1 + d.side*1e-13)
		BarrierPrice(near, d.terms(), one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		BSMPrice(vanilla, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		want := d.rebate
		if d.knock > 0 {
			want = vanilla[0]
		}
		if !(math.Abs(near[0]-want) <= 1e-10*d.sum()) {
			t.Fatalf("%+v next to the barrier: %v, want %v", d, near[0], want)
		}
		for _, beyond := range []float64{0, 1} {
			g := newGreeks(1)
			d.barrier = d.s * (1 - d.side*beyond*0.1)
			d.gap = beyond / 365 // an observation is one whatever the others are
			Barrier(g, d.terms(), one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
			if !(math.Abs(g.Price[0]-want) <= 1e-13*d.sum()) || d.knock < 0 && (g.Delta[0] != 0 || g.Theta[0] != 0 || !math.IsNaN(g.Residual[0])) {
				t.Fatalf("%+v at or beyond the barrier: %v, want %v; %+v", d, g.Price[0], want, g)
			}
		}
	}
}

// Without a spread the spot runs along its forward and meets the barrier or not.
func TestBarrierWithoutSpread(t *testing.T) {
	const up, down, in, out = 1, -1, 1, -1
	day := func(h, r float64) float64 { return math.Exp(-r * math.Log(h/100) / (r - 0.01)) } // discount at the touch
	for _, c := range []struct{ h, k, t, r, side, knock, want float64 }{
		{105, 100, 0, 0.05, up, out, 0}, // expired at the strike
		{105, 90, 0, 0.05, up, out, 10},
		{105, 90, 0, 0.05, up, in, 7},
		{105, 90, 1, 0.05, up, out, 100*math.Exp(-0.01) - 90*math.Exp(-0.05)}, // gets to 104.08
		{105, 90, 1, 0.05, up, in, 7 * math.Exp(-0.05)},
		{104, 90, 1, 0.05, up, out, 7 * day(104, 0.05)},
		{104, 90, 1, 0.05, up, in, 100*math.Exp(-0.01) - 90*math.Exp(-0.05)},
		{95, 90, 1, 0.05, down, out, 100*math.Exp(-0.01) - 90*math.Exp(-0.05)},
		{95, 90, 1, -0.05, down, out, 7 * day(95, -0.05)}, // falls to 94.18
		{95, 90, 1, -0.05, down, in, 100*math.Exp(-0.01) - 90*math.Exp(0.05)},
		{94, 90, 1, -0.05, down, in, 7 * math.Exp(0.05)},
		{101, 90, 1, 0.01, up, in, 7 * math.Exp(-0.01)}, // goes nowhere
	} {
		for _, vol := range []float64{0, 1e-30, 2e-5} {
			if c.t == 0 {
				vol = 0.2
			}
			g := newGreeks(1)
			terms := &BarrierTerms{Barrier: one(c.h), Rebate: one(7), Interval: one(0), Side: one(c.side), Knock: one(c.knock)}
			Barrier(g, terms, one(100), one(c.k), one(c.t), one(vol), one(c.r), one(0.01), one(1))
			if want := max(c.want, 0); !(math.Abs(g.Price[0]-want) <= 1e-9) || !(g.Residual[0] <= 1e-9) {
				t.Errorf("%+v with volatility %v: %v, residual %v", c, vol, g.Price[0], g.Residual[0])
			}
		}
	}
}

func TestMonitoringBarrier(t *testing.T) {
	// the constant is 0.5826 in the paper
	h := make([]float64, 3)
	MonitoringBarrier(h, []float64{90, 110, 90}, []float64{0.3, 0.3, 0.3}, []float64{0.004, 0.004, 0}, []float64{-1, 1, -1})
	for i, want := range []float64{90 * math.Exp(-0.5826*0.3*math.Sqrt(0.004)), 110 * math.Exp(0.5826*0.3*math.Sqrt(0.004)), 90} {
		if !(math.Abs(h[i]-want) < 1e-4) || i == 2 && h[i] != want {
			t.Errorf("barrier %d: %v, want %v", i, h[i], want)
		}
	}
}

// A down-and-out call watched 50 times in 0.2 years, against the recursion over
// those 50 times: the shifted barrier is within a thousandth, where the barrier
// itself is off by much more.
func TestDiscreteMonitoring(t *testing.T) {
	const s, k, vol, rate, expiry, times = 100, 100, 0.3, 0.1, 0.2, 50
	for _, h := range []float64{87, 91, 95} {
		exact := watchedCall(s, k, h, vol, rate, expiry, times)
		price := func(interval float64) float64 {
			p, c := one(0), deal{barrier: h, side: -1, knock: -1, gap: interval}
			BarrierPrice(p, c.terms(), one(s), one(k), one(expiry), one(vol), one(rate), one(0), one(1))
			return p[0]
		}
		shifted, continuous := math.Abs(price(expiry/times)-exact)/exact, math.Abs(price(0)-exact)/exact
		if !(shifted <= 1e-3) || !(continuous >= 5e-3) {
			t.Errorf("barrier %v: worth %.5f, shifted off by %.2g, continuous by %.2g", h, exact, shifted, continuous)
		}
	}
}

// watchedCall is a call that dies if it is below h at any of so many times: one
// Gauss–Legendre integral over the logarithm of the price for each.
func watchedCall(s, k, h, vol, rate, expiry float64, times int) float64 {
	const nodes = 400
	dt := expiry / float64(times)
	sd, drift := vol*math.Sqrt(dt), (rate-vol*vol/2)*dt
	x, w := make([]float64, nodes), make([]float64, nodes)
	quad.Legendre{}.FixedLocations(x, w, math.Log(h/s), 8*vol*math.Sqrt(expiry))
	density := func(from, to float64) float64 {
		z := (to - from - drift) / sd
		return math.Exp(-z*z/2-rate*dt) * invSqrt2Pi / sd
	}
	v, before := make([]float64, nodes), make([]float64, nodes)
	step := make([][nodes]float64, nodes)
	for i := range v {
		v[i] = max(s*math.Exp(x[i])-k, 0)
		for j := range v {
			step[i][j] = w[j] * density(x[i], x[j])
		}
	}
	for range times - 1 {
		for i := range before {
			before[i] = 0
			for j := range v {
				before[i] += step[i][j] * v[j]
			}
		}
		v, before = before, v
	}
	sum := 0.0
	for j := range v {
		sum += w[j] * density(0, x[j]) * v[j]
	}
	return sum
}
