package pde_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"sync"
	"testing"

	"nightbook/risk/model/pde"
)

// columns are the numbers of line i, as bits, every NaN alike.
func columns(r *pde.Results, i int) (b [15]uint64) {
	for k, x := range [14]float64{r.Price[i], r.Delta[i], r.Gamma[i], r.Vega[i], r.Theta[i], r.Rho[i], r.CarryRho[i], r.Vanna[i], r.Volga[i],
		r.Charm[i], r.Residual[i], r.Error[i], r.Boundary[i], r.Beyond[i]} {
		b[k] = math.Float64bits(x)
		if x != x {
			b[k] = 0x7FF8000000000000
		}
	}
	b[14] = uint64(r.Status[i])
	return b
}

// A line has the same bits alone, in a strip, in another order and among other
// lines, whichever of them are refined further and on how many goroutines.
func TestStripIsAlone(t *testing.T) {
	rng := rand.New(rand.NewPCG(41, 42))
	s := pde.Solver{Tolerance: 5e-6}
	finer := 0
	for n := range 60 {
		c := pde.Chain{Spot: 100, Time: within(rng, .01, 3), Rate: .12*rng.Float64() - .02, Yield: .1*rng.Float64() - .02, Sign: float64(1 - 2*rng.IntN(2)), American: n%3 > 0}
		for range rng.IntN(6) * (n % 2) {
			c.Dividends = append(c.Dividends, pde.Dividend{Time: 1.1 * c.Time * rng.Float64(), Amount: within(rng, .1, 5)})
		}
		if n%5 == 0 {
			c.Convention = pde.Escrowed
		}
		vol := [2]float64{within(rng, .05, .8), within(rng, .05, .8)}
		for i := range 23 {
			v := vol[rng.IntN(2)]
			c.Strike = append(c.Strike, 100*math.Exp(5*v*math.Sqrt(c.Time)*(2*rng.Float64()-1)))
			c.Vol = append(c.Vol, v)
			if i == 7 {
				c.Strike[i] = c.Strike[3]
			}
		}
		if n%4 == 0 {
			c.Vol[7], c.Strike[9], c.Vol[11] = -1, math.NaN(), 0
		}
		var together, other pde.Results
		s.Solve(&c, &together)
		shuffled := c
		order := rng.Perm(len(c.Strike))[:15]
		shuffled.Strike, shuffled.Vol = nil, nil
		for _, i := range order {
			shuffled.Strike, shuffled.Vol = append(shuffled.Strike, c.Strike[i]), append(shuffled.Vol, c.Vol[i])
		}
		s.Solve(&shuffled, &other)
		for k, i := range order {
			if a, b := columns(&together, i), columns(&other, k); a != b {
				t.Errorf("%+v, line %d: %x, among others %x", c, i, a, b)
			}
		}
		coarse := slices.Max(together.Error)
		if coarse > 0 && slices.Min(together.Error) < .1*coarse {
			finer++
		}
		var wait sync.WaitGroup
		for part := range 2 {
			wait.Go(func() {
				var alone pde.Results
				for i := part; i < len(c.Strike); i += 2 {
					one := c
					one.Strike, one.Vol = c.Strike[i:i+1], c.Vol[i:i+1]
					s.Solve(&one, &alone)
					if a, b := columns(&together, i), columns(&alone, 0); a != b {
						t.Errorf("%+v, line %d: %x, alone %x", c, i, a, b)
					}
				}
			})
		}
		wait.Wait()
	}
	if finer < 10 {
		t.Errorf("only %d chains with lines on different levels", finer)
	}
}

