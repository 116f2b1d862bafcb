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
// all three vol is NaN. A volatility too small for a float64 is ImpliedBelow.
// Accuracy: 12ε + 2ε·price/(σ·vega) relative, ε = 2⁻⁵³: the second term is what
// rounding the price alone makes of the answer. For σ√T from 1e-4 to 6 and prices
// down to 1e-300; see implied_reference_test.go.
// Source: the normalised form and the step of third order on a logarithm follow
// P. Jäckel, Let's be rational, Wilmott (2015). See impliedTotal.
func ImpliedVol(vol []float64, outcome []Implied, forward, strike, time, price, sign []float64) {
	n := len(vol)
	if len(outcome) != n || len(forward) != n || len(strike) != n || len(time) != n || len(price) != n || len(sign) != n {
		panic(lengthMismatch)
	}
	q := quotes{vol, outcome, forward, strike, time, price, sign}
	q.invert()
}

// quotes are the arguments of ImpliedVol.
type quotes struct {
	vol                                []float64
	outcome                            []Implied
	forward, strike, time, price, sign []float64
}

func (q *quotes) invertGeneric() {
	for i := range q.vol {
		f, k, t := q.forward[i], q.strike[i], q.time[i]
		p, side, o := impliedSide(f, k, t, q.price[i], q.sign[i])
		q.set(i, p, side, o)
	}
}

// set fills line i of the outputs from what impliedSide says of it.
func (q *quotes) set(i int, p, side float64, o Implied) {
	v := nan
	if o == ImpliedOK {
		if v = impliedTotal(q.forward[i], q.strike[i], p, side) / math.Sqrt(q.time[i]); v == 0 {
			v, o = nan, ImpliedBelow
		}
	}
	q.vol[i], q.outcome[i] = v, o
}

// impliedSide returns what is solved for: with side 1 the price p of the
// out-of-the-money option, with side −1, where that price is more than half of its
// upper bound min(F, K), the distance p from the bound.
func impliedSide(f, k, t, price, w float64) (p, side float64, o Implied) {
	if !(f > 0 && k > 0 && t > 0 && price >= 0 && finite(f) && finite(k) && finite(t) && finite(price) && (w == 1 || w == -1)) {
		return 0, 0, ImpliedNaN
	}
	bound, intrinsic := k, float64(w*(f-k))
	if f < k {
		bound = f
	}
	if intrinsic > 0 {
		price -= intrinsic
	}
	switch {
	case price <= 0:
		return 0, 0, ImpliedBelow
	case price >= bound:
		return 0, 0, ImpliedAbove
	case price > bound/2:
		return bound - price, -1, ImpliedOK
	}
	return price, 1, ImpliedOK
}
