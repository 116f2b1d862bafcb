package model

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

func newGreeks(n int) *Greeks {
	g := new(Greeks)
	for _, s := range g.Slices() {
		*s = make([]float64, n)
	}
	return g
}

// args are the inputs of one contract.
type args struct{ s, k, t, v, r, q, w float64 }

// pricers are the models that rest on a differentiable formula: all sensitivities
// of each are compared with differences of its own price.
var pricers = []struct {
	name string
	fill func(*Greeks, args)
	on   string // the spot, or a futures price
}{
	{"BSM", func(g *Greeks, a args) {
		BSM(g, []float64{a.s}, []float64{a.k}, []float64{a.t}, []float64{a.v}, []float64{a.r}, []float64{a.q}, []float64{a.w})
	}, "spot"},
	{"Black76", func(g *Greeks, a args) {
		Black76(g, []float64{a.s}, []float64{a.k}, []float64{a.t}, []float64{a.v}, []float64{a.r}, []float64{a.w})
	}, "future"},
	{"Forward", func(g *Greeks, a args) {
		Forward(g, []float64{a.s}, []float64{a.k}, []float64{a.t}, []float64{a.r}, []float64{a.q})
	}, "spot"},
	{"ForwardOnFuture", func(g *Greeks, a args) {
		ForwardOnFuture(g, []float64{a.s}, []float64{a.k}, []float64{a.t}, []float64{a.r})
	}, "future"},
}

func TestSensitivitiesAreDerivatives(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	for _, p := range pricers {
		at := func(a args) *Greeks { g := newGreeks(1); p.fill(g, a); return g }
		for range 300 {
			a := args{s: 60 + 80*rng.Float64(), k: 100, t: 0.2 + 2*rng.Float64(), v: 0.15 + 0.5*rng.Float64(),
				r: 0.1*rng.Float64() - 0.02, q: 0.06*rng.Float64() - 0.01, w: float64(1 - 2*rng.IntN(2))}
			g := at(a)
			// fourth-order central differences of f along one input
			diff := func(f func(*Greeks) float64, in *float64, h float64) float64 {
				x := *in
				v := func(d float64) float64 { *in = x + d*h; y := f(at(a)); *in = x; return y }
				return (8*(v(1)-v(-1)) - (v(2) - v(-2))) / (12 * h)
			}
			price := func(g *Greeks) float64 { return g.Price[0] }
			delta := func(g *Greeks) float64 { return g.Delta[0] }
			vega := func(g *Greeks) float64 { return g.Vega[0] }
			for _, c := range []struct {
				what      string
				got, want float64
			}{
				{"delta", g.Delta[0], diff(price, &a.s, a.s*1e-3)},
				{"gamma", g.Gamma[0] * a.s, diff(delta, &a.s, a.s*1e-3) * a.s},
				{"vega", g.Vega[0], diff(price, &a.v, 1e-3)},
				{"theta", g.Theta[0], -diff(price, &a.t, 1e-3)},
				{"rho", g.Rho[0], diff(price, &a.r, 1e-3)},
				{"carry_rho", g.CarryRho[0], diff(price, &a.q, 1e-3)},
				{"vanna", g.Vanna[0], diff(delta, &a.v, 1e-3)},
				{"volga", g.Volga[0], diff(vega, &a.v, 1e-3)},
				{"charm", g.Charm[0], -diff(delta, &a.t, 1e-3)},
			} {
				if math.Abs(c.got-c.want) > 2e-6*max(1, math.Abs(c.want)) {
					t.Fatalf("%s %s of %+v = %v, by differences %v", p.name, c.what, a, c.got, c.want)
				}
			}
		}
	}
}

// Call minus put is the forward, for every model that has both.
func TestParity(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 14))
	for range 500 {
		a := args{s: 60 + 80*rng.Float64(), k: 100, t: 3 * rng.Float64(), v: rng.Float64(), r: 0.1 * rng.Float64(), q: 0.1 * rng.Float64(), w: 1}
		b := a
		b.w = -1
		for _, pair := range [][2]int{{0, 2}, {1, 3}} {
			call, put, fwd := newGreeks(1), newGreeks(1), newGreeks(1)
			pricers[pair[0]].fill(call, a)
			pricers[pair[0]].fill(put, b)
			pricers[pair[1]].fill(fwd, a)
			for i, s := range fwd.Slices() {
				if i == 10 {
					continue // the residual applies to options only
				}
				got, want := (*call.Slices()[i])[0]-(*put.Slices()[i])[0], (*s)[0]
				scale := max(1, math.Abs((*call.Slices()[i])[0]), math.Abs(want))
				if math.Abs(got-want) > 2e-12*scale {
					t.Fatalf("%s, result %d of %+v: call − put %v, forward %v", pricers[pair[0]].name, i, a, got, want)
				}
			}
		}
	}
}

func TestForwardPricesAgree(t *testing.T) {
	a := args{s: 103, k: 99, t: 0.7, r: 0.04, q: 0.013}
	for _, p := range pricers[2:] {
		g, price := newGreeks(1), make([]float64, 1)
		p.fill(g, a)
		if p.on == "spot" {
			ForwardPrice(price, []float64{a.s}, []float64{a.k}, []float64{a.t}, []float64{a.r}, []float64{a.q})
		} else {
			ForwardOnFuturePrice(price, []float64{a.s}, []float64{a.k}, []float64{a.t}, []float64{a.r})
		}
		if price[0] != g.Price[0] {
			t.Errorf("%s: price alone %v, with sensitivities %v", p.name, price[0], g.Price[0])
		}
	}
}

func TestPayoff(t *testing.T) {
	for _, c := range []struct{ s, k, w, price, delta float64 }{
		{10, 8, 1, 2, 1}, {8, 10, 1, 0, 0}, {8, 10, -1, 2, -1}, {10, 8, -1, 0, 0}, {8, 8, 1, 0, 0}, {8, 8, -1, 0, 0}, {7, 9, 0, -2, 1}, {-3, 1, -1, 4, -1},
	} {
		g := newGreeks(1)
		g.Vega[0] = 99 // left over
		Payoff(g, []float64{c.s}, []float64{c.k}, []float64{c.w})
		if g.Price[0] != c.price || g.Delta[0] != c.delta || g.Vega[0] != 0 || !math.IsNaN(g.Residual[0]) {
			t.Errorf("%+v: %s", c, fmt.Sprint(g))
		}
	}
}
