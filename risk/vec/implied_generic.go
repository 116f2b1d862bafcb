package vec

import "math"

// The scalar form of the inversion: the specification of every other form.
//
// With x = −|ln(F/K)| and prices in units of √(FK), the out-of-the-money option is
// worth d·e^(−(h²+t²)/2) with h = x/s, t = s/2, d = M(h+t) − M(h−t), M(z) =
// Φ(z)·e^(z²/2): a function of s = σ√T alone that grows from 0 to e^(x/2). Its distance
// from that bound is the same with d = M(−h−t) + M(h−t). Neither underflows or
// cancels. The logarithm of either, whose derivatives are at hand, is solved for by
// steps of the fourth order, in a bracket. Two evaluations are the rule; of three
// million quotes of all kinds, none took more than four.

const (
	impliedSteps = 64    // evaluations, were a quote ever to take so many
	closeEnough  = 1e-5  // relative size of a step that leaves nothing to be done
	nearLimit    = 20    // largest (h²+t²)/2 at which the last step is taken on the price
	taylorFrom   = 0.25  // largest t at which the difference of tails is a series
	taylorWidth  = -0.5  // smallest x likewise
	atStrike     = 1e-9  // relative price at the strike up to which it is proportional to s
	startFloor   = 1e-6  // smallest |x| for the start, in units of s at the strike
	startMost    = 1e300 // keeps a quotient finite

	tailLeast, tailMost = 0x1p-1000, 0x1p+1000 // keep d where its logarithm is that of a normal number

	third   = 1. / 3
	sixth   = 1. / 6
	sqrt2Pi = 0x1.40d931ff62706p+1 // √(2π)
	ln2     = ln2Hi + ln2Lo
)

// impliedTotal returns s for p and side of impliedSide.
func impliedTotal(f, k, p, side float64) float64 {
	if f == k && p < float64(f*atStrike) {
		return float64(p / f * sqrt2Pi)
	}
	x := 0 - math.Abs(LogRatio1(f, k))
	root := float64(math.Sqrt(f) * math.Sqrt(k))
	target := LogRatio1(p, root)
	var s float64
	if side > 0 {
		s = startLower(x, p/root)
	} else {
		s = startUpper(x, target)
	}
	lo, hi := 0.0, math.Inf(1)
	for step := 1; ; step++ {
		h, t := x/s, float64(s*0.5)
		hh, tt := float64(h*h), float64(t*t)
		d := impliedTails(x, h, t, side)
		a := float64((hh + tt) * 0.5)
		g := Log1(d) - a - target
		inverse := float64(d*float64(side*sqrt2Pi)) / s // of the elasticity s·g′
		if float64(side*g) < 0 {
			lo = s
		} else {
			hi = s
		}
		next := householder(s, g, inverse, hh, tt)
		if !(next >= lo && next <= hi) {
			next = min(float64(s*2), float64((lo+hi)*0.5))
		}
		if !(math.Abs(next-s) > float64(s*closeEnough)) || step == impliedSteps {
			return polish(s, next, a, float64(d*root), p, inverse, hh, tt)
		}
		s = next
	}
}

// startLower returns a first s for the price b in units of √(FK): the s for which
// s·(φ(h) + h·Φ(h)) is b, as it is in the limit of small s, by a fitted function. It is
// within 7 % of the answer.
func startLower(x, b float64) float64 {
	atm := float64(b * sqrt2Pi) // s at the strike
	width := 0 - x
	if least := float64(atm * startFloor); width < least {
		width = least
	}
	v := width / atm
	if v > startMost {
		v = startMost
	}
	l := Log1(1 + v)
	w := math.Sqrt(l)
	p := math.FMA(w, math.FMA(w, math.FMA(w, startP3, startP2), startP1), startP0)
	q := math.FMA(w, math.FMA(w, math.FMA(w, math.FMA(w, startQ4, startQ3), startQ2), startQ1), 1)
	return float64(width*q) / float64(l*p) // l·p/q is −h
}

// The quantile of startUpper.
const (
	quantileP0, quantileP1, quantileP2 = 2.515517, 0.802853, 0.010328
	quantileQ1, quantileQ2, quantileQ3 = 1.432788, 0.189269, 0.001308
	quantileMost                       = -1e-3 // keeps its argument in range
	startLeast                         = 1e-3
)

