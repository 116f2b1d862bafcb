package vec

import "math"

// Constants of the exponent arithmetic in logRatio.
const (
	halfBinade = binade / 2
	biasBits   = 1024 << 52                // makes every aligned exponent difference positive
	roundBits  = 0x4338000000000000 - 1024 // bits of roundShift, less the bias
	smallest   = 0x1p-1022                 // smallest normal number
	lift       = 0x1p54                    // makes any subnormal number normal
)

// Log1 is one natural logarithm.
//
// Computes ln x. Shapes: scalar. Units: none.
// Special cases: ±0 gives −Inf, x < 0 gives NaN, +Inf gives +Inf, NaN gives NaN;
// subnormal numbers are exact inputs like any other.
// Accuracy: 1.9 ulp. Source: see LogRatio1.
func Log1(x float64) float64 { return LogRatio1(x, 1) }

// LogRatio1 is one log-moneyness.
//
// Computes ln(s/k) without rounding the quotient: with the exponents aligned,
// s/k = 2^e·s/k′ and ln(s/k′) = 2·artanh((s−k′)/(s+k′)), one division.
// Shapes: scalar. Units: s and k alike.
// Special cases: those of ln(s/k) for s, k ≥ 0, so 0/k gives −Inf, s/0 and Inf/k
// give +Inf, s/Inf gives −Inf, and 0/0, Inf/Inf, NaN or a negative number give NaN.
// Quotients that would overflow or underflow are no special case.
// Accuracy: 1.9 ulp of the result, also close to s = k.
// Source: the artanh series; polynomial from gen/coef.py.
func LogRatio1(s, k float64) float64 {
	sb, kb := math.Float64bits(s), math.Float64bits(k)
	if !inLogBox(sb, kb) {
		return logRatioWide(s, k)
	}
	n, rest := logRatio(s, k)
	return math.FMA(n, ln2Hi, rest)
}

// inLogBox reports whether both numbers lie in [2^−512, 2^512), where aligning
// the exponents and adding cannot leave the normal numbers.
func inLogBox(sb, kb uint64) bool { return ((sb-logFrom)|(kb-logFrom))&logMask == 0 }

const (
	logFrom = (1023 - 512) << 52
	logMask = 3 << 62 // set by anything outside the 1024 binades above logFrom
)

// logRatio returns ln(s/k) in the box as n·ln2Hi + rest, n an integer. The
// product is exact, so a caller who adds more terms can leave it to the last.
func logRatio(s, k float64) (n, rest float64) {
	sb, kb := math.Float64bits(s), math.Float64bits(k)
	e := (sb - kb + halfBinade) & exponentBits // whole binades from k to s, rounded
	n = math.Float64frombits((e+biasBits)>>52+roundBits) - roundShift
	return n, atanhSum(s, math.Float64frombits(kb+e), n)
}

// atanhSum returns ln(s/k) + n·ln2Lo for s and k within half a binade.
func atanhSum(s, k, n float64) float64 {
	u := (s - k) / (s + k)
	z := u * u
	w := z * z
	even := math.FMA(w, math.FMA(w, math.FMA(w, logC6, logC4), logC2), logC0)
	odd := math.FMA(w, math.FMA(w, math.FMA(w, logC7, logC5), logC3), logC1)
	c := float64(u*z) * math.FMA(z, odd, even)
	return math.FMA(u, 2, math.FMA(n, ln2Lo, c))
}

// logRatioWide is LogRatio1 for any arguments. Inside the box it gives the bits
// of logRatio, since moving both mantissas to [1, 2) is exact.
func logRatioWide(s, k float64) float64 {
	switch {
	case !(s >= 0 && k >= 0), s == 0 && k == 0, s > math.MaxFloat64 && k > math.MaxFloat64:
		return math.NaN()
	case s == 0 || k > math.MaxFloat64:
		return math.Inf(-1)
	case k == 0 || s > math.MaxFloat64:
		return math.Inf(1)
	}
	ms, es := splitBinade(s)
	mk, ek := splitBinade(k)
	switch d := int64(math.Float64bits(ms)) - int64(math.Float64bits(mk)); {
	case d < -halfBinade:
		mk, ek = mk/2, ek+1
	case d >= halfBinade:
		mk, ek = mk*2, ek-1
	}
	n := float64(es - ek)
	return math.FMA(n, ln2Hi, atanhSum(ms, mk, n))
}

// splitBinade returns m in [1, 2) and e with x = m·2^e, for finite x > 0.
func splitBinade(x float64) (m float64, e int64) {
	if x < smallest {
		x, e = x*lift, -54
	}
	b := math.Float64bits(x)
	return math.Float64frombits(b&^exponentBits | oneBits), e + int64(b>>52) - 1023
}
