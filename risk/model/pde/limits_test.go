package pde_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/model/pde"
)

func TestDividendsWithoutEffect(t *testing.T) {
	var s pde.Solver
	for _, w := range []float64{-1, 1} {
		for _, american := range []bool{false, true} {
			l := line{s: 100, k: 103, t: .7, r: .04, q: .01, v: .25, w: w, american: american}
			want := solve(&s, l)
			for _, d := range []pde.Dividend{{Time: .3, Amount: 0}, {Time: 0, Amount: 5}, {Time: -.1, Amount: 5}, {Time: .7000001, Amount: 5}} {
				if got := solve(&s, l.with(d)); got.price != want.price || got.charm != want.charm {
					t.Errorf("%+v with %+v: %v, without %v", l, d, got.price, want.price)
				}
			}
			tiny := solve(&s, l.with(pde.Dividend{Time: .3, Amount: 1e-9}))
			near(t, "a dividend of next to nothing", tiny.price, want.price, 3e-5*l.s)
		}
	}
}

// At expiry the price drops before a European option pays, and the holder of an
// American call has the evening before.
func TestDividendAtExpiry(t *testing.T) {
	var s pde.Solver
	l := line{s: 100, k: 95, t: .5, r: .05, q: .02, v: .3, w: 1}
	shifted := l
	shifted.k += 6
	d := pde.Dividend{Time: .5, Amount: 6}
	near(t, "European", solve(&s, l.with(d)).price, closed(shifted).price, 2e-5*l.s)
	a := l.with(d)
	a.american = true
	plain := l
	plain.american = true
	near(t, "American", solve(&s, a).price, solve(&s, plain).price, 2e-5*l.s)
}

// A dividend above the price leaves 0: the put is worth its discounted strike,
// the call nothing.
func TestDividendAboveThePrice(t *testing.T) {
	var s pde.Solver
	d := pde.Dividend{Time: .25, Amount: 400}
	l := line{s: 100, k: 100, t: 1, r: .05, v: .2, w: -1}
	near(t, "put", solve(&s, l.with(d)).price, 100*math.Exp(-.05), 2e-3)
	l.w = 1
	near(t, "call", solve(&s, l.with(d)).price, 0, 2e-3)
	l.american = true
	early := l
	early.american, early.t = false, .25 // exercise on the eve
	near(t, "American call", solve(&s, l.with(d)).price, closed(early).price, 4e-3)
	l.w = -1
	near(t, "American put", solve(&s, l.with(d)).price, 100*math.Exp(-.05*.25), 2e-3) // on the morning after
}

// Two dividends on one day are one, in any order of the list.
func TestDividendsAdd(t *testing.T) {
	var s pde.Solver
	l := line{s: 100, k: 100, t: 1, r: .05, v: .2, w: 1, american: true}
	a := solve(&s, l.with(pde.Dividend{Time: .3, Amount: 3}, pde.Dividend{Time: .8, Amount: 1}))
	b := solve(&s, l.with(pde.Dividend{Time: .8, Amount: 1}, pde.Dividend{Time: .3, Amount: 1}, pde.Dividend{Time: .3, Amount: 2}))
	if a != b && !(a.boundary != a.boundary && a.price == b.price && a.volga == b.volga) {
		t.Errorf("%+v, %+v", a, b)
	}
}

// European options under escrowed dividends are Black–Scholes–Merton on the spot
// less what is in escrow, with sensitivities that know of the escrow.
func TestEscrowedEuropean(t *testing.T) {
	var s pde.Solver
	for _, w := range []float64{-1, 1} {
		l := line{s: 100, k: 104, t: 1, r: .06, q: .01, v: .3, w: w, convention: pde.Escrowed, divs: []pde.Dividend{{Time: .4, Amount: 3}, {Time: .9, Amount: 4}}}
		value := func(spot, r, q, passed float64) float64 {
			m := l
			m.r, m.q, m.t = r, q, l.t-passed
			for _, d := range l.divs {
				spot -= d.Amount * math.Exp(-(r-q)*(d.Time-passed))
			}
			m.s = spot
			return closed(m).price
		}
		got := solve(&s, l)
		near(t, "price", got.price, value(100, .06, .01, 0), 2e-3)
		near(t, "delta", got.delta, (value(100.1, .06, .01, 0)-value(99.9, .06, .01, 0))/.2, 1e-4)
		near(t, "rho", got.rho, (value(100, .0601, .01, 0)-value(100, .0599, .01, 0))/2e-4, 1e-2)
		near(t, "carry_rho", got.carryRho, (value(100, .06, .0101, 0)-value(100, .06, .0099, 0))/2e-4, 1e-2)
		near(t, "theta", got.theta, (value(100, .06, .01, 1e-3)-value(100, .06, .01, -1e-3))/2e-3, 2e-3)
		near(t, "residual", got.residual, 0, 1e-3)
	}
}

