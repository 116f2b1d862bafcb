package pde_test

import (
	"math"
	"testing"

	"nightbook/risk/model/pde"
)

// The error of one mesh falls fourfold with every doubling, in all that is read
// from it, for European and American options and across an ex-date; and the
// extrapolated value is better than the finer of the two it comes from.
func TestOrderOfConvergence(t *testing.T) {
	european := line{s: 100, k: 105, t: .8, r: .05, q: .02, v: .25, w: -1}
	american := line{s: 100, k: 100, t: 1, r: .05, q: .05, v: .25, w: -1, american: true}
	exDate := line{s: 100, k: 100, t: 1, r: .06, v: .3, w: 1, divs: []pde.Dividend{{Time: .5, Amount: 7}}}
	exCall := exDate
	exCall.american = true
	const finest = 5
	for _, c := range []struct {
		name string
		l    line
		want func([][3]float64) [3]float64
		low  [3]float64 // orders of price, delta and gamma
	}{
		{"European", european, func([][3]float64) [3]float64 {
			g := closed(european)
			return [3]float64{g.price, g.delta, g.gamma}
		}, [3]float64{1.9, 1.9, 1.8}},
		{"American put", american, extrapolated, [3]float64{1.9, 1.9, 1.8}},
		{"European call across an ex-date", exDate, extrapolated, [3]float64{1.9, 1.9, 1.8}},
		{"American call across an ex-date", exCall, extrapolated, [3]float64{1.8, 1.8, 1.8}},
	} {
		got := pde.Levels(c.l.chain(), finest)
		want := c.want(got)
		for i, what := range [3]string{"price", "delta", "gamma"} {
			e := func(level int) float64 { return math.Abs(got[level][i] - want[i]) }
			order := math.Log2(e(1)/e(3)) / 2 // past the coarsest level, where terms cancel
			better := e(2) / math.Abs(got[2][i]+(got[2][i]-got[1][i])/3-want[i])
			t.Logf("%-32s %s: order %.2f; errors %.1e %.1e %.1e %.1e %.1e; extrapolation gains %.0f", c.name, what, order, e(0), e(1), e(2), e(3), e(4), better)
			if !(order > c.low[i]) {
				t.Errorf("%s: %s converges with order %.2f", c.name, what, order)
			}
			if i == 0 && !(better > 4) {
				t.Errorf("%s: extrapolation gains %.2f", c.name, better)
			}
		}
	}
}

// extrapolated is from the two finest levels.
func extrapolated(v [][3]float64) (x [3]float64) {
	a, b := v[len(v)-2], v[len(v)-1]
	for i := range x {
		x[i] = b[i] + (b[i]-a[i])/3
	}
	return x
}
