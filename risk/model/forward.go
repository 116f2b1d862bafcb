package model

import (
	"nightbook/risk/model/pde"
	"nightbook/risk/vec"
)

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

// LessDividends takes from contract i, a forward on a price that pays cash
// dividends until time, what they are worth.
//
// Computes V − Σ D·e^(−rt − q(T−t)) over the dividends D at t in (0, T]: what
// they make of e^(−qT) units of the underlying. Source: as Forward.
func LessDividends(g *Greeks, i int, time, rate, yield float64, dividends []pde.Dividend) {
	for _, d := range dividends {
		if !(d.Time > 0 && d.Time <= time) {
			continue
		}
		w := dividendWorth(d, time, rate, yield)
		g.Price[i] -= w
		g.Theta[i] -= float64(rate * w)
		g.Rho[i] += float64(d.Time * w)
		g.CarryRho[i] += float64((time - d.Time) * w)
	}
}

// DividendsWorth is what LessDividends takes from the price.
func DividendsWorth(time, rate, yield float64, dividends []pde.Dividend) float64 {
	var sum float64
	for _, d := range dividends {
		if d.Time > 0 && d.Time <= time {
			sum += dividendWorth(d, time, rate, yield)
		}
	}
	return sum
}

func dividendWorth(d pde.Dividend, time, rate, yield float64) float64 {
	return float64(d.Amount * vec.Exp1(0-float64(rate*d.Time)-float64(yield*(time-d.Time))))
}
