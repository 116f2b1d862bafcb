package model

import "math"

// GeometricAsian prices European calls (sign +1) and puts (sign −1) on the
// geometric average of the spot price, taken without a break from start years
// from now until expiry. Once start is below 0, average is that of the time
// elapsed; before, it is not looked at.
//
// Computes the value of a vanilla option on the average G, whose logarithm is
// normal. With ω the share of the window of length L still to come, τ the years
// until it begins or 0, l = ωL those left of it and A the average so far,
//
//	E ln G = (1−ω)·ln A + ω·(ln S + (r − q − ½σ²)(τ + ½l))    Var ln G = ω²σ²(τ + ⅓l)
//	V = e^(−rT)·w(E[G]·Φ(w·d₁) − K·Φ(w·d₂)),  d₂ = (E ln G − ln K)/√Var, d₁ = d₂ + √Var
//
// Theta and Charm are the change with all dates fixed, the spot unchanged and the
// average growing by it. In terms of A held that is ∂V/∂t + ω′·A·ln(S/A)·∂V/∂A,
// ω′ = 1/(time elapsed); it solves the Black–Scholes equation, seasoned or not.
// Shapes: all slices of one length. Units: S, K, A and V in one currency; start
// and T years, σ per √year, r and q per year.
// Special cases: σ√T = 0, or a window that is over, leaves the average certain. A
// window of no length is a vanilla option. NaN in all results: an input NaN or
// infinite (an average not looked at may be), S, K or A not within 10^±50, T not
// within 0 … 1000, start not within −1000 … T, σ not within 0 … 100, |r|·T or
// |q|·T above 100, a sign other than ±1.
// Accuracy: the price within 1e-14 of S + K for ordinary contracts; see the tables
// of internal/ref/closed_forms for the sensitivities.
// Source: A. G. Z. Kemna & A. C. F. Vorst, A pricing method for options based on
// average asset values, J. Banking and Finance 14 (1990).
func GeometricAsian(g *Greeks, spot, strike, start, average, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		k, t, v, r, q, w := strike[i], time[i], vol[i], rate[i], yield[i], sign[i]
		if !valid(s, k, t, v, r, q, w) || !validWindow(start[i], average[i], t) {
			g.refuse(i)
			continue
		}
		g.putBalanced(i, geometricAsian(jetMarket(s, v, t, r, q), k, start[i], average[i], w), s, v, r, q)
	}
}

// GeometricAsianPrice is GeometricAsian without the sensitivities.
func GeometricAsianPrice(price, spot, strike, start, average, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		k, t, v, r, q, w := strike[i], time[i], vol[i], rate[i], yield[i], sign[i]
		if !valid(s, k, t, v, r, q, w) || !validWindow(start[i], average[i], t) {
			price[i] = nan
			continue
		}
		price[i] = geometricAsian(plainMarket(s, v, t, r, q), k, start[i], average[i], w).value()
	}
}

// GeometricAsianOnFuture is GeometricAsian on a futures price: q = r, and Rho holds
// the futures price, so that CarryRho is 0. For the price alone,
// GeometricAsianPrice with the rate as yield.
func GeometricAsianOnFuture(g *Greeks, future, strike, start, average, time, vol, rate, sign []float64) {
	for i, f := range future {
		k, t, v, r, w := strike[i], time[i], vol[i], rate[i], sign[i]
		if !valid(f, k, t, v, r, r, w) || !validWindow(start[i], average[i], t) {
			g.refuse(i)
			continue
		}
		g.putBalanced(i, geometricAsian(jetFuture(f, v, t, r), k, start[i], average[i], w), f, v, r, r)
	}
}

func geometricAsian[N number[N]](m market[N], strike, start, average, w float64) N {
	win := newWindow(m, start)
	moneyness := logOf(m.s, strike)
	sofar := 0.0
	if win.begun() {
		sofar = logOf(plain(average), strike).value()
	}
	variance := m.vol.times(m.vol)
	drift := m.r.minus(m.q).minus(variance.scaled(0.5))
	mean := win.fixed(sofar, moneyness.value()).
		plus(win.share.times(moneyness.plus(drift.times(win.ahead.plus(win.left.scaled(0.5))))))
	time := win.ahead.plus(win.left.scaled(1.0 / 3))
	scale := win.share.times(m.vol) // its square times time is the variance
	mean = mean.plus(scale.times(scale).times(time).scaled(0.5))
	discount := m.r.times(m.t).scaled(-1)
	f := expOf(mean.plus(discount)).scaled(strike)
	k := expOf(discount).scaled(strike)
	if float64(scale.value()*math.Sqrt(time.value())) < certainBelow {
		return exchange(f, k, w)
	}
	return black(f, k, mean, scale.times(sqrtOf(time)), w)
}
