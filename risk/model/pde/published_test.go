package pde_test

import (
	"math"
	"testing"

	"nightbook/risk/model/pde"
)

// line is one option.
type line struct {
	s, k, t, r, q, v, w float64
	american            bool
	divs                []pde.Dividend
	convention          pde.Convention
}

func (l line) chain() *pde.Chain {
	return &pde.Chain{Spot: l.s, Time: l.t, Rate: l.r, Yield: l.q, Sign: l.w, American: l.american, Dividends: l.divs,
		Convention: l.convention, Strike: []float64{l.k}, Vol: []float64{l.v}}
}

// result is one line of Results.
type result struct {
	price, delta, gamma, vega, theta, rho, carryRho, vanna, volga, charm, residual, err, boundary, beyond float64
	status                                                                                                pde.Status
}

func row(r *pde.Results, i int) result {
	return result{r.Price[i], r.Delta[i], r.Gamma[i], r.Vega[i], r.Theta[i], r.Rho[i], r.CarryRho[i], r.Vanna[i], r.Volga[i], r.Charm[i],
		r.Residual[i], r.Error[i], r.Boundary[i], r.Beyond[i], r.Status[i]}
}

func solve(s *pde.Solver, l line) result {
	var r pde.Results
	s.Solve(l.chain(), &r)
	return row(&r, 0)
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.7g, want %.7g ± %.1g", what, got, want, tolerance)
	}
}

// American put Greeks and the boundary now, computed independently in high
// precision.
func TestAmericanPutGreeks(t *testing.T) {
	for _, c := range []struct {
		s, k, t, r, q, v                                float64
		price, delta, gamma, vega, rho, theta, boundary float64
	}{
		{100, 100, 1, .05, 0, .2, 6.09037059, -.411060, .022989, 37.4878, -30.2173, -2.2379, 80.87506},
		{100, 100, 1, .05, .05, .25, 9.56944530, -.436296, .015650, 38.0820, -43.2740, -4.4120, 64.79227},
		{36, 40, 1, .06, 0, .2, 4.48667436, -.696807, .086725, 10.9357, -10.3327, -.47361, 32.91466},
	} {
		l := line{s: c.s, k: c.k, t: c.t, r: c.r, q: c.q, v: c.v, w: -1, american: true}
		for _, x := range []struct {
			tolerance, price, delta, gamma, vega, rho, theta, boundary float64 // bounds, as shares of the spot
		}{
			{2e-5, 2e-6, 3e-5, 1e-3, 2e-4, 2e-4, 1e-5, 1e-3},
			{1e-6, 2e-7, 2e-6, 1e-4, 8e-5, 4e-5, 1e-6, 4e-5},
		} {
			g := solve(&pde.Solver{Tolerance: x.tolerance}, l)
			near(t, "price", g.price, c.price, x.price*c.s)
			near(t, "delta", g.delta, c.delta, x.delta+5e-7)
			near(t, "gamma", g.gamma, c.gamma, x.gamma/c.s+5e-7)
			near(t, "vega", g.vega, c.vega, x.vega*c.s+5e-5)
			near(t, "rho", g.rho, c.rho, x.rho*c.s+5e-5)
			near(t, "theta", g.theta, c.theta, x.theta*c.s+5e-5)
			near(t, "boundary", g.boundary, c.boundary, x.boundary*c.s)
			if g.status != pde.Held || g.beyond == g.beyond {
				t.Errorf("%+v: status %v, beyond %v", l, g.status, g.beyond)
			}
		}
	}
}

// The early exercise premium of the benchmark option of Andersen, Lake &
// Offengenden 2016, from memory, reproduced.
func TestBenchmarkPremium(t *testing.T) {
	s := &pde.Solver{Tolerance: 1e-7}
	l := line{s: 100, k: 100, t: 1, r: .05, q: .05, v: .25, w: -1}
	a := l
	a.american = true
	near(t, "premium", solve(s, a).price-solve(s, l).price, 0.106952702747, 2e-6)
}

// The puts of Geske & Johnson 1984, S 40, r .0488, from memory, reproduced to
// 1e-4; the last one is 4.35271 when converged.
func TestGeskeJohnson(t *testing.T) {
	var s pde.Solver
	for i, rows := range [][3][3]float64{
		{{.0062, .2004, .4328}, {.8522, 1.5798, 1.9904}, {5.0000, 5.0883, 5.2670}},
		{{.0774, .6975, 1.2198}, {1.3099, 2.4825, 3.1696}, {5.0597, 5.7056, 6.2436}},
		{{.2466, 1.3460, 2.1549}, {1.7681, 3.3874, 4.35271}, {5.2868, 6.5099, 7.3830}},
	} {
		for j, row := range rows {
			for k, want := range row {
				l := line{s: 40, k: []float64{35, 40, 45}[j], t: []float64{.0833, .3333, .5833}[k], r: .0488, v: .2 + .1*float64(i), w: -1, american: true}
				near(t, "put", solve(&s, l).price, want, 2e-4)
			}
		}
	}
}

