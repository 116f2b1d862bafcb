package american

import "testing"

// Without volatility the boundary parts the prices at which exercise is optimal
// from those at which it is not, and is the limit of those with a little of it.
func TestBoundaryWithoutVolatility(t *testing.T) {
	for _, o := range []line{
		{k: 100, t: 1, r: 0.05, q: 0.02, w: -1}, {k: 100, t: 1, r: 0.02, q: 0.05, w: -1}, {k: 100, t: 1, r: 0.05, w: -1}, {k: 100, t: 1, r: 0.05, q: -0.02, w: -1},
		{k: 100, t: 1, r: 0.05, q: 0.02, w: 1}, {k: 100, t: 1, r: 0.02, q: 0.05, w: 1}, {k: 100, t: 1, q: 0.05, w: 1}, {k: 100, t: 1, r: -0.02, q: 0.05, w: 1},
	} {
		o.s = o.k
		little := o
		little.v = 2e-3
		r := solveAll(Exact, o, little)
		b, limit := r.Boundary[0], r.Boundary[1]
		if !(b > 0.99*limit && b < 1.01*limit) {
			t.Errorf("%+v: boundary %v, with a volatility of 0.2 %% %v", o, b, limit)
		}
		past, before := o, o
		past.s, before.s = b*(1+0.01*o.w), b*(1-0.01*o.w)
		if r := solveAll(Exact, past, before); r.Status[0] != Exercised || r.Status[1] == Exercised || r.Boundary[0] != b || r.Boundary[1] != b {
			t.Errorf("%+v: boundary %v, statuses %v, boundaries %v", o, b, r.Status, r.Boundary)
		}
	}
}
