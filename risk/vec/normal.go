package vec

import "math"

// Beyond these distances from the mean e^(−y²/2) is 0 to the last subnormal, and
// the Mills ratio is 1/y to the last bit.
const (
	gaussEnd = 39
	millsEnd = 1e15
)

// NormPDF1 is one value of the standard normal density.
//
// Computes φ(x) = e^(−x²/2)/√(2π). Shapes: scalar. Units: none.
// Special cases: NaN gives NaN, ±Inf gives 0; underflow is gradual.
// Accuracy: 2.2 ulp, also in the far tail: the rounding error of x² is carried
// into the exponential. Source: the definition.
func NormPDF1(x float64) float64 {
	if x != x {
		return math.NaN()
	}
	return gauss(min(math.Abs(x), gaussEnd)) * invSqrt2Pi
}

// NormCDF1 is one value of the standard normal distribution.
//
// Computes Φ(x) = e^(−y²/2)·m(y) for x = −y ≤ 0, m a rational function close to
// the Mills ratio, and 1 − Φ(−x) otherwise. Shapes: scalar. Units: none.
// Special cases: NaN gives NaN, −Inf gives 0, +Inf gives 1; underflow is gradual.
// Accuracy: 7e-16 relative down to x = −37, where ½·erfc(−x/√2) has lost three digits.
// Source: J. P. Mills, Biometrika 18 (1926), for the ratio; fit from gen/coef.py.
func NormCDF1(x float64) float64 {
	if x != x {
		return math.NaN()
	}
	y := math.Abs(x)
	t := float64(gauss(min(y, gaussEnd)) * mills(min(y, millsEnd)))
	return selectFloat(x > 0, 1-t, t)
}

// gauss returns e^(−y²/2) for 0 ≤ y ≤ gaussEnd. Without lo, rounding y² would
// cost y² ulp.
func gauss(y float64) float64 {
	h := float64(float64(y*0.5) * y)
	lo := math.FMA(float64(y*-0.5), y, h)
	return scaleTwice(expReduced(0-h, lo))
}

// mills returns Φ(−y)·e^(y²/2) for 0 ≤ y ≤ millsEnd: an even and an odd part of
// each polynomial, which halves the chain of dependent steps.
func mills(y float64) float64 {
	z := y * y
	pe := math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, millsP10, millsP8), millsP6), millsP4), millsP2), millsP0)
	po := math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, millsP9, millsP7), millsP5), millsP3), millsP1)
	qe := math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, millsQ10, millsQ8), millsQ6), millsQ4), millsQ2), millsQ0)
	qo := math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, millsQ11, millsQ9), millsQ7), millsQ5), millsQ3), millsQ1)
	return math.FMA(y, po, pe) / math.FMA(y, qo, qe)
}
