package pde_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/model"
	"nightbook/risk/model/pde"
)

// within returns a number from a to b, log-uniformly.
func within(rng *rand.Rand, a, b float64) float64 { return a * math.Exp(rng.Float64()*math.Log(b/a)) }

// random returns an option within two standard deviations of its forward.
func random(rng *rand.Rand) line {
	l := line{s: 100, t: within(rng, .02, 4), r: .12*rng.Float64() - .02, q: .12*rng.Float64() - .03, v: within(rng, .08, .8), w: float64(1 - 2*rng.IntN(2))}
	l.k = l.s * math.Exp((l.r-l.q)*l.t+2*l.v*math.Sqrt(l.t)*(2*rng.Float64()-1))
	return l
}

func (l line) with(divs ...pde.Dividend) line { l.divs = divs; return l }

func closed(l line) result {
	var g model.Greeks
	for _, s := range g.Slices() {
		*s = make([]float64, 1)
	}
	model.BSM(&g, []float64{l.s}, []float64{l.k}, []float64{l.t}, []float64{l.v}, []float64{l.r}, []float64{l.q}, []float64{l.w})
	return result{price: g.Price[0], delta: g.Delta[0], gamma: g.Gamma[0], vega: g.Vega[0], theta: g.Theta[0], rho: g.Rho[0],
		carryRho: g.CarryRho[0], vanna: g.Vanna[0], volga: g.Volga[0], charm: g.Charm[0]}
}

// outputs are the sensitivities in the units of a share of the spot, with the
// changes of the inputs they are for: gamma for a move by a standard deviation of
// a week, theta and charm for a week, vega and its kin for a tenth of the
// volatility, rho for a point.
func outputs(g result, l line) [10]float64 {
	move, week, vol := l.v*math.Sqrt(1./52), 1./52, .1*l.v
	return [10]float64{g.price / l.s, g.delta * move, g.gamma * l.s * move * move, g.theta * week / l.s, g.charm * week * move,
		g.vega * vol / l.s, g.vanna * vol * move, g.volga * vol * vol / l.s, g.rho * .01 / l.s, g.carryRho * .01 / l.s}
}

var outputNames = [10]string{"price", "delta", "gamma", "theta", "charm", "vega", "vanna", "volga", "rho", "carry_rho"}

// A European option without dividends is Black–Scholes–Merton, in all outputs.
func TestEuropeanIsClosedForm(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	var s pde.Solver
	var worst [10]float64
	for range 300 {
		l := random(rng)
		got := solve(&s, l)
		a, b := outputs(got, l), outputs(closed(l), l)
		for i := range a {
			worst[i] = max(worst[i], math.Abs(a[i]-b[i]))
		}
		if got.err > 2e-5*l.s || math.Abs(got.price-closed(l).price) > 2e-5*l.s {
			t.Errorf("%+v: price %v ± %v, closed form %v", l, got.price, got.err, closed(l).price)
		}
		terms := .5*l.v*l.v*l.s*l.s*got.gamma + math.Abs((l.r-l.q)*l.s*got.delta) + math.Abs(l.r)*got.price
		if left := got.residual * max(got.price, 1e-4*l.s); !(left/52 < 2e-3*terms/52+4e-6*l.s) {
			t.Errorf("%+v: residual %v", l, got.residual)
		}
	}
	for i, bound := range [10]float64{1e-5, 5e-6, 3e-5, 3e-6, 1e-5, 1e-5, 1e-5, 1e-5, 2e-6, 2e-6} {
		t.Logf("%-9s error %.1e of the spot", outputNames[i], worst[i])
		if !(worst[i] < bound) {
			t.Errorf("%s: error %.2g of the spot, allowed %.1g", outputNames[i], worst[i], bound)
		}
	}
}

// Values obey the bounds that hold without any model of volatility, and shapes
// that hold for the lognormal one.
func TestOrderOfValues(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	var s pde.Solver
	exercised := 0
	for n := range 200 {
		l := random(rng)
		if n%2 == 1 {
			l = l.with(pde.Dividend{Time: l.t * rng.Float64(), Amount: 3 * rng.Float64()}, pde.Dividend{Time: l.t * rng.Float64(), Amount: 3 * rng.Float64()})
		}
		a := l
		a.american = true
		e, g := solve(&s, l), solve(&s, a)
		slack := 4e-5 * l.s
		if g.price < e.price-slack || g.price < l.w*(l.s-l.k) {
			t.Errorf("%+v: American %v, European %v, exercise %v", l, g.price, e.price, l.w*(l.s-l.k))
		}
		if g.status == pde.Exercised {
			exercised++
			if g.price != l.w*(l.s-l.k) || g.delta != l.w || g.gamma != 0 || g.err != 0 || g.residual == g.residual {
				t.Errorf("%+v: exercised, %+v", l, g)
			}
		}
		if n%2 == 0 {
			longer := a
			longer.t *= 1.1
			if x := solve(&s, longer); x.price < g.price-slack {
				t.Errorf("%+v: %v, a tenth longer %v", a, g.price, x.price)
			}
		}
		up, down := a, a
		up.s *= 1.02
		down.s *= .98
		if x, y := solve(&s, up), solve(&s, down); x.price+y.price < 2*g.price-2*slack {
			t.Errorf("%+v: not convex in the spot", a)
		}
		if g.gamma < -1e-3/l.s || l.w*g.delta < -1e-4 || l.q >= 0 && l.w*g.delta > 1+1e-4 {
			t.Errorf("%+v: gamma %v, delta %v", a, g.gamma, g.delta)
		}
	}
	if exercised < 15 {
		t.Errorf("only %d of the options are to be exercised now", exercised)
	}
}

// A call is never exercised before expiry if holding the underlying costs nothing.
func TestCallWithoutYield(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	var s pde.Solver
	for range 60 {
		l := random(rng)
		l.w, l.r, l.q = 1, math.Abs(l.r), -math.Abs(l.q)
		a := l
		a.american = true
		g := solve(&s, a)
		near(t, "American call", g.price, max(solve(&s, l).price, l.s-l.k), 1e-9*l.s)
		if g.status != pde.Held || g.boundary == g.boundary {
			t.Errorf("%+v: status %v, boundary %v", a, g.status, g.boundary)
		}
	}
}

// A call is a put with S and K, r and q exchanged (McDonald & Schroder 1998);
// so is its boundary B, at S·K/B.
func TestSymmetry(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 8))
	var s pde.Solver
	boundaries := 0
	for range 150 {
		l := random(rng)
		l.w, l.american = 1, true
		m := l
		m.w, m.s, m.k, m.r, m.q = -1, l.k, l.s, l.q, l.r
		a, b := solve(&s, l), solve(&s, m)
		near(t, "put", b.price, a.price, 3e-5*max(l.s, l.k))
		if a.status != b.status {
			t.Errorf("%+v: call %v, put %v", l, a.status, b.status)
		}
		if a.boundary == a.boundary && b.boundary == b.boundary {
			boundaries++
			near(t, "boundary", l.s*l.k/b.boundary, a.boundary, 1e-2*a.boundary)
		}
	}
	if boundaries < 50 {
		t.Errorf("only %d boundaries", boundaries)
	}
}
