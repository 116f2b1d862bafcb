package model

import "math"

var nan = math.NaN()

// Spot values what is worth its quoted price: V = S, Delta 1.
func Spot(g *Greeks, spot []float64) {
	g.zero()
	copy(g.Price, spot)
	fill(g.Delta, 1)
}

// FutureChange values a futures contract since it was last margined:
// V = F − entry, Delta 1.
func FutureChange(g *Greeks, future, entry []float64) {
	g.zero()
	for i, f := range future {
		g.Price[i] = f - entry[i]
	}
	fill(g.Delta, 1)
}

// Face values cash: V = 1, no sensitivities.
func Face(g *Greeks) {
	g.zero()
	fill(g.Price, 1)
}

// Payoff values contracts at or after their expiry by the payoff at the current
// price: V = max(w·(S − K), 0), or S − K where sign is 0 (a forward). Delta is
// the slope of the payoff, 0 at the kink; the rest is 0.
func Payoff(g *Greeks, spot, strike, sign []float64) {
	g.zero()
	for i, s := range spot {
		x, w := s-strike[i], sign[i]
		switch {
		case w == 0:
			g.Price[i], g.Delta[i] = x, 1
		case w*x > 0:
			g.Price[i], g.Delta[i] = w*x, w
		}
	}
}
