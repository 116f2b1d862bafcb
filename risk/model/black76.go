package model

// Black76 prices European calls (sign +1) and puts (sign −1) on a futures price.
//
// Computes V = w·e^(−rT)·(F·Φ(w·d₁) − K·Φ(w·d₂)), d₁,₂ = ln(F/K)/(σ√T) ± ½σ√T:
// BSM with q = r. Rho holds the futures price, so it is −T·V, and there is no
// yield to differentiate by: CarryRho is 0.
// Shapes, units, special cases and accuracy: as BSM.
// Source: F. Black, The pricing of commodity contracts, J. Financial Economics 3 (1976).
func Black76(g *Greeks, future, strike, time, vol, rate, sign []float64) {
	BSM(g, future, strike, time, vol, rate, rate, sign)
	for i, v := range g.Price {
		g.Rho[i] = 0 - float64(time[i]*v)
	}
	clear(g.CarryRho)
}
