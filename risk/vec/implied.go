package vec

import "math"

// Implied says what became of a price that was to be inverted.
type Implied uint8

// The outcomes of ImpliedVol.
const (
	ImpliedOK    Implied = iota
	ImpliedBelow         // at or below the value without any volatility
	ImpliedAbove         // at or above the value at any volatility
	ImpliedNaN           // an input that makes no sense
)

// ImpliedVol inverts the Black formula: it finds the volatilities at which
// European options have given undiscounted prices.
//
// Computes σ with w(F·Φ(w·d₁) − K·Φ(w·d₂)) = price, d₁,₂ = ln(F/K)/(σ√T) ± ½σ√T.
// Shapes: all slices of one length. Units: forward, strike and price alike, not
// discounted; time in years; sign +1 for a call, −1 for a put; vol per √year.
// Special cases: a price at or below max(w(F−K), 0) is ImpliedBelow; a price at
// or above F (call) or K (put) is ImpliedAbove; NaN, infinite or non-positive
// forward, strike or time, a negative price or another sign is ImpliedNaN. In
// all three vol is NaN.
// Accuracy: 12ε + 2ε·price/(σ·vega) relative, ε = 2⁻⁵³: the second term is what
// rounding the price alone makes of the answer. For σ√T from 1e-4 to 6 and prices
// down to 1e-300; see implied_reference_test.go.
// Source: the normalised form and the split at the inflection follow P. Jäckel,
// Let's be rational, Wilmott (2015); Newton's method on the logarithm of the
// price from a proven lower bound J. Choi, J. Huh & N. Su, Tighter 'uniform
// bounds for Black–Scholes implied volatility' (2023). See impliedTotal.
func ImpliedVol(vol []float64, outcome []Implied, forward, strike, time, price, sign []float64) {
	n := len(vol)
	if len(outcome) != n || len(forward) != n || len(strike) != n || len(time) != n || len(price) != n || len(sign) != n {
		panic(lengthMismatch)
	}
	for i := range vol {
		s, out := impliedTotal(forward[i], strike[i], price[i], sign[i])
		if t := time[i]; !(t > 0 && finite(t)) {
			s, out = nan, ImpliedNaN
		} else {
			s /= math.Sqrt(t)
		}
		vol[i], outcome[i] = s, out
	}
}

// impliedTotal returns s = σ√T.
//
// With x = −|ln(F/K)| and the price of the out-of-the-money side over √(FK),
// which is b(x, s) = e^(x/2)·Φ(h+t) − e^(−x/2)·Φ(h−t), h = x/s, t = s/2, it is a
// function of s alone that grows from 0 to e^(x/2). Both b and its distance from
// that bound are e^(−(h²+t²)/2) times a combination of scaled tails, so that
// neither underflows nor cancels, and neither needs an exponential:
// below the middle the logarithm of b is solved for, above it that of the distance.
func impliedTotal(f, k, price, w float64) (float64, Implied) {
	if !(f > 0 && k > 0 && price >= 0 && finite(f) && finite(k) && finite(price) && (w == 1 || w == -1)) {
		return nan, ImpliedNaN
	}
	bound := min(f, k) // of the out-of-the-money side
	out := price - max(w*(f-k), 0)
	switch {
	case out <= 0:
		return nan, ImpliedBelow
	case out >= bound:
		return nan, ImpliedAbove
	}
	x := -math.Abs(LogRatio1(f, k))
	root := float64(math.Sqrt(f) * math.Sqrt(k))
	if out > bound/2 {
		return solveUpper(x, bound-out, root), ImpliedOK
	}
	return solveLower(x, out, root), ImpliedOK
}

const (
	impliedSteps = 64                   // far more than are ever taken; see the test
	closeEnough  = 0x1p-51              // relative size of the last step
	taylorFrom   = 0.25                 // largest t at which the difference of tails is a series
	taylorWidth  = 0.5                  // largest |x| likewise
	halfLog2Pi   = 0x1.d67f1c864beb5p-1 // ln(2π)/2
)

// solveLower solves ln b(x, s) = ln(price/root) from the lower bound that follows from
// b ≤ s·e^(−h²/2)/√(2π): with y = h², ln s = L + y/2 where y + ln y = 2(ln|x| − L)
// and L = ln(price/root) + ln(2π)/2. ln b is concave in s, so that Newton's method from
// there cannot pass the root; Halley's is used, held in a bracket.
func solveLower(x, price, root float64) float64 {
	target := LogRatio1(price, root)
	l := target + halfLog2Pi
	y := 0.0
	if x < 0 {
		y = omega(2 * (Log1(-x) - l))
	}
	s := Exp1(l + float64(0.5*y))
	lo, hi := float64(s*0.999), math.Inf(1)
	for range impliedSteps {
		h, t := x/s, float64(0.5*s)
		d := tailDifference(x, h, t)
		g := Log1(d) - float64(0.5*(float64(h*h)+float64(t*t))) - target
		slope := invSqrt2Pi / d
		curve := float64(h*h)/s - float64(0.5*t) - slope // g″/g′
		if g < 0 {
			lo = max(lo, s)
		} else {
			hi = min(hi, s)
		}
		next := halley(s, g/slope, curve, lo, hi)
		if math.Abs(next-s) <= float64(closeEnough*s) {
			return polish(s, next, float64(d*root), price, h, t, slope)
		}
		s = next
	}
	return s
}

