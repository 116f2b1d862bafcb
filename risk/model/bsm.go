package model

import "nightbook/risk/vec"

// BSM prices European calls (sign +1) and puts (sign −1) on a spot price with
// continuous rate r and yield q, or foreign rate q.
//
// Computes V = w·(S·e^(−qT)·Φ(w·d₁) − K·e^(−rT)·Φ(w·d₂)),
// d₁,₂ = (ln(S/K) + (r − q ± ½σ²)T) / (σ√T).
// Shapes: all slices of one length. Units: T years, σ per √year, r and q per year.
// Special cases and accuracy: see vec.BSM.
// Source: Black & Scholes 1973; Merton 1973; for currencies Garman & Kohlhagen 1983.
func BSM(g *Greeks, spot, strike, time, vol, rate, yield, sign []float64) {
	k := vec.BSM{Spot: spot, Strike: strike, Time: time, Vol: vol, Rate: rate, Yield: yield, Sign: sign,
		Price: g.Price, Delta: g.Delta, Gamma: g.Gamma, Vega: g.Vega, Theta: g.Theta, Rho: g.Rho, CarryRho: g.CarryRho,
		Vanna: g.Vanna, Volga: g.Volga, Charm: g.Charm, Residual: g.Residual}
	k.All()
}

// BSMPrice is BSM without the sensitivities.
func BSMPrice(price, spot, strike, time, vol, rate, yield, sign []float64) {
	k := vec.BSM{Spot: spot, Strike: strike, Time: time, Vol: vol, Rate: rate, Yield: yield, Sign: sign, Price: price}
	k.Prices()
}
