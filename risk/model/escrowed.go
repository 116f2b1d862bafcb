package model

import (
	"nightbook/risk/model/pde"
	"nightbook/risk/vec"
)

// Escrow returns what the dividends D at t in (0, T] take from a price under the
// escrowed model, Σ D·e^(−(r−q)t), and its derivative by r − q. The rest of the
// price is lognormal, so that a European option is that of BSM on the rest.
func Escrow(time, rate, yield float64, dividends []pde.Dividend) (value, byCarry float64) {
	for _, d := range dividends {
		if d.Time > 0 && d.Time <= time {
			w := float64(d.Amount * vec.Exp1(0-float64((rate-yield)*d.Time)))
			value += w
			byCarry -= float64(d.Time * w)
		}
	}
	return value, byCarry
}

// FromEscrow makes sensitivities to the whole price of contract i out of those of
// BSM to the rest of it: what is in escrow depends on r − q, and grows with it.
func (g *Greeks) FromEscrow(i int, escrow, byCarry, rate, yield float64) {
	grows := float64((rate - yield) * escrow)
	g.Theta[i] -= float64(grows * g.Delta[i])
	g.Charm[i] -= float64(grows * g.Gamma[i])
	g.Rho[i] -= float64(byCarry * g.Delta[i])
	g.CarryRho[i] += float64(byCarry * g.Delta[i])
}
