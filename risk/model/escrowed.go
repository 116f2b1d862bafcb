package model

// FromEscrow makes sensitivities to the whole price of contract i out of those to
// the price less what is in escrow for dividends, pde.Escrow, by which it was
// valued: the escrow depends on r − q, and grows with it.
func (g *Greeks) FromEscrow(i int, escrow, byCarry, rate, yield float64) {
	grows := float64((rate - yield) * escrow)
	g.Theta[i] -= float64(grows * g.Delta[i])
	g.Charm[i] -= float64(grows * g.Gamma[i])
	g.Rho[i] -= float64(byCarry * g.Delta[i])
	g.CarryRho[i] += float64(byCarry * g.Delta[i])
}
