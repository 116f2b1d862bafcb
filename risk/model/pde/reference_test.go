package pde_test

import (
	"math"
	"slices"
	"testing"

	"nightbook/risk/internal/ref"
	"nightbook/risk/model/pde"
)

// All outputs against the 1,000 random options of the lattice in risk/internal/ref:
// European and American, up to five dividends, one boundary and two.
func TestAgainstLattice(t *testing.T) {
	table := ref.PDEOptions()
	if len(table) != 1000 {
		t.Fatalf("%d options in the table", len(table))
	}
	for _, c := range []struct {
		tolerance float64
		within    int           // of the prices, within their error estimate
		allowed   [6][3]float64 // errors of 95 %, 99 % and all, as shares of the spot; see outputs
	}{
		{pde.DefaultTolerance, 980, [6][3]float64{
			{3e-6, 1e-5, pde.DefaultTolerance}, {3e-6, 2e-5, 5e-4}, {1e-5, 1e-4, 3e-3}, {1e-5, 2e-5, 5e-5}, {5e-6, 2e-5, 1e-4}, {5e-6, 2e-5, 1e-4}}},
		{1e-4, 950, [6][3]float64{
			{2e-5, 5e-5, 1e-4}, {2e-5, 1e-4, 2e-3}, {3e-5, 3e-4, 1e-2}, {2e-5, 1e-4, 3e-4}, {2e-5, 1e-4, 2e-4}, {2e-5, 1e-4, 2e-4}}},
	} {
		s := pde.Solver{Tolerance: c.tolerance}
		var errs [6][]float64
		within, american, intervals, greeks, uncertain := 0, 0, 0, 0, 0
		for _, o := range table {
			l := line{s: 100, k: o.Strike, t: o.Time, r: o.Rate, q: o.Yield, v: o.Vol, w: o.Sign, american: o.American}
			for _, d := range o.Dividends {
				l.divs = append(l.divs, pde.Dividend{Time: d[0], Amount: d[1]})
			}
			if o.American {
				american++
				if o.Sign < 0 && o.Rate < 0 && o.Yield < o.Rate || o.Sign > 0 && o.Yield < 0 && o.Rate < o.Yield {
					intervals++
				}
			}
			g := solve(&s, l)
			if g.status == pde.Uncertain {
				uncertain++
			}
			off := math.Abs(g.price - o.Price)
			if off <= g.err+o.Spread+1e-6*l.s {
				within++
			}
			if off > c.tolerance*l.s {
				t.Logf("%+v: %v ± %v, lattice %v", l, g.price, g.err, o.Price)
			}
			a := outputs(g, l)
			b := outputs(result{price: o.Price, delta: o.Delta, gamma: o.Gamma, vega: o.Vega, rho: o.Rho, carryRho: o.CarryRho}, l)
			for k, i := range [6]int{0, 1, 2, 5, 8, 9} {
				if k < 3 || o.HasGreeks {
					errs[k] = append(errs[k], math.Abs(a[i]-b[i]))
				}
			}
			if o.HasGreeks {
				greeks++
			}
		}
		if american < 700 || intervals < 8 || greeks < 200 {
			t.Errorf("%d American options, %d with two boundaries, %d with all sensitivities", american, intervals, greeks)
		}
		t.Logf("tolerance %.0e: %d of %d within the error estimate, %d uncertain, %d with two boundaries", c.tolerance, within, len(table), uncertain, intervals)
		if within < c.within {
			t.Errorf("tolerance %v: %d of %d prices within their error estimate", c.tolerance, within, len(table))
		}
		for k, name := range [6]string{"price", "delta", "gamma", "vega", "rho", "carry_rho"} {
			e := errs[k]
			slices.Sort(e)
			n := len(e)
			found := [3]float64{e[n*95/100], e[n*99/100], e[n-1]}
			t.Logf("  %-9s median %.1e, 95 %% %.1e, 99 %% %.1e, all %.1e of the spot", name, e[n/2], found[0], found[1], found[2])
			for i, allowed := range c.allowed[k] {
				if !(found[i] <= allowed) {
					t.Errorf("tolerance %v, %s: %.2g of the spot for %s, allowed %.1g", c.tolerance, name, found[i], [3]string{"95 %", "99 %", "all"}[i], allowed)
				}
			}
		}
	}
}