// startUpper returns a first s for the logarithm of the distance, taking the distance
// for 2·Φ(−t) of the bound, which it is at the strike.
// Source of the quantile, good to 4.5e-4: M. Abramowitz & I. A. Stegun, Handbook of
// Mathematical Functions, 26.2.23, from memory; only a start, so that its error
// cannot reach a result.
func startUpper(x, target float64) float64 {
	z := math.FMA(x, -0.5, target) - ln2
	if z > quantileMost {
		z = quantileMost
	}
	u := math.Sqrt(float64(z * -2))
	p := math.FMA(u, math.FMA(u, quantileP2, quantileP1), quantileP0)
	q := math.FMA(u, math.FMA(u, math.FMA(u, quantileQ3, quantileQ2), quantileQ1), 1)
	s := float64((u - p/q) * 2)
	if least := math.Sqrt(float64(x * -2)); s < least { // at which h = −t
		s = least
	}
	if s < startLeast {
		s = startLeast
	}
	return s
}

// impliedTails returns d. Where both x and t make it a small difference of near
// numbers it is the odd part of a Taylor series about h, of M⁽ⁿ⁾/n! by
// M⁽ⁿ⁺¹⁾ = h·M⁽ⁿ⁾ + n·M⁽ⁿ⁻¹⁾.
func impliedTails(x, h, t, side float64) float64 {
	var d float64
	if side > 0 && t <= taylorFrom && x >= taylorWidth {
		m0 := mills(min(0-h, millsEnd))
		m1 := math.FMA(h, m0, invSqrt2Pi)
		sum, power, tt := m1, 1.0, float64(t*t)
		for n := 0; n < len(reciprocals); n += 2 { // m0, m1: derivatives n and n+1
			m0 = float64(math.FMA(h, m1, m0) * reciprocals[n])
			m1 = float64(math.FMA(h, m0, m1) * reciprocals[n+1])
			power = float64(power * tt)
			sum = math.FMA(power, m1, sum)
		}
		d = float64(float64(t*2) * sum)
	} else {
		d = scaledTail(float64(side*(h+t))) - float64(side*scaledTail(h-t))
	}
	if !(d > tailLeast) {
		return tailLeast
	}
	if d > tailMost {
		return tailMost
	}
	return d
}

var reciprocals = [16]float64{1. / 2, 1. / 3, 1. / 4, 1. / 5, 1. / 6, 1. / 7, 1. / 8, 1. / 9, 1. / 10, 1. / 11, 1. / 12, 1. / 13, 1. / 14, 1. / 15, 1. / 16, 1. / 17}

// scaledTail returns M(z) = Φ(z)·e^(z²/2).
func scaledTail(z float64) float64 {
	m := mills(min(math.Abs(z), millsEnd))
	if z > 0 {
		return Exp1(float64(float64(z*z)*0.5)) - m
	}
	return m
}

// householder takes a step from s, g being what is to become 0.
// Source: A. S. Householder, The Numerical Treatment of a Single Nonlinear Equation
// (1970), for the method, of which this is the third order.
func householder(s, g, inverse, hh, tt float64) float64 {
	e := 1 / inverse                              // s·g′
	u := hh - tt - e                              // s·g″/g′
	v := math.FMA(u, u-e, math.FMA(hh, -3, 0-tt)) // s²·g‴/g′
	n := float64((0 - g) * inverse)               // Newton's step, in units of s
	up := math.FMA(float64(n*0.5), u, 1)
	down := math.FMA(n, math.FMA(float64(n*sixth), v, u), 1)
	return math.FMA(s, float64(n*up)/down, s)
}

// polish repeats the last step where the logarithm has rounded more of the answer
// away than the price itself has: on ln(value·e^(−a)/p) by its series.
func polish(s, next, a, value, p, inverse, hh, tt float64) float64 {
	if a > nearLimit {
		return next
	}
	r := float64(value*Exp1(0-a))/p - 1
	g := float64(r * math.FMA(0-r, math.FMA(0-r, math.FMA(r, -0.25, third), 0.5), 1))
	return householder(s, g, inverse, hh, tt)
}
