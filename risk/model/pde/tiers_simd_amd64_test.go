//go:build goexperiment.simd && amd64

package pde

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/vec"
)

// Every form of the loops that this machine has gives the same bits.
func TestTiers(t *testing.T) {
	var forms [][2]bool // wide and half
	switch vec.Tier() {
	case "avx512":
		forms = [][2]bool{{true, false}, {false, true}}
	case "avx2":
		forms = [][2]bool{{false, true}}
	default:
		t.Skip("this machine has no vector form")
	}
	defer func(w, h bool) { wide, half = w, h }(wide, half)
	rng := rand.New(rand.NewPCG(45, 46))
	var s Solver
	var want, got Results
	for n := range 80 {
		c := Chain{Spot: 100, Time: .05 + 2*rng.Float64(), Rate: .12*rng.Float64() - .02, Yield: .1*rng.Float64() - .02, Sign: float64(1 - 2*rng.IntN(2)), American: n%4 > 0}
		for range rng.IntN(5) {
			c.Dividends = append(c.Dividends, Dividend{Time: c.Time * rng.Float64(), Amount: 6 * rng.Float64()})
		}
		if n%6 == 0 {
			c.Convention = Escrowed
		}
		smile := .1 * float64(n%2)
		for range 9 {
			c.Strike, c.Vol = append(c.Strike, 70+60*rng.Float64()), append(c.Vol, .2+float64(smile*rng.Float64()))
		}
		wide, half = false, false
		s.Solve(&c, &want)
		for _, form := range forms {
			wide, half = form[0], form[1]
			s.Solve(&c, &got)
			for i, x := range pricesOf(&s, &c) {
				if math.Float64bits(x) != math.Float64bits(want.Price[i]) {
					t.Errorf("%+v, line %d, AVX-512 %v: %v by itself, without vectors %v", c, i, wide, x, want.Price[i])
				}
			}
			for k, column := range got.columns() {
				for i, x := range *column {
					if y := (*want.columns()[k])[i]; math.Float64bits(x) != math.Float64bits(y) && (x == x || y == y) {
						t.Errorf("%+v, line %d, column %d, AVX-512 %v: %v, without vectors %v", c, i, k, wide, x, y)
					}
				}
			}
		}
	}
}

func pricesOf(s *Solver, c *Chain) []float64 {
	l := Lines{Strike: c.Strike, Vol: c.Vol, Convention: c.Convention}
	for range c.Strike {
		l.Spot, l.Time, l.Rate, l.Yield = append(l.Spot, c.Spot), append(l.Time, c.Time), append(l.Rate, c.Rate), append(l.Yield, c.Yield)
		l.Sign, l.American, l.Dividends = append(l.Sign, c.Sign), append(l.American, c.American), append(l.Dividends, c.Dividends)
	}
	price := make([]float64, len(c.Strike))
	s.Prices(&l, price)
	return price
}
