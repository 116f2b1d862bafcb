package model

import (
	"math"

	"nightbook/risk/vec"
)

// Smooth functions of numbers, each with its first two derivatives.

func expOf[N number[N]](x N) N {
	e := vec.Exp1(x.value())
	return x.of1(e, e, e)
}

// logOf is ln(x/k) for a constant k.
func logOf[N number[N]](x N, k float64) N {
	i := 1 / x.value()
	return x.of1(vec.LogRatio1(x.value(), k), i, float64(-i*i))
}

// logRatioOf is ln(x/y).
func logRatioOf[N number[N]](x, y N) N {
	i, j := 1/x.value(), 1/y.value()
	return x.of2(y, vec.LogRatio1(x.value(), y.value()), i, -j, float64(-i*i), 0, float64(j*j))
}

// log1pOf is ln(1 + x) for x ≥ 0.
func log1pOf[N number[N]](x N) N {
	d := 1 / (1 + x.value())
	return x.of1(log1p(x.value()), d, float64(-d*d))
}

// log1p corrects the logarithm of the rounded w = 1 + x by x/(w−1), which
// changes as slowly as ln(w)/(w−1) does.
// Source: W. Kahan, in Hewlett-Packard Journal, November 1979.
func log1p(x float64) float64 {
	w := 1 + x
	if w == 1 {
		return x
	}
	return float64(vec.Log1(w) * (x / (w - 1)))
}

func sqrtOf[N number[N]](x N) N {
	r := math.Sqrt(x.value())
	d := 0.5 / r
	return x.of1(r, d, float64(-0.5*(d/x.value())))
}

// invOf is 1/x.
func invOf[N number[N]](x N) N {
	i := 1 / x.value()
	d := float64(-i * i)
	return x.of1(i, d, float64(float64(-2*d)*i))
}

// cdfOf is Φ(x).
func cdfOf[N number[N]](x N) N {
	p := float64(vec.NormPDF1(x.value()))
	return x.of1(vec.NormCDF1(x.value()), p, float64(-x.value()*p))
}

const invSqrt2Pi = 0.39894228040143267793994605993438186847585863116493 // 1/√(2π)

// tailFrom is where Φ(x) goes over to e^(−x²/2) times the Mills ratio. Left of
// it the ratio's continued fraction is short; right of it the direct form loses
// at most x² ulp in a second derivative.
const tailFrom = -5

// leg is e^q·Φ(x), given also n = q − x²/2.
//
// Far out q is large where Φ(x) is tiny; there n, which the caller knows without
// the cancellation, gives the product as e^n·M(−x), M the Mills ratio.
// Accuracy: that of e^q on the right, of e^n on the left.
func leg[N number[N]](q, n, x N) N {
	xv := x.value()
	if xv > tailFrom {
		e := vec.Exp1(q.value())
		f, p := float64(e*vec.NormCDF1(xv)), float64(e*vec.NormPDF1(xv))
		return q.of2(x, f, f, p, f, p, float64(-xv*p))
	}
	e := vec.Exp1(n.value())
	m0, m1, m2 := mills(-xv)
	f, fx := float64(e*m0), float64(-e*m1)
	return n.of2(x, f, f, fx, f, fx, float64(e*m2))
}

// mills returns the Mills ratio M and its first two derivatives, for y ≥ −tailFrom.
//
// Computes M(y) = Φ(−y)·e^(y²/2) as i₀, M′ = −i₁ and M″ = 2·i₂ from the scaled
// repeated integrals of the tail, iₙ = ∫(t−y)ⁿ/n!·e^(y²/2)φ(t)dt over t > y.
// They obey (n+1)·iₙ₊₁ = iₙ₋₁ − y·iₙ, so the quotients ρₙ = iₙ/iₙ₋₁ are the
// continued fraction ρₙ = 1/(y + (n+1)·ρₙ₊₁), all of whose terms are positive;
// i₋₁ = 1/√(2π). It begins with the fixed point of its last step.
// Accuracy: 4 ulp. Source: Abramowitz & Stegun 1964, 7.2 and 26.2.14.
func mills(y float64) (m, d, dd float64) {
	depth := 24.0
	if y > 8 {
		depth = 14
	}
	rho := 2 / (y + math.Sqrt(math.FMA(y, y, 4*(depth+1))))
	for n := depth - 1; n > 2; n-- {
		rho = 1 / math.FMA(n+1, rho, y)
	}
	rho2 := 1 / math.FMA(3, rho, y)
	rho1 := 1 / math.FMA(2, rho2, y)
	m = invSqrt2Pi / (y + rho1)
	d = float64(-m * rho1)
	return m, d, float64(float64(-2*d) * rho2)
}
