package pde_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/model/american"
	"nightbook/risk/model/pde"
)

// A boundary that is told is that of the integral equation, near the price or far
// from it. A dividend of next to nothing keeps each line on a mesh of its own.
func TestBoundariesAgainstIntegralEquation(t *testing.T) {
	rng := rand.New(rand.NewPCG(35, 36))
	var s pde.Solver
	integral := american.NewSolver(american.Exact)
	var r american.Results
	r.Resize(1)
	told, exercised := 0, 0
	for range 600 {
		l := line{s: 100, t: within(rng, .02, 3), r: .1 * rng.Float64(), q: .08 * rng.Float64(), v: within(rng, .08, .6), w: float64(1 - 2*rng.IntN(2)), american: true}
		l.k = 100 * math.Exp(3*(2*rng.Float64()-1)*l.v*math.Sqrt(l.t))
		l.divs = []pde.Dividend{{Time: .5 * l.t, Amount: 1e-9}}
		g := solve(&s, l)
		integral.Solve(&r, &american.Lines{Spot: []float64{l.s}, Strike: []float64{l.k}, Time: []float64{l.t}, Vol: []float64{l.v},
			Rate: []float64{l.r}, Yield: []float64{l.q}, Sign: []float64{l.w}})
		if g.boundary != g.boundary {
			continue
		}
		told++
		if g.status == pde.Exercised {
			exercised++
		}
		if !(math.Abs(g.boundary-r.Boundary[0]) <= .01*r.Boundary[0]) {
			t.Errorf("%+v: status %v, boundary %v, integral %v", l, g.status, g.boundary, r.Boundary[0])
		}
	}
	if told < 300 || exercised < 50 {
		t.Errorf("%d boundaries, %d past them", told, exercised)
	}
}
