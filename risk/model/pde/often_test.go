package pde_test

import (
	"testing"

	"nightbook/risk/model/pde"
)

// Puts on what pays often and for long, against integrals: a price near 0, where
// ex-dates take it below the mesh, is met hundreds of times. With the slope of the
// last two nodes carried on below them, the first of these was off by 7e-3 of the
// spot, beside an estimate of 1e-4, and the third by all of its value.
func TestOftenPaid(t *testing.T) {
	for _, c := range []struct {
		name   string
		years  float64
		vol    float64
		aYear  int
		yearly float64
	}{
		{"monthly", 10, .2, 12, 6.5},
		{"weekly", 10, .35, 52, 5},
		{"each second day", 10, .35, 182, 5},
	} {
		l := line{s: 100, t: c.years, r: .03, v: c.vol, w: -1}
		for i := 1; i < int(c.years)*c.aYear; i++ {
			l.divs = append(l.divs, pde.Dividend{Time: float64(i) / float64(c.aYear), Amount: c.yearly / float64(c.aYear)})
		}
		chain := l.chain()
		chain.Strike, chain.Vol = []float64{60, 100}, []float64{c.vol, c.vol}
		var s pde.Solver
		var european, american pde.Results
		s.Solve(chain, &european)
		if chain.American = c.aYear < 100; chain.American {
			s.Solve(chain, &american)
		}
		for i, k := range chain.Strike {
			l.k = k
			want := integral(l, 1000)
			t.Logf("%s, strike %v: %.6f ± %.1e, integral %.6f", c.name, k, european.Price[i], european.Error[i], want)
			near(t, c.name, european.Price[i], want, 2e-5*l.s)
			if chain.American && (american.Price[i] < european.Price[i] || american.Price[i] > k || american.Status[i] != pde.Held) {
				t.Errorf("%s, strike %v: American %v ± %v, European %v", c.name, k, american.Price[i], american.Error[i], european.Price[i])
			}
		}
	}
}
