package vec

import "math"

// The scalar form of the formula: the specification of every other form.
//
// With a = S·e^(−qT) and b = K·e^(−rT), a·φ(d₁) = b·φ(d₂). So one exponential
// serves both tails, a·Φ(−|d₁|) and b·Φ(−|d₂|), through the Mills ratio; it is
// taken at y, the nearer to 0 of d₁ and d₂, where it loses least.
//
// Where a factor may be 0 a product is written as FMA(x, y, 0), which is never −0:
// a put out of reach has a delta of 0.

func (b *BSM) runGeneric(want outputs, lo, hi int) {
	switch want {
	case allOutputs:
		b.allGeneric(lo, hi)
	case coreOutputs:
		b.coreGeneric(lo, hi)
	default:
		b.pricesGeneric(lo, hi)
	}
}

func (b *BSM) allGeneric(lo, hi int) {
	for i := lo; i < hi; i++ {
		s, k, t, v, r, q, w := b.Spot[i], b.Strike[i], b.Time[i], b.Vol[i], b.Rate[i], b.Yield[i], b.Sign[i]
		if !inBox(s, k, t, v, r, q, w) {
			b.edge(allOutputs, i)
			continue
		}
		an, bn, x, rv, sq, d1, d2, halfVar := bsmTerms(s, k, t, v, r, q, w)
		rs := 1 / s
		g := x * rv
		gs := g * rs
		price := an - bn
		delta := an * rs
		gamma := gs * rs
		theta := math.FMA(q, an, math.FMA(0-r, bn, math.FMA(g, 0-halfVar, 0)))
		b.Price[i] = price
		b.Delta[i] = delta
		b.Gamma[i] = gamma
		b.Vega[i] = x * sq
		b.Theta[i] = theta
		b.Rho[i] = t * bn
		b.CarryRho[i] = math.FMA(0-t, an, 0)
		b.Vanna[i] = math.FMA(float64(gs*sq), 0-d2, 0)
		b.Volga[i] = math.FMA(float64(g*t), float64(d1*d2), 0)
		b.Charm[i] = math.FMA(q, delta, math.FMA(gs, math.FMA(float64(d2*halfVar), rv, q-r), 0))
		e := math.FMA(halfVar, float64(float64(gamma*s)*s), theta)
		e = math.FMA(r-q, float64(s*delta), e)
		e = math.FMA(0-r, price, e)
		b.Residual[i] = math.Abs(e) / max(math.Abs(price), float64(s*residualFloor))
	}
}

func (b *BSM) coreGeneric(lo, hi int) {
	for i := lo; i < hi; i++ {
		s, k, t, v, r, q, w := b.Spot[i], b.Strike[i], b.Time[i], b.Vol[i], b.Rate[i], b.Yield[i], b.Sign[i]
		if !inBox(s, k, t, v, r, q, w) {
			b.edge(coreOutputs, i)
			continue
		}
		an, bn, x, rv, sq, _, _, halfVar := bsmTerms(s, k, t, v, r, q, w)
		rs := 1 / s
		g := x * rv
		b.Price[i] = an - bn
		b.Delta[i] = an * rs
		b.Gamma[i] = float64(g*rs) * rs
		b.Vega[i] = x * sq
		b.Theta[i] = math.FMA(q, an, math.FMA(0-r, bn, math.FMA(g, 0-halfVar, 0)))
		b.Rho[i] = t * bn
	}
}

func (b *BSM) pricesGeneric(lo, hi int) {
	for i := lo; i < hi; i++ {
		s, k, t, v, r, q, w := b.Spot[i], b.Strike[i], b.Time[i], b.Vol[i], b.Rate[i], b.Yield[i], b.Sign[i]
		if !inBox(s, k, t, v, r, q, w) {
			b.edge(priceOnly, i)
			continue
		}
		an, bn, _, _, _, _, _, _ := bsmTerms(s, k, t, v, r, q, w)
		b.Price[i] = an - bn
	}
}

