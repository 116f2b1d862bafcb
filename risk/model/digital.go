package model

// CashDigital prices options that pay a fixed amount at expiry if the spot price
// is then above (sign +1) or below (sign −1) the strike.
//
// Computes V = P·e^(−rT)·Φ(w·d₂), d₂ = (ln(S/K) + (r − q − ½σ²)T)/(σ√T), and its
// derivatives.
// Shapes: all slices of one length. Units: the payout P and V in one currency, S
// and K in one; T years, σ per √year, r and q per year.
// Special cases: σ√T = 0 pays or does not by the side of the strike on which the
// forward is; exactly at it half is paid, the limit of a vanishing spread.
// NaN in all results: an input NaN or infinite, S or K not within 10^±50, T not
// within 0 … 1000 or σ not within 0 … 100, |r|·T or |q|·T above 100, |P| above
// 10^50, a sign other than ±1.
// Accuracy: the price within 1e-15 of P·e^(−rT) for |rT| and |qT| below 1; the
// rounding of S/K moves derivatives by φ(d₂)/(σ√T) ulp, further for each order.
// Source: M. Rubinstein & E. Reiner, Unscrambling the binary code, Risk 4 (1991).
func CashDigital(g *Greeks, spot, strike, payout, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		k, p, t, v, r, q, w := strike[i], payout[i], time[i], vol[i], rate[i], yield[i], sign[i]
		if !valid(s, k, t, v, r, q, w) || !isAmount(p) {
			g.refuse(i)
			continue
		}
		g.putBalanced(i, cashDigital(jetMarket(s, v, t, r, q), k, p, w), s, v, r, q)
	}
}

// CashDigitalPrice is CashDigital without the sensitivities.
func CashDigitalPrice(price, spot, strike, payout, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		k, p, t, v, r, q, w := strike[i], payout[i], time[i], vol[i], rate[i], yield[i], sign[i]
		if !valid(s, k, t, v, r, q, w) || !isAmount(p) {
			price[i] = nan
			continue
		}
		price[i] = cashDigital(plainMarket(s, v, t, r, q), k, p, w).value()
	}
}

// CashDigitalOnFuture is CashDigital on a futures price: q = r, and Rho holds the
// futures price, so that CarryRho is 0. For the price alone, CashDigitalPrice
// with the rate as yield.
func CashDigitalOnFuture(g *Greeks, future, strike, payout, time, vol, rate, sign []float64) {
	for i, f := range future {
		k, p, t, v, r, w := strike[i], payout[i], time[i], vol[i], rate[i], sign[i]
		if !valid(f, k, t, v, r, r, w) || !isAmount(p) {
			g.refuse(i)
			continue
		}
		g.putBalanced(i, cashDigital(jetFuture(f, v, t, r), k, p, w), f, v, r, r)
	}
}

// AssetDigital prices options that deliver one unit of the underlying at expiry
// if its price is then above (sign +1) or below (sign −1) the strike.
//
// Computes V = S·e^(−qT)·Φ(w·d₁), d₁ = (ln(S/K) + (r − q + ½σ²)T)/(σ√T), and its
// derivatives.
// Shapes, units, special cases, source: as CashDigital, without a payout.
// Accuracy: the price within 1e-15 of S·e^(−qT) for |rT| and |qT| below 1.
func AssetDigital(g *Greeks, spot, strike, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		k, t, v, r, q, w := strike[i], time[i], vol[i], rate[i], yield[i], sign[i]
		if !valid(s, k, t, v, r, q, w) {
			g.refuse(i)
			continue
		}
		g.putBalanced(i, assetDigital(jetMarket(s, v, t, r, q), k, w), s, v, r, q)
	}
}

// AssetDigitalPrice is AssetDigital without the sensitivities.
func AssetDigitalPrice(price, spot, strike, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		k, t, v, r, q, w := strike[i], time[i], vol[i], rate[i], yield[i], sign[i]
		if !valid(s, k, t, v, r, q, w) {
			price[i] = nan
			continue
		}
		price[i] = assetDigital(plainMarket(s, v, t, r, q), k, w).value()
	}
}

// AssetDigitalOnFuture is AssetDigital on a futures price, as CashDigitalOnFuture
// is CashDigital: it pays the futures price.
func AssetDigitalOnFuture(g *Greeks, future, strike, time, vol, rate, sign []float64) {
	for i, f := range future {
		k, t, v, r, w := strike[i], time[i], vol[i], rate[i], sign[i]
		if !valid(f, k, t, v, r, r, w) {
			g.refuse(i)
			continue
		}
		g.putBalanced(i, assetDigital(jetFuture(f, v, t, r), k, w), f, v, r, r)
	}
}

func cashDigital[N number[N]](m market[N], k, payout, w float64) N {
	paid := expOf(m.r.times(m.t).scaled(-1)).scaled(payout)
	return ifPaid(m, paid, k, w, -0.5)
}

func assetDigital[N number[N]](m market[N], k, w float64) N {
	return ifPaid(m, discounted(m.s, m.q, m.t), k, w, 0.5)
}

// ifPaid is paid·Φ(w·d), d = (ln(S/K) + (r−q)T)/(σ√T) + side·σ√T.
func ifPaid[N number[N]](m market[N], paid N, k, w, side float64) N {
	forward := logOf(m.s, k).plus(m.r.minus(m.q).times(m.t)) // its moneyness
	if spread(m) < certainBelow {
		switch x := w * forward.value(); {
		case x > 0:
			return paid
		case x < 0:
			return paid.constant(0)
		}
		return paid.scaled(0.5)
	}
	sd := m.vol.times(sqrtOf(m.t))
	d := forward.times(invOf(sd)).plus(sd.scaled(side))
	return paid.times(cdfOf(d.scaled(w)))
}