// Values and sensitivities are smooth in the strike and in the spot: what a
// difference of the fourth order leaves of 600 of them, 0.05 % of the spot apart,
// is noise of the mesh. Units as in outputs.
func TestSmooth(t *testing.T) {
	four := []pde.Dividend{{Time: .1, Amount: 1}, {Time: .35, Amount: 1}, {Time: .6, Amount: 1}, {Time: .85, Amount: 1}}
	for _, c := range []struct {
		name     string
		sign     float64
		american bool
		allowed  [5]float64 // price, delta, gamma, theta, vega
	}{
		{"European", 1, false, [5]float64{1e-8, 1e-9, 5e-10, 1e-10, 1e-9}},
		{"American call", 1, true, [5]float64{4e-8, 1e-8, 2e-9, 1e-9, 2e-7}},
		{"American put", -1, true, [5]float64{1e-6, 4e-7, 1e-7, 4e-8, 5e-6}},
	} {
		const points = 600
		chain := pde.Chain{Spot: 100, Time: 1, Rate: .05, Yield: .01, Sign: c.sign, American: c.american, Dividends: four}
		for i := range points {
			chain.Strike, chain.Vol = append(chain.Strike, 85+.05*float64(i)), append(chain.Vol, .25)
		}
		var s pde.Solver
		var r pde.Results
		s.Solve(&chain, &r)
		var along [2][points][10]float64
		for i := range points {
			l := line{s: 100, k: 100, t: 1, r: .05, q: .01, v: .25, w: c.sign, american: c.american, divs: four}
			along[0][i] = outputs(row(&r, i), l)
			l.s = 85 + .05*float64(i)
			along[1][i] = outputs(solve(&s, l), l)
		}
		for by, v := range along {
			for k, output := range [5]int{0, 1, 2, 3, 5} {
				noise := 0.0
				for i := 2; i < points-2; i++ {
					x := func(d int) float64 { return v[i+d][output] }
					noise = max(noise, math.Abs(x(-2)-4*x(-1)+6*x(0)-4*x(1)+x(2))/16)
				}
				t.Logf("%s, by %s: %s %.1e of the spot", c.name, [2]string{"strike", "spot"}[by], outputNames[output], noise)
				if !(noise < c.allowed[k]) {
					t.Errorf("%s, by %s: %s %.2g of the spot, allowed %.1g", c.name, [2]string{"strike", "spot"}[by], outputNames[output], noise, c.allowed[k])
				}
			}
		}
	}
}

// Lines in any order are the chains that they make up, bit for bit.
func TestLines(t *testing.T) {
	rng := rand.New(rand.NewPCG(43, 44))
	var s pde.Solver
	terms := make([]line, 12)
	for i := range terms {
		terms[i] = random(rng)
		terms[i].american = rng.IntN(3) > 0
		for range rng.IntN(4) {
			terms[i].divs = append(terms[i].divs, pde.Dividend{Time: rng.Float64(), Amount: 3 * rng.Float64()})
		}
		if i%4 == 3 { // but for one of them as the term before
			terms[i] = terms[i-1]
			switch i {
			case 3:
				terms[i].divs = []pde.Dividend{{Time: .01, Amount: 1}}
			case 7:
				terms[i].american = !terms[i].american
			case 11:
				terms[i].w = -terms[i].w
			}
		}
	}
	terms[5].r = math.NaN()
	var l pde.Lines
	const n = 200
	for range n {
		x := terms[rng.IntN(len(terms))]
		l.Spot, l.Time, l.Vol, l.Rate = append(l.Spot, x.s), append(l.Time, x.t), append(l.Vol, x.v), append(l.Rate, x.r)
		l.Yield, l.Sign, l.American = append(l.Yield, x.q), append(l.Sign, x.w), append(l.American, x.american)
		l.Dividends = append(l.Dividends, slices.Clone(x.divs))
		l.Strike = append(l.Strike, float64(80+5*rng.IntN(9)))
	}
	var r, alone pde.Results
	s.SolveLines(&l, &r)
	for i := range n {
		one := line{s: l.Spot[i], k: l.Strike[i], t: l.Time[i], r: l.Rate[i], q: l.Yield[i], v: l.Vol[i], w: l.Sign[i], american: l.American[i], divs: l.Dividends[i]}
		s.Solve(one.chain(), &alone)
		if a, b := columns(&r, i), columns(&alone, 0); a != b {
			t.Errorf("line %d: %x, alone %x", i, a, b)
		}
	}
	if x := testing.AllocsPerRun(5, func() { s.SolveLines(&l, &r) }); x > 2 {
		t.Errorf("%v allocations", x)
	}
	l.Spot, l.Strike, l.Time, l.Vol, l.Rate, l.Yield, l.Sign, l.American, l.Dividends = nil, nil, nil, nil, nil, nil, nil, nil, nil
	if s.SolveLines(&l, &r); len(r.Price) != 0 {
		t.Errorf("%d results of no lines", len(r.Price))
	}
}
