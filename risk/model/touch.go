package model

import (
	"math"

	"nightbook/risk/vec"
)

// firstTouch is the value of one unit paid when a Brownian motion first touches a
// level, if it does so before time T.
//
// Computes E[e^(−rτ); τ < T] from distances in standard deviations at T: a > 0 to
// the level, and m drifted away from it. Given discount = −rT, the tame
// exponent n = −rT − ½(a + m)², and g = √c, c = m² + 2rT, it is
//
//	e^(−a(m+g))·Φ(g − a) + e^(−a(m−g))·Φ(−g − a).
//
// An exponent in which m and g cancel is written as ±2arT/(|m| + g), and far out
// both terms are e^n times a Mills ratio; see leg.
//
// With a rate below 0, g can be 0 or imaginary, though the value is smooth in c
// and real. For c < 1 touchSeries takes over, which knows c alone.
// Source: E. Reiner & M. Rubinstein, Breaking down the barriers, Risk 4 (1991),
// their formula F; the series is derived below.
func firstTouch[N number[N]](a, m, discount, n N) N {
	c := m.times(m).minus(discount.scaled(2))
	if c.value() < 1 {
		f, fa, fc, faa, fac, fcc := touchSeries(a.value(), c.value())
		return expOf(n.plus(c.scaled(0.5))).times(a.of2(c, f, fa, fc, faa, fac, fcc))
	}
	g := sqrtOf(c)
	speed, toward := m, m.value() < 0
	if toward {
		speed = m.scaled(-1)
	}
	speed = speed.plus(g)
	near := a.times(discount).times(invOf(speed)).scaled(-2)
	far := a.times(speed)
	first, second := far.scaled(-1), near
	if toward {
		first, second = near.scaled(-1), far
	}
	return leg(first, n, g.minus(a)).plus(leg(second, n, g.plus(a).scaled(-1)))
}

// touchSeries returns f(a, c) = e^(a²/2)·B(a, c) and its partial derivatives, for
// a > 0 and −200 ≤ c ≤ 1, where
//
//	B(a, c) = ∫₀¹ a/√(2π)·u^(−3/2)·e^(−(a²/u + c·u)/2) du
//
// is the value of firstTouch for m = 0 and 2rT = c.
//
// With x = a²/2 and εₖ = eˣ·E_(k+½)(x), E the generalised exponential integral,
// expanding e^(−cu/2) gives f = a/√(2π)·Σ tₖ·εₖ, tₖ = (−c/2)ᵏ/k!. For c < 0, the
// case the series is there for, no two terms cancel. The derivatives are of the
// same kind: with q = Σ tₖ·εₖ₊₁/√(2π) and n = e^(−c/2)/√(2π),
//
//	e^(a²/2)·∂B/∂a = −c·q − 2n    ∂f/∂c   = −½a·q
//	e^(a²/2)·∂²B/∂a² = c·f + 2a·n    ∂²f/∂c² = ¼a·Σ tₖ·εₖ₊₂/√(2π)
//
// Accuracy: 1e-13 relative. Source: the first passage density of Brownian motion;
// Abramowitz & Stegun 1964, 5.1.14 and 5.1.22 for E.
func touchSeries(a, c float64) (f, fa, fc, faa, fac, fcc float64) {
	x := float64(float64(0.5*a) * a)
	var e [maxTouchTerms + 2]float64
	y := -0.5 * c
	terms := seriesLength(math.Abs(y))
	e0 := exponentialIntegrals(e[:terms+2], a, x)

	s0, s1, s2, t := 0.0, 0.0, 0.0, 1.0
	for k := 0; k < terms; k++ {
		if k > 0 {
			t = float64(t * (y / float64(k)))
			s0 = math.FMA(t, e[k], s0)
		}
		s1 = math.FMA(t, e[k+1], s1)
		s2 = math.FMA(t, e[k+2], s2)
	}
	f = float64(invSqrt2Pi * math.FMA(a, s0, e0))
	q := float64(invSqrt2Pi * s1)
	n := float64(invSqrt2Pi * vec.Exp1(y))
	ba := math.FMA(-c, q, -float64(2*n))
	fa = math.FMA(a, f, ba)
	fc = float64(float64(-0.5*a) * q)
	fcc = float64(float64(float64(0.25*a)*invSqrt2Pi) * s2)
	baa := math.FMA(c, f, float64(float64(2*a)*n))
	faa = math.FMA(a, fa+ba, f+baa)
	fac = math.FMA(a, fc, 0.5*math.FMA(a, f, -q))
	return f, fa, fc, faa, fac, fcc
}

// maxTouchTerms is above what seriesLength returns for y = 100.
const maxTouchTerms = 256

// seriesLength is how many terms of Σ yᵏ/k! it takes until the next is lost in
// the sum of those before.
func seriesLength(y float64) int {
	k, t, sum := 1, 1.0, 1.0
	for ; t > 0x1p-60*sum && k < maxTouchTerms; k++ {
		t = float64(t * (y / float64(k)))
		sum += t
	}
	return k
}

// exponentialIntegrals sets e[k] = eˣ·E_(k+½)(x) for k ≥ 1, and returns a·e[0].
//
// Neighbours obey (k−½)·εₖ = 1 − x·εₖ₋₁, which loses digits upwards while k < x
// and downwards while k > x. So for small x it starts from ε₀ = 2√(2π)·M(a)/a, M
// the Mills ratio, and otherwise in the middle, from the continued fraction
//
//	ε = 1/(x+p − 1·p/(x+p+2 − 2(p+1)/(x+p+4 − …))),  p = k+½.
func exponentialIntegrals(e []float64, a, x float64) (e0 float64) {
	last := len(e) - 1
	start := 1
	if x < 6 {
		e0 = float64(float64(2/invSqrt2Pi) * float64(vec.NormCDF1(-a)*vec.Exp1(x)))
		e[1] = 2 * math.FMA(-0.5*a, e0, 1)
	} else {
		start = int(min(x, float64(last)))
		p := float64(start) + 0.5
		f := x + p + 48
		for j := 24.0; j > 0; j-- {
			f = x + p + float64(2*(j-1)) - float64(j*(p+j-1))/f
		}
		e[start] = 1 / f
		for k := start; k > 0; k-- {
			e[k-1] = math.FMA(0.5-float64(k), e[k], 1) / x
		}
		e0 = float64(a * e[0])
	}
	for k := start + 1; k <= last; k++ {
		e[k] = math.FMA(-x, e[k-1], 1) / (float64(k) - 0.5)
	}
	return e0
}
