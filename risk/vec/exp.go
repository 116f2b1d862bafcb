package vec

import "math"

// Beyond these arguments e^x has left the range of a float64 on either side;
// clamping to them keeps the exponent arithmetic of scaleTwice in range.
const (
	expLowest  = -746
	expHighest = 710
)

// Exp1 is one exponential.
//
// Computes eˣ. Shapes: scalar. Units: none.
// Special cases: NaN gives NaN, −Inf gives 0, +Inf gives +Inf; overflow gives
// +Inf and underflow is gradual.
// Accuracy: 1.1 ulp over the whole range, subnormal results included.
// Source: Cody & Waite, Software Manual for the Elementary Functions, 1980, for
// the reduction x = k·ln 2 + r; polynomial from gen/coef.py.
func Exp1(x float64) float64 {
	if x < expLowest {
		x = expLowest
	}
	if x > expHighest {
		x = expHighest
	}
	return scaleTwice(expReduced(x, 0))
}

// expReduced returns p = e^r and t, whose low bits hold the integer k of
// hi + lo = k·ln 2 + r. The sum is exact: lo is what rounding hi lost.
func expReduced(hi, lo float64) (p, t float64) {
	t = math.FMA(hi, log2E, roundShift)
	k := t - roundShift
	r := math.FMA(k, -ln2Hi, hi) + math.FMA(k, -ln2Lo, lo)
	z := r * r
	even := math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, expC10, expC8), expC6), expC4), expC2)
	odd := math.FMA(z, math.FMA(z, math.FMA(z, math.FMA(z, expC11, expC9), expC7), expC5), expC3)
	return math.FMA(z, math.FMA(r, odd, even), r) + 1, t
}

// scaleOnce returns p·2^k where the result is a normal number.
func scaleOnce(p, t float64) float64 {
	return float64(p * math.Float64frombits(math.Float64bits(t)<<52+oneBits))
}

// scaleTwice returns p·2^k for any k: 2^k alone may be out of range, so it is
// applied in halves, the first of which is exact.
func scaleTwice(p, t float64) float64 {
	h := math.FMA(t-roundShift, 0.5, roundShift)
	tb, hb := math.Float64bits(t), math.Float64bits(h)
	return float64(float64(p*math.Float64frombits(hb<<52+oneBits)) * math.Float64frombits((tb-hb)<<52+oneBits))
}

// discount returns e^(−rate·t) for |rate·t| < 512, with the rounding error of
// the product carried along: it would cost the digits of a long-dated discount.
func discount(rate, t float64) float64 {
	n := 0 - rate
	e := float64(n * t)
	return scaleOnce(expReduced(e, math.FMA(n, t, 0-e)))
}
