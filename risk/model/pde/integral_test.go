package pde_test

import (
	"math"
	"slices"
	"testing"

	"nightbook/risk/model/pde"
)

// integral values a line under piecewise dividends, q = 0 and r ≥ 0, by integrating
// the lognormal density from ex-date to ex-date, on nodes even in ln S. An American
// call is exercised on no other days than the eves of ex-dates, so it is exact for
// one, but for its h²; an American put is taken for European.
func integral(l line, nodes int) float64 {
	divs := slices.Clone(l.divs)
	slices.SortFunc(divs, func(a, b pde.Dividend) int { return int(math.Copysign(1, b.Time-a.Time)) })
	sd := l.v * math.Sqrt(l.t)
	h := 9 * sd / float64(nodes)
	now := nodes + int(8/h) // little may be left of the price after dividends
	lowest := math.Log(l.s) - float64(now)*h
	nodes += now
	spot := func(i int) float64 { return math.Exp(lowest + float64(i)*h) }
	v, u := make([]float64, nodes), make([]float64, nodes)
	for i := range v {
		v[i] = max(0, l.w*(spot(i)-l.k))
	}
	back := func(dt float64) { // E[V(S_t+dt)], discounted
		s, m := l.v*math.Sqrt(dt), (l.r-.5*l.v*l.v)*dt
		reach := int(8 * s / h)
		weight := make([]float64, 2*reach+1)
		for k := range weight {
			z := (float64(k-reach)*h - m) / s
			weight[k] = math.Exp(-.5*z*z-l.r*dt) * h / s / math.Sqrt(2*math.Pi)
		}
		for i := range u {
			x := 0.0
			for k, w := range weight {
				x += w * v[min(max(i+k-reach, 0), nodes-1)]
			}
			u[i] = x
		}
		v, u = u, v
	}
	at := l.t
	for _, d := range divs {
		if dt := at - d.Time; dt > 0 {
			back(dt)
			at = d.Time
		}
		for i := range u {
			x := v[0]
			if s := spot(i) - d.Amount; s > 0 {
				if y := (math.Log(s) - lowest) / h; y > 0 {
					k := min(max(int(y)-1, 0), nodes-4)
					y -= float64(k)
					x = -v[k]*(y-1)*(y-2)*(y-3)/6 + v[k+1]*y*(y-2)*(y-3)/2 - v[k+2]*y*(y-1)*(y-3)/2 + v[k+3]*y*(y-1)*(y-2)/6
				}
			}
			u[i] = x
			if l.american && l.w > 0 {
				u[i] = max(x, spot(i)-l.k)
			}
		}
		v, u = u, v
	}
	back(at)
	return v[now]
}

// Many dividends, one day, volatilities of 1 % and 300 %: strips against integrals.
func TestIntegrals(t *testing.T) {
	quarterly := func(n int, amount float64) (d []pde.Dividend) {
		for i := range n {
			d = append(d, pde.Dividend{Time: .1 + .25*float64(i), Amount: amount})
		}
		return d
	}
	const day = 1. / 365
	for _, c := range []struct {
		name    string
		l       line
		strikes []float64
		within  float64 // as a share of the spot
	}{
		{"40 dividends", line{s: 100, t: 10, r: .04, v: .2, w: 1, divs: quarterly(40, .6)}, []float64{60, 90, 110, 150}, 2e-5},
		{"40 dividends, American", line{s: 100, t: 10, r: .04, v: .2, w: 1, american: true, divs: quarterly(40, .6)}, []float64{60, 90, 110, 150}, 2e-5},
		{"40 dividends, put", line{s: 100, t: 10, r: .04, v: .2, w: -1, divs: quarterly(40, .6)}, []float64{60, 90, 110, 150}, 2e-5},
		{"a day", line{s: 100, t: day, r: .05, v: .3, w: 1, divs: []pde.Dividend{{Time: .4 * day, Amount: 2}}}, []float64{95, 98, 100, 102}, 1e-5},
		{"a day, American", line{s: 100, t: day, r: .05, v: .3, w: 1, american: true, divs: []pde.Dividend{{Time: .4 * day, Amount: 2}}}, []float64{95, 98, 100, 102}, 1e-5},
		{"1 %", line{s: 100, t: 1, r: .03, v: .01, w: 1, divs: quarterly(4, .5)}, []float64{98, 100, 101, 104}, 2e-5},
		{"1 %, American", line{s: 100, t: 1, r: .03, v: .01, w: 1, american: true, divs: quarterly(4, .5)}, []float64{98, 100, 101, 104}, 2e-5},
		{"300 %, put", line{s: 100, t: 1, r: .03, v: 3, w: -1, divs: quarterly(4, 5)}, []float64{50, 100, 200, 1000}, 2e-5},
		{"300 %, small", line{s: 100, t: .1, r: .03, v: 3, w: -1, divs: []pde.Dividend{{Time: .05, Amount: 60}}}, []float64{50, 100, 200}, 2e-5},
	} {
		chain := c.l.chain()
		chain.Strike, chain.Vol = c.strikes, slices.Repeat([]float64{c.l.v}, len(c.strikes))
		var s pde.Solver
		var r pde.Results
		s.Solve(chain, &r)
		for i, k := range c.strikes {
			c.l.k = k
			want := integral(c.l, 600)
			t.Logf("%s, strike %v: %.6f ± %.1e, integral %.6f", c.name, k, r.Price[i], r.Error[i], want)
			near(t, c.name, r.Price[i], want, c.within*c.l.s)
			g := row(&r, i)
			for n, x := range outputs(g, c.l) {
				if math.IsNaN(x) || math.IsInf(x, 0) {
					t.Errorf("%s, strike %v: %s is %v", c.name, k, outputNames[n], x)
				}
			}
		}
	}
}
