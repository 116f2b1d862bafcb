package pde_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/model/pde"
)

// The results have these bits in every build and on every machine: the tests are
// run with GOAMD64=v1 and v3, with and without the vector forms.
const bitsOfAll = 0xd8aed9ce16768976

// plain returns a number of three digits from lo to hi: inputs whose own bits
// cannot depend on the machine.
func plain(rng *rand.Rand, lo, hi int) float64 { return float64(lo+rng.IntN(hi-lo)) / 1000 }

func TestSameBits(t *testing.T) {
	rng := rand.New(rand.NewPCG(21, 22))
	h := uint64(14695981039346656037)
	var s pde.Solver
	var r pde.Results
	for n := range 300 {
		c := pde.Chain{Spot: 100, Time: plain(rng, 20, 3000), Rate: plain(rng, -30, 100), Yield: plain(rng, -40, 100),
			Sign: float64(1 - 2*rng.IntN(2)), American: n%4 > 0, Strike: []float64{100 * plain(rng, 700, 1400)}, Vol: []float64{plain(rng, 50, 700)}}
		for range rng.IntN(4) {
			c.Dividends = append(c.Dividends, pde.Dividend{Time: plain(rng, 1, 3000), Amount: plain(rng, 100, 5000)})
		}
		if n%7 == 0 {
			c.Convention = pde.Escrowed
		}
		if n%31 == 0 {
			c.Vol[0] = 0
		}
		s.Solve(&c, &r)
		for _, x := range [14]float64{r.Price[0], r.Delta[0], r.Gamma[0], r.Vega[0], r.Theta[0], r.Rho[0], r.CarryRho[0], r.Vanna[0], r.Volga[0],
			r.Charm[0], r.Residual[0], r.Error[0], r.Boundary[0], r.Beyond[0]} {
			u := math.Float64bits(x)
			if x != x {
				u = 0x7FF8000000000000
			}
			h = (h ^ u) * 1099511628211
			h ^= h >> 32
		}
		h ^= uint64(r.Status[0])
	}
	if h != bitsOfAll {
		t.Errorf("the results have the hash %#x, expected %#x", h, uint64(bitsOfAll))
	}
}
