package pde_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"nightbook/risk/model/pde"
)

// lines returns n lines of any kinds: those of a few shares, each with a smile or
// without one.
func lines(rng *rand.Rand, n int, convention pde.Convention) *pde.Lines {
	l := &pde.Lines{Convention: convention}
	for len(l.Spot) < n {
		c := pde.Chain{Spot: within(rng, 10, 1000), Time: within(rng, .003, 3), Rate: .12*rng.Float64() - .03, Yield: .1*rng.Float64() - .03}
		for range rng.IntN(5) {
			c.Dividends = append(c.Dividends, pde.Dividend{Time: 1.1 * c.Time * rng.Float64(), Amount: c.Spot * .04 * rng.Float64()})
		}
		vol, smile, american := within(rng, .05, .8), float64(rng.IntN(2)), rng.IntN(3) > 0
		switch rng.IntN(12) {
		case 0:
			c.Time = 0
		case 1:
			vol = 0
		case 2:
			c.Rate = math.NaN()
		case 3:
			c.Yield, c.Dividends = c.Rate-.02, nil // exercised between two prices
		}
		for range 1 + rng.IntN(30) {
			z := 2.5 * (2*rng.Float64() - 1)
			l.Spot, l.Time, l.Rate, l.Yield = append(l.Spot, c.Spot), append(l.Time, c.Time), append(l.Rate, c.Rate), append(l.Yield, c.Yield)
			l.Sign, l.American = append(l.Sign, float64(1-2*rng.IntN(2))), append(l.American, american)
			l.Dividends = append(l.Dividends, slices.Clone(c.Dividends))
			l.Strike = append(l.Strike, c.Spot*math.Exp(z*vol*math.Sqrt(c.Time)))
			l.Vol = append(l.Vol, vol*(1-smile*(.1*z-.02*z*z)))
		}
		switch last := len(l.Spot) - 1; rng.IntN(6) {
		case 0:
			l.Strike[last] = -1
		case 1:
			l.Vol[last] = math.Inf(1)
		case 2: // a line twice
			l.Strike[last], l.Vol[last], l.Sign[last] = l.Strike[len(l.Spot)/2], l.Vol[len(l.Spot)/2], l.Sign[len(l.Spot)/2]
		}
	}
	return l
}

// Prices have the bits that they have among all results, on every level.
func TestPrices(t *testing.T) {
	rng := rand.New(rand.NewPCG(51, 52))
	var all pde.Results
	finer := 0
	for n := range 40 {
		s := pde.Solver{Tolerance: []float64{0, 1e-4, 3e-6}[n%3]}
		l := lines(rng, 1+rng.IntN(150), pde.Convention(n%2))
		price := make([]float64, len(l.Spot))
		s.SolveLines(l, &all)
		s.Prices(l, price)
		for i, got := range price {
			if want := all.Price[i]; math.Float64bits(got) != math.Float64bits(want) && (got == got || want == want) {
				t.Errorf("round %d, line %d of %d: %v, among all results %v (%+v)", n, i, len(price), got, want, all.Status[i])
			}
			if all.Status[i] == pde.Uncertain {
				finer++
			}
		}
	}
	if finer < 10 {
		t.Errorf("only %d lines on the finest level", finer)
	}
}

func TestPricesAllocateNothing(t *testing.T) {
	l := lines(rand.New(rand.NewPCG(53, 54)), 100, pde.Escrowed)
	price := make([]float64, len(l.Spot))
	var s pde.Solver
	s.Prices(l, price)
	if x := testing.AllocsPerRun(3, func() { s.Prices(l, price) }); x > 3 {
		t.Errorf("%v allocations", x)
	}
	s.Prices(&pde.Lines{}, nil)
}