// solveUpper solves ln(e^(x/2) − b(x, s)) = ln(distance/root), where s ≥ √(2|x|).
func solveUpper(x, distance, root float64) float64 {
	target := LogRatio1(distance, root)
	lo, hi := math.Sqrt(-2*x), math.Inf(1)
	// A first guess from x = 0, where the distance is 2·Φ(−t).
	u := math.Sqrt(-2 * min(target-float64(0.5*x)-0x1.62e42fefa39efp-1, -1e-3))
	s := max(float64(2*tailQuantile(u)), lo, 1e-3)
	for range impliedSteps {
		h, t := x/s, float64(0.5*s)
		e := scaledTail(-h-t) + scaledTail(h-t)
		g := Log1(e) - float64(0.5*(float64(h*h)+float64(t*t))) - target
		slope := -invSqrt2Pi / e
		curve := float64(h*h)/s - float64(0.5*t) - slope
		if g > 0 {
			lo = max(lo, s)
		} else {
			hi = min(hi, s)
		}
		next := halley(s, g/slope, curve, lo, hi)
		if math.Abs(next-s) <= float64(closeEnough*s) {
			return polish(s, next, float64(e*root), distance, h, t, slope)
		}
		s = next
	}
	return s
}

// polish replaces the last step where the logarithm has rounded more of the
// answer away than the price itself has: at moderate h and t a last step of
// Newton's method on the price, scaled·e^(−(h²+t²)/2), is exact to a few ulp.
func polish(s, next, scaled, price, h, t, slope float64) float64 {
	a := float64(0.5 * (float64(h*h) + float64(t*t)))
	if a > 20 {
		return next
	}
	return s - (float64(scaled*Exp1(0-a))/price-1)/slope
}

// halley takes a step of Halley's method from s, where newton is g/g′ and curve
// g″/g′; a step that leaves the bracket is replaced by one that halves it.
func halley(s, newton, curve, lo, hi float64) float64 {
	next := s - newton/max(1-float64(0.5*float64(newton*curve)), 0.25)
	if next >= lo && next <= hi {
		return next
	}
	if math.IsInf(hi, 1) {
		return 2 * s
	}
	return float64(0.5 * (lo + hi))
}

// tailDifference returns M(h+t) − M(h−t), M(z) = Φ(z)·e^(z²/2), for h ≤ 0 < t.
// Where both h and t make it a small difference of near numbers it is the odd
// part of a Taylor series about h, by M⁽ⁿ⁺¹⁾ = h·M⁽ⁿ⁾ + n·M⁽ⁿ⁻¹⁾.
func tailDifference(x, h, t float64) float64 {
	if t > taylorFrom || x < -taylorWidth {
		return scaledTail(h+t) - scaledTail(h-t)
	}
	m0 := scaledTail(h)
	m1 := math.FMA(h, m0, invSqrt2Pi)
	sum, term := m1, 1.0
	tt := float64(t * t)
	for n := 1.0; n < 16; n += 2 { // m0, m1: derivatives n−1 and n
		m2 := math.FMA(h, m1, float64(n*m0))
		m3 := math.FMA(h, m2, float64((n+1)*m1))
		term *= tt / float64((n+1)*(n+2))
		sum = math.FMA(term, m3, sum)
		m0, m1 = m2, m3
	}
	return float64(2*t) * sum
}

// scaledTail returns M(z) = Φ(z)·e^(z²/2).
func scaledTail(z float64) float64 {
	if z <= 0 {
		return mills(min(-z, millsEnd))
	}
	return Exp1(float64(0.5*float64(z*z))) - mills(z)
}

// omega returns y with y + ln y = z to about 1e-2 relative, from below. Both
// starts are below y (W(u) ≥ u/(1+u) for Lambert's function, and y ≤ z from 1 up),
// and Newton's method on a concave function stays there.
func omega(z float64) float64 {
	var y float64
	if z > 1 {
		y = z - Log1(z)
	} else {
		u := Exp1(z)
		y = u / (1 + u)
	}
	if z < -5 {
		return y
	}
	for range 2 {
		y = float64(y*(1+z-Log1(y))) / (1 + y)
	}
	return y
}

// tailQuantile returns t ≥ 0 with Φ(−t) = e^(−u²/2), within 4.5e-4.
// Source: M. Abramowitz & I. A. Stegun, Handbook of Mathematical Functions,
// 26.2.23, from memory; only a start, so that its error cannot reach a result.
func tailQuantile(u float64) float64 {
	n := 2.515517 + float64(u*(0.802853+float64(u*0.010328)))
	d := 1 + float64(u*(1.432788+float64(u*(0.189269+float64(u*0.001308)))))
	return max(u-n/d, 0)
}