// Options between two boundaries: exercise brings nothing below the one and
// above the other.
func TestInterval(t *testing.T) {
	s := pde.Solver{Tolerance: 2e-6}
	put := line{s: 100, k: 110, t: .5, r: -.03, q: -.04, v: .06, w: -1, american: true}
	g := solve(&s, put)
	low := put
	low.s = 86
	g.beyond = solve(&s, low).beyond // each is known best from near by
	if !(g.beyond > put.k*put.r/put.q-1e-3 && g.beyond < g.boundary && g.boundary < put.k) {
		t.Fatalf("boundaries %v and %v", g.beyond, g.boundary)
	}
	for _, x := range []float64{g.beyond - 1, g.beyond + .5, .5 * (g.beyond + g.boundary), g.boundary - .5, g.boundary + 1} {
		l := put
		l.s = x
		inside := x > g.beyond && x < g.boundary
		h := solve(&s, l)
		if (h.status == pde.Exercised) != inside {
			t.Errorf("spot %v, boundaries %v and %v: status %v", x, g.beyond, g.boundary, h.status)
		}
		if !inside && !(h.price > l.k-l.s) {
			t.Errorf("spot %v: %v, exercise %v", x, h.price, l.k-l.s)
		}
	}
	near(t, "far below, where it is held to expiry", solve(&s, line{s: 40, k: 110, t: .5, r: -.03, q: -.04, v: .06, w: -1, american: true}).price,
		closed(line{s: 40, k: 110, t: .5, r: -.03, q: -.04, v: .06, w: -1}).price, 1e-3)
	call := line{s: put.k, k: put.s, t: .5, r: put.q, q: put.r, v: .06, w: 1, american: true}
	near(t, "call", solve(&s, call).price, g.price, 1e-3)
}

func TestExpiryAndCertainty(t *testing.T) {
	var s pde.Solver
	at := solve(&s, line{s: 90, k: 100, r: .05, v: .2, w: -1})
	if at.price != 10 || at.delta != -1 || at.status != pde.Exercised || at.theta != 0 {
		t.Errorf("at expiry: %+v", at)
	}
	if at := solve(&s, line{s: 110, k: 100, r: .05, v: .2, w: -1, american: true}); at.price != 0 || at.delta != 0 || at.status != pde.Held {
		t.Errorf("at expiry, out of the money: %+v", at)
	}
	rng := rand.New(rand.NewPCG(9, 10))
	for n := range 200 {
		l := random(rng)
		l.k = l.s * (0.7 + .6*rng.Float64())
		l.american = n%2 == 0
		if n%3 > 0 {
			l = l.with(pde.Dividend{Time: l.t * rng.Float64(), Amount: 4 * rng.Float64()}, pde.Dividend{Time: l.t * rng.Float64(), Amount: 4 * rng.Float64()})
		}
		if n%5 == 0 {
			l.convention = pde.Escrowed
		}
		l.v = 0
		c := solve(&s, l)
		// the greatest payoff on a fine grid of times
		best := 0.0
		for i := range 4001 {
			t := l.t * float64(i) / 4000
			if !l.american && i < 4000 {
				continue
			}
			for _, d := range l.divs { // the eve of each ex-date is a time to exercise as well
				if l.american && i > 0 && d.Time <= t && d.Time > t-l.t/4000 {
					best = max(best, math.Exp(-l.r*d.Time)*l.w*(certainSpot(l, d.Time, false)-l.k), math.Exp(-l.r*d.Time)*l.w*(certainSpot(l, d.Time, true)-l.k))
				}
			}
			best = max(best, math.Exp(-l.r*t)*l.w*(certainSpot(l, t, true)-l.k))
		}
		near(t, "without volatility", c.price, best, 1e-4)
		if c.status == pde.Held && c.price > .5 {
			h := .01
			up, down := l, l
			up.s += h
			down.s -= h
			near(t, "delta", c.delta, (solve(&s, up).price-solve(&s, down).price)/(2*h), 5e-3)
			up, down = l, l
			up.r += 1e-5
			down.r -= 1e-5
			near(t, "rho", c.rho, (solve(&s, up).price-solve(&s, down).price)/2e-5, .5)
			up, down = l, l
			up.q += 1e-5
			down.q -= 1e-5
			near(t, "carry_rho", c.carryRho, (solve(&s, up).price-solve(&s, down).price)/2e-5, .5)
		}
	}
}

