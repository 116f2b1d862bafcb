package model

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
)

// conditioned is a call on an arithmetic average over the whole of its life,
// valued by conditioning on the geometric average: given that, the arithmetic one
// is replaced by its mean, which can only lose value.
// Source: M. Curran, Valuing Asian and portfolio options by conditioning on the
// geometric mean price, Management Science 40 (1994); L. C. G. Rogers & Z. Shi,
// The value of an Asian option, J. Applied Probability 32 (1995).
type conditioned struct {
	s, k, t, vol, rate, carry float64
	u, weight, load           []float64 // times, their weights, covariances with the geometric average
}

func newConditioned(s, k, t, vol, rate, carry float64) *conditioned {
	const nodes = 48
	c := &conditioned{s, k, t, vol, rate, carry, make([]float64, nodes), make([]float64, nodes), make([]float64, nodes)}
	quad.Legendre{}.FixedLocations(c.u, c.weight, 0, t)
	for i, u := range c.u {
		c.weight[i] /= t
		// of W(u) with ∫W/t over its standard deviation √(t/3)
		c.load[i] = (u - u*u/(2*t)) / math.Sqrt(t/3)
	}
	return c
}

// price is the mean of the price at time i, given z standard deviations of the
// logarithm of the geometric average.
func (c *conditioned) price(i int, z float64) float64 {
	l := c.vol * c.load[i]
	return c.s * math.Exp(c.carry*c.u[i]+l*z-l*l/2)
}

func (c *conditioned) mean(z float64) float64 {
	sum := 0.0
	for i, w := range c.weight {
		sum += w * c.price(i, z)
	}
	return sum
}

// lower is the value so conditioned.
func (c *conditioned) lower() float64 {
	lo, hi := -40.0, 40.0
	for range 100 { // the mean rises with z
		if z := (lo + hi) / 2; c.mean(z) < c.k {
			lo = z
		} else {
			hi = z
		}
	}
	tail := func(x float64) float64 { return 0.5 * math.Erfc(x/math.Sqrt2) }
	sum := -c.k * tail(lo)
	for i, w := range c.weight {
		sum += w * c.s * math.Exp(c.carry*c.u[i]) * tail(lo-c.vol*c.load[i])
	}
	return math.Exp(-c.rate*c.t) * sum
}

// gap bounds what conditioning loses: half the standard deviation of the
// arithmetic average given the geometric one, where that is below the strike.
// Above, the arithmetic one is, too, and nothing is lost.
func (c *conditioned) gap() float64 {
	mid := (c.carry - c.vol*c.vol/2) * c.t / 2 // of the logarithm of the geometric average
	edge := (math.Log(c.k/c.s) - mid) / (c.vol * math.Sqrt(c.t/3))
	deviation := func(z float64) float64 {
		variance := 0.0
		for i, w := range c.weight {
			for j, x := range c.weight {
				rest := math.Min(c.u[i], c.u[j]) - c.load[i]*c.load[j]
				variance += w * x * c.price(i, z) * c.price(j, z) * math.Expm1(c.vol*c.vol*rest)
			}
		}
		return math.Sqrt(max(variance, 0)) * math.Exp(-z*z/2) * invSqrt2Pi
	}
	return 0.5 * math.Exp(-c.rate*c.t) * quad.Fixed(deviation, min(edge, 0)-9, edge, 48, nil, 0)
}

// The bound in the table of Rogers & Shi 1995, K 90 to 110, T 1: from memory, reproduced.
func TestPublishedBounds(t *testing.T) {
	for _, c := range []struct{ vol, rate, strike, want float64 }{
		{0.05, 0.05, 95, 7.178}, {0.05, 0.05, 100, 2.716}, {0.05, 0.05, 105, 0.337},
		{0.1, 0.05, 90, 11.951}, {0.1, 0.05, 100, 3.641}, {0.1, 0.05, 110, 0.331},
		{0.3, 0.05, 90, 13.952}, {0.3, 0.05, 100, 7.944}, {0.3, 0.05, 110, 4.070},
	} {
		if got := newConditioned(100, c.strike, 1, c.vol, c.rate, c.rate).lower(); !(math.Abs(got-c.want) <= 0.5e-3) {
			t.Errorf("%+v: %.5f", c, got)
		}
	}
}

// What the assumption of a lognormal average costs, for strikes within a standard
// deviation: too much in the money, too little far out of it. The bound it is
// measured against is itself a hundredth of that below the exact value, where
// exact values are known.
func TestArithmeticAsianError(t *testing.T) {
	for _, c := range []struct{ spread, limit float64 }{
		{0.05, 2.1e-5}, {0.1, 8.5e-5}, {0.2, 3.6e-4}, {0.3, 8.5e-4}, {0.5, 2.7e-3}, {0.8, 8.5e-3}, {1.2, 2.3e-2},
	} {
		worst := 0.0
		for _, m := range []float64{-1, -0.5, 0, 0.5, 1} {
			k := 100 * math.Exp(m*c.spread/math.Sqrt(3))
			bound := newConditioned(100, k, 1, c.spread, 0.05, 0.03).lower()
			p := one(0)
			ArithmeticAsianPrice(p, one(100), one(k), one(0), one(0), one(1), one(c.spread), one(0.05), one(0.02), one(1))
			worst = max(worst, math.Abs(p[0]-bound)/100)
		}
		if !(worst <= c.limit) || worst < c.limit/2 {
			t.Errorf("spread %v: off by %.2g of the spot, limit %v", c.spread, worst, c.limit)
		}
	}
}

// Exact values for S 1.9 to 2.1, K 2, from V. Linetsky, Spectral expansions for
// Asian (average price) options, Operations Research 52 (2004): from memory, and
// within the bounds.
func TestAsianExactValues(t *testing.T) {
	for _, c := range []struct{ rate, vol, t, spot, want float64 }{
		{0.02, 0.1, 1, 2, 0.0559860415}, {0.18, 0.3, 1, 2, 0.2183875466}, {0.0125, 0.25, 2, 2, 0.1722687410},
		{0.05, 0.5, 1, 1.9, 0.1931737903}, {0.05, 0.5, 1, 2, 0.2464156905}, {0.05, 0.5, 1, 2.1, 0.3062203648}, {0.05, 0.5, 2, 2, 0.3500952190},
	} {
		bound := newConditioned(c.spot, 2, c.t, c.vol, c.rate, c.rate)
		lower := bound.lower()
		if !(lower <= c.want && c.want <= lower+bound.gap()) || !(c.want-lower <= 1e-3*c.want) {
			t.Errorf("%+v: between %.7f and %.7f more", c, lower, bound.gap())
		}
		p := one(0)
		ArithmeticAsianPrice(p, one(c.spot), one(2), one(0), one(0), one(c.t), one(c.vol), one(c.rate), one(0), one(1))
		if e := p[0]/c.want - 1; !(e > 0 && e <= 0.027) {
			t.Errorf("%+v: %.7f, off by %.2g", c, p[0], e)
		}
	}
}
