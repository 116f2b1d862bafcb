package model

import "nightbook/risk/vec"

// Forward values agreements to buy at strike after time.
//
// Computes V = S·e^(−qT) − K·e^(−rT).
// Shapes: all slices of one length. Units: T years, r and q per year.
// Special cases: T = 0 gives S − K. Accuracy: each term within 2 ulp.
// Source: the cash-and-carry argument; Merton 1973.
func Forward(g *Greeks, spot, strike, time, rate, yield []float64) {
	g.zero()
	for i, s := range spot {
		t, r, q := time[i], rate[i], yield[i]
		eq, er := vec.Exp1(0-float64(q*t)), vec.Exp1(0-float64(r*t))
		a, b := float64(s*eq), float64(strike[i]*er)
		g.Price[i] = a - b
		g.Delta[i] = eq
		g.Theta[i] = float64(q*a) - float64(r*b)
		g.Rho[i] = t * b
		g.CarryRho[i] = 0 - float64(t*a)
		g.Charm[i] = q * eq
	}
}

// ForwardPrice is Forward without the sensitivities.
func ForwardPrice(price, spot, strike, time, rate, yield []float64) {
	for i, s := range spot {
		t := time[i]
		price[i] = float64(s*vec.Exp1(0-float64(yield[i]*t))) - float64(strike[i]*vec.Exp1(0-float64(rate[i]*t)))
	}
}

// ForwardOnFuture values agreements to buy at strike after time what a futures
// price tracks.
//
// Computes V = e^(−rT)·(F − K); Rho holds the futures price.
// Shapes, units, special cases, accuracy: as Forward.
func ForwardOnFuture(g *Greeks, future, strike, time, rate []float64) {
	g.zero()
	for i, f := range future {
		t, r := time[i], rate[i]
		er := vec.Exp1(0 - float64(r*t))
		v := (f - strike[i]) * er
		g.Price[i] = v
		g.Delta[i] = er
		g.Theta[i] = r * v
		g.Rho[i] = 0 - float64(t*v)
		g.Charm[i] = r * er
	}
}

// ForwardOnFuturePrice is ForwardOnFuture without the sensitivities.
func ForwardOnFuturePrice(price, future, strike, time, rate []float64) {
	for i, f := range future {
		price[i] = (f - strike[i]) * vec.Exp1(0-float64(rate[i]*time[i]))
	}
}