// certainSpot is the price at t without volatility, after the drop of an ex-date
// at t or before it.
func certainSpot(l line, t float64, after bool) float64 {
	at, s := 0.0, l.s
	dividends := append([]pde.Dividend(nil), l.divs...)
	if len(dividends) == 2 && dividends[0].Time > dividends[1].Time {
		dividends[0], dividends[1] = dividends[1], dividends[0]
	}
	if l.convention == pde.Escrowed {
		escrow := 0.0
		for _, d := range dividends {
			s -= d.Amount * math.Exp(-(l.r-l.q)*d.Time)
			if d.Time > t || d.Time == t && !after {
				escrow += d.Amount * math.Exp(-(l.r-l.q)*(d.Time-t))
			}
		}
		return s*math.Exp((l.r-l.q)*t) + escrow
	}
	for _, d := range dividends {
		if d.Time < t || d.Time == t && after {
			s = max(0, s*math.Exp((l.r-l.q)*(d.Time-at))-d.Amount)
			at = d.Time
		}
	}
	return s * math.Exp((l.r-l.q)*(t-at))
}

func TestInvalid(t *testing.T) {
	var s pde.Solver
	good := line{s: 100, k: 100, t: 1, r: .05, q: .01, v: .2, w: 1, american: true, divs: []pde.Dividend{{Time: .5, Amount: 1}}}
	nan, inf := math.NaN(), math.Inf(1)
	for name, spoil := range map[string]func(*line){
		"spot 0": func(l *line) { l.s = 0 }, "spot NaN": func(l *line) { l.s = nan }, "spot infinite": func(l *line) { l.s = inf },
		"strike": func(l *line) { l.k = -1 }, "time": func(l *line) { l.t = -1 }, "time NaN": func(l *line) { l.t = nan },
		"vol": func(l *line) { l.v = -.2 }, "vol huge": func(l *line) { l.v = 50 }, "rate": func(l *line) { l.r = inf }, "yield": func(l *line) { l.q = nan },
		"sign": func(l *line) { l.w = 0 }, "convention": func(l *line) { l.convention = 7 },
		"amount":   func(l *line) { l.divs = []pde.Dividend{{Time: .5, Amount: -1}} },
		"ex-date":  func(l *line) { l.divs = []pde.Dividend{{Time: nan, Amount: 1}} },
		"escrowed": func(l *line) { l.divs, l.convention = []pde.Dividend{{Time: .5, Amount: 200}}, pde.Escrowed },
	} {
		l := good
		spoil(&l)
		g := solve(&s, l)
		if g.status != pde.Invalid || g.price == g.price || g.charm == g.charm || g.err == g.err {
			t.Errorf("%s: %+v", name, g)
		}
	}
	if g := solve(&s, good); g.status != pde.Held || !(g.price > 0) {
		t.Errorf("the good one: %+v", g)
	}
}

func TestNothingAllocated(t *testing.T) {
	var s pde.Solver
	var r pde.Results
	for _, l := range []line{
		{s: 100, k: 100, t: 1, r: .05, v: .2, w: -1, american: true},
		{s: 100, k: 100, t: 1, r: -.02, q: -.03, v: .2, w: -1, american: true},
		line{s: 100, k: 100, t: 1, r: .05, v: .2, w: 1, american: true}.with(pde.Dividend{Time: .4, Amount: 2}, pde.Dividend{Time: .9, Amount: 2}),
		{s: 100, k: 100, t: 1, r: .05, v: 0, w: 1, american: true},
	} {
		c := l.chain()
		s.Solve(c, &r)
		if n := testing.AllocsPerRun(20, func() { s.Solve(c, &r) }); n > 0.5 {
			t.Errorf("%+v: %v allocations", l, n)
		}
	}
}
