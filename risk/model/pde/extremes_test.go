package pde_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/model/pde"
)

// Far from ordinary inputs results are still numbers, within the bounds that hold
// without a model, and an error above the tolerance is told.
func TestExtremes(t *testing.T) {
	rng := rand.New(rand.NewPCG(31, 32))
	var s pde.Solver
	uncertain := 0
	for n := range 300 {
		l := line{s: within(rng, .01, 1e5), t: within(rng, 1./365/24, 30), r: .5*rng.Float64() - .1, q: .5*rng.Float64() - .1, v: within(rng, .005, 3),
			w: float64(1 - 2*rng.IntN(2)), american: n%3 > 0}
		l.k = l.s * within(rng, .02, 50)
		if n%2 == 0 {
			l.k = l.s * within(rng, .8, 1.25)
		}
		for range rng.IntN(8) {
			l.divs = append(l.divs, pde.Dividend{Time: l.t * rng.Float64(), Amount: l.s * within(rng, 1e-4, .3)})
		}
		g := solve(&s, l)
		for i, x := range outputs(g, l) {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				t.Errorf("%+v: %s is %v", l, outputNames[i], x)
			}
		}
		payoff := max(0, l.w*(l.s-l.k))
		most := l.s * math.Exp(max(0, -l.q*l.t)) // of a call
		if l.w < 0 {
			most = l.k * math.Exp(max(0, -l.r*l.t))
		}
		if g.price < 0 || g.price > most*(1+1e-3)+g.err || l.american && g.price < payoff {
			t.Errorf("%+v: price %v, payoff %v, at most %v", l, g.price, payoff, most)
		}
		if told := g.status == pde.Uncertain; told != (g.err > pde.DefaultTolerance*l.s) {
			t.Errorf("%+v: status %v, error %v", l, g.status, g.err)
		} else if told {
			uncertain++
		}
	}
	t.Logf("%d of 300 uncertain", uncertain)
	if uncertain > 60 {
		t.Errorf("%d of 300 uncertain", uncertain)
	}
}

// American sensitivities for which there is no table, against differences of
// finer prices and deltas; without dividends time to expiry is all that passes.
func TestAmericanDifferences(t *testing.T) {
	rng := rand.New(rand.NewPCG(33, 34))
	var s pde.Solver
	fine := pde.Solver{Tolerance: 1e-6}
	held := 0
	for range 60 {
		l := random(rng)
		l.american = true
		g := solve(&s, l)
		if g.status != pde.Held || math.Abs(l.s-g.boundary) < .3*l.v*math.Sqrt(l.t)*l.s {
			continue
		}
		held++
		at := func(dt, dv float64) result { m := l; m.t += dt; m.v += dv; return solve(&fine, m) }
		h, e := .01*l.t, .03*l.v
		later, sooner, up, down := at(-h, 0), at(h, 0), at(0, e), at(0, -e)
		want := result{theta: (later.price - sooner.price) / (2 * h), charm: (later.delta - sooner.delta) / (2 * h),
			vega: (up.price - down.price) / (2 * e), vanna: (up.delta - down.delta) / (2 * e), volga: (up.vega - down.vega) / (2 * e)}
		a, b := outputs(g, l), outputs(want, l)
		for _, c := range []struct {
			i       int
			allowed float64
		}{{3, 2e-5}, {4, 3e-5}, {5, 3e-5}, {6, 3e-5}, {7, 5e-5}} {
			near(t, outputNames[c.i], a[c.i], b[c.i], c.allowed)
		}
		terms := .5*l.v*l.v*l.s*l.s*g.gamma + math.Abs((l.r-l.q)*l.s*g.delta) + math.Abs(l.r)*g.price
		if left := g.residual * max(g.price, 1e-4*l.s); !(left/52 < 5e-3*terms/52+4e-6*l.s) {
			t.Errorf("%+v: residual %v", l, g.residual)
		}
	}
	if held < 25 {
		t.Errorf("only %d options held", held)
	}
}

// With a wide spread the mesh once reached down to where an ex-date drowned in
// rounding. The value is from quadrature over the density of each period, with
// SciPy's spline and normal distribution.
func TestWideSpreadWithDividends(t *testing.T) {
	var s pde.Solver
	l := line{s: 100, k: 100, t: 1.95, r: .03, v: 4, w: -1, divs: []pde.Dividend{{Time: .33, Amount: 4}, {Time: 1.33, Amount: 4}}}
	european := solve(&s, l)
	near(t, "European put", european.price, 93.9626017, 2e-5*l.s)
	l.american = true
	if american := solve(&s, l); american.price < european.price || american.price > 100 {
		t.Errorf("American put %v, European %v", american.price, european.price)
	}
	last := 0.0
	for _, l.v = range []float64{.5, 1, 1.5, 2, 3, 4, 5, 6, 7, 8} {
		got := solve(&s, l)
		if !(got.price > last) || got.price > 100 {
			t.Errorf("volatility %v: American put %v, %v at a lower one", l.v, got.price, last)
		}
		last = got.price
	}
}

// American options under escrowed dividends against a binomial lattice of what is
// not in escrow.
func TestEscrowedAmerican(t *testing.T) {
	var s pde.Solver
	for _, w := range []float64{-1, 1} {
		for _, k := range []float64{85, 100, 115} {
			l := line{s: 100, k: k, t: 1, r: .05, q: .02, v: .25, w: w, american: true, convention: pde.Escrowed,
				divs: []pde.Dividend{{Time: .35, Amount: 3}, {Time: .85, Amount: 4}}}
			want := .25 * (binomial(l, 1000) + 2*binomial(l, 1001) + binomial(l, 1002))
			near(t, "escrowed", solve(&s, l).price, want, 5e-3)
		}
	}
}

// binomial is the lattice of Cox, Ross & Rubinstein 1979 under escrowed dividends,
// exercised on the eve of an ex-date that falls between two of its times.
func binomial(l line, steps int) float64 {
	dt := l.t / float64(steps)
	u := math.Exp(l.v * math.Sqrt(dt))
	p := (math.Exp((l.r-l.q)*dt) - 1/u) / (u - 1/u)
	disc := math.Exp(-l.r * dt)
	escrow := func(t float64) (x float64) {
		for _, d := range l.divs {
			if d.Time >= t {
				x += d.Amount * math.Exp(-(l.r-l.q)*(d.Time-t))
			}
		}
		return x
	}
	core := l.s - escrow(0)
	v := make([]float64, steps+1)
	for n := steps; n >= 0; n-- {
		t := float64(n) * dt
		x := escrow(t)
		for i := range n + 1 {
			e := l.w * (core*math.Pow(u, float64(2*i-n)) + x - l.k)
			if n == steps {
				v[i] = max(0, e)
				continue
			}
			v[i] = max(disc*(p*v[i+1]+(1-p)*v[i]), e)
		}
	}
	return v[0]
}