// The calls of Broadie & Detemple 1996, K 100, from memory, reproduced to .001:
// the printed values are those of a deep binomial lattice.
func TestBroadieDetemple(t *testing.T) {
	var s pde.Solver
	for i := range 5 {
		spot := 80 + 10*float64(i)
		near(t, "q > r", solve(&s, line{s: spot, k: 100, t: .5, r: .03, q: .07, v: .2, w: 1, american: true}).price,
			[]float64{.219, 1.386, 4.783, 11.098, 20.000}[i], .001)
		near(t, "q < r", solve(&s, line{s: spot, k: 100, t: .5, r: .07, q: .03, v: .3, w: 1, american: true}).price,
			[]float64{1.664, 4.495, 9.251, 15.798, 23.706}[i], .001)
	}
}

// The continuously exercisable values of the puts in Table 1 of Longstaff &
// Schwartz 2001, K 40, r .06, computed independently in high precision; what the
// table prints is for 50 exercise dates a year.
func TestLongstaffSchwartz(t *testing.T) {
	var s pde.Solver
	for i, row := range [][4]float64{{4.4867, 4.8483, 7.1090, 8.5142}, {2.3196, 2.8900, 5.3183, 6.9235}, {1.1130, 1.6933, 3.9528, 5.6467}} {
		for j, want := range row {
			l := line{s: 36 + 4*float64(i), k: 40, t: 1 + float64(j%2), r: .06, v: .2 + .2*float64(j/2), w: -1, american: true}
			near(t, "put", solve(&s, l).price, want, 2.5e-4)
		}
	}
}

// One cash dividend, piecewise lognormal: S 100, r .06, σ .3, T 1, D 7; computed
// independently in high precision (10.5806 and 11.1062 agree with Haug, Haug &
// Lewis 2003, from memory).
func TestOneDividend(t *testing.T) {
	var s pde.Solver
	for _, c := range []struct{ at, k, european, american float64 }{
		{.0001, 70, 28.5332, 30.0004}, {.0001, 100, 10.5806, 10.5806}, {.0001, 130, 3.0977, 3.0977},
		{.5, 70, 28.9215, 32.4608}, {.5, 100, 11.1062, 11.6564}, {.5, 130, 3.4383, 3.4595},
		{.9999, 70, 29.3256, 34.9838}, {.9999, 100, 11.5887, 14.7162}, {.9999, 130, 3.7263, 4.9189},
	} {
		l := line{s: 100, k: c.k, t: 1, r: .06, v: .3, w: 1, divs: []pde.Dividend{{Time: c.at, Amount: 7}}}
		near(t, "European", solve(&s, l).price, c.european, 3e-4)
		l.american = true
		near(t, "American", solve(&s, l).price, c.american, 6e-4) // K 70: the kink of an exercise tomorrow, a cell from the spot
	}
	put := pde.Chain{Spot: 100, Time: 1, Rate: .06, Sign: -1, American: true, Dividends: []pde.Dividend{{Time: .5, Amount: 7}},
		Strike: []float64{70, 100, 130}, Vol: []float64{.3, .3, .3}}
	var strip pde.Results
	s.Solve(&put, &strip)
	for i, want := range []float64{1.7151, 12.9027, 35.0938} { // to 2e-4
		near(t, "put", strip.Price[i], want, 4e-4)
	}
}

// The same σ under both conventions, S = K = 100, D 7 at .5; computed
// independently in high precision.
func TestConventions(t *testing.T) {
	var s pde.Solver
	l := line{s: 100, k: 100, t: 1, r: .06, v: .3, w: 1, divs: []pde.Dividend{{Time: .5, Amount: 7}}}
	near(t, "piecewise", solve(&s, l).price, 11.1062, 3e-4)
	l.convention = pde.Escrowed
	near(t, "escrowed", solve(&s, l).price, 10.6932, 3e-4)
}

// Escrowed dividends: Hull's European call, and the American call of Roll, Geske
// & Whaley in Haug 2007; both from memory, reproduced.
func TestEscrowed(t *testing.T) {
	var s pde.Solver
	hull := line{s: 40, k: 40, t: .5, r: .09, v: .3, w: 1, convention: pde.Escrowed,
		divs: []pde.Dividend{{Time: 5. / 12, Amount: .5}, {Time: 2. / 12, Amount: .5}}}
	near(t, "Hull", solve(&s, hull).price, 3.67, .005)
	haug := line{s: 80, k: 82, t: .3333, r: .06, v: .3, w: 1, american: true, convention: pde.Escrowed, divs: []pde.Dividend{{Time: .25, Amount: 4}}}
	near(t, "Roll–Geske–Whaley", solve(&pde.Solver{Tolerance: 5e-6}, haug).price, 4.3860, 1e-4)
}