const residualFloor = 1e-4 // of the spot: below it a price is too small to scale by

// The box: spot and strike in [2^−128, 2^128), time and volatility in
// [2^−24, 2^8), |rate| and |yield| below 2, sign ±1. Its sides are powers of two
// so that membership is a matter of exponent bits: no comparison, and NaN and
// infinities fall outside by themselves. Within it no step overflows, divides by
// zero or meets a subnormal number it must keep.
const (
	priceFrom = (1023 - 128) << 52
	timeFrom  = (1023 - 24) << 52
	priceMask = 0xF << 60  // beyond the 256 binades above priceFrom
	timeMask  = 0x7F << 57 // beyond the 32 binades above timeFrom
	rateMask  = 1 << 62    // set from 2 upwards
)

func inBox(s, k, t, v, r, q, w float64) bool {
	sb, kb, tb, vb := math.Float64bits(s), math.Float64bits(k), math.Float64bits(t), math.Float64bits(v)
	rb, qb, wb := math.Float64bits(r), math.Float64bits(q), math.Float64bits(w)
	prices := ((sb - priceFrom) | (kb - priceFrom)) & priceMask
	times := ((tb - timeFrom) | (vb - timeFrom)) & timeMask
	return prices|times|(rb|qb)&rateMask|(wb&absBits^oneBits) == 0
}

// bsmTerms returns, for an option in the box,
//
//	an = w·S·e^(−qT)·Φ(w·d₁)    bn = w·K·e^(−rT)·Φ(w·d₂)
//	x  = S·e^(−qT)·φ(d₁)        rv = 1/(σ√T)    sq = √T    halfVar = ½σ²
//
// The density multiplies an error of d by d, hence no rounding on the way to the
// exponential is left in: not of ln(S/K) + (r−q)T, nor of σ√T, their quotient or the
// sum that makes y of it. What each has lost is had by FMA, and goes into lo.
func bsmTerms(s, k, t, v, r, q, w float64) (an, bn, x, rv, sq, d1, d2, halfVar float64) {
	a := float64(s * discount(q, t))
	b := float64(k * discount(r, t))
	sq = math.Sqrt(t)
	vs := float64(v * sq)
	rv = 1 / vs
	halfVar = float64(v * float64(v*0.5))
	n, rest := logRatio(s, k)
	rest = math.FMA(r-q, t, rest)
	m := math.FMA(n, ln2Hi, rest) // ln(S/K) + (r−q)T
	mLost := rest - math.FMA(n, -ln2Hi, m)
	d := float64(m * rv)
	d1 = math.FMA(vs, 0.5, d)
	d2 = math.FMA(vs, -0.5, d)
	first := d <= 0
	y := selectFloat(first, d1, d2) // the nearer to 0
	side := selectFloat(first, 0.5, -0.5)
	vsLost := math.FMA(math.FMA(0-sq, sq, t), float64(halfVar*rv), math.FMA(v, sq, 0-vs))
	other := math.FMA(d, -2, y)          // the farther, with its sign turned
	lost := math.FMA(d, 0-vs, m) + mLost // of the quotient, times σ√T; then of y
	lost = math.FMA(math.FMA(vsLost, other, lost), rv, math.FMA(vs, side, d-y))
	if y > gaussEnd {
		y = gaussEnd
	}
	if y < -gaussEnd {
		y = -gaussEnd
	}
	half := float64(y * -0.5)
	e := float64(half * y)
	lo := math.FMA(0-y, lost, math.FMA(half, y, 0-e))
	x = scaleTwice(expReduced(e, lo)) * selectFloat(first, a, b)
	an = float64(x * mills(math.Abs(d1)))
	bn = float64(x * mills(math.Abs(d2)))
	an = selectFloat(float64(w*d1) > 0, a-an, an)
	bn = selectFloat(float64(w*d2) > 0, b-bn, bn)
	return math.FMA(w, an, 0), math.FMA(w, bn, 0), float64(x * invSqrt2Pi), rv, sq, d1, d2, halfVar
}
