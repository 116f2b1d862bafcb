package pde

import "math"

// A sweep carries eight lanes: the option under its own parameters, under each
// of them a little higher and lower, and one lane that repeats the first.
const (
	base = iota
	volUp
	volDown
	rateUp
	rateDown
	yieldUp
	yieldDown
	spare
	lanes
)

type row = [lanes]float64

// terms are the coefficients of the equation in each lane.
type terms struct{ vol, rate, yield row }

// exercise is what the holder may do, and when.
type exercise int

const (
	never    exercise = iota // but at expiry
	oneSided                 // from a boundary to the end of the prices
	anywhere                 // at any prices
)

// grid is the state of one backward sweep, in prices over strike.
type grid struct {
	mesh
	terms
	sign  float64
	right exercise

	// Exercise brings pay + offset, which in escrowed prices moves with time.
	pay    []float64
	offset row

	v, prev, mid []row   // values now, one step and one stage before
	lo, di, up   []row   // the rows (−lo, di, −up) of M = I − k·L
	f, inv, g    []row   // the factors of M, from the far end
	z            []row   // a right-hand side, half solved
	sum          []row   // running integrals, see shift
	k            float64 // of M; 0 if there is none yet

	// Nodes up to edge are exercised, none if it is −1; ghost is by how much the
	// smooth continuation of the held values exceeds exercise there. Where the
	// exercised prices may be any set, it is kept in any.
	edge  [lanes]int
	ghost row
	any   scattered
}

// exercised reports whether node i of lane j is.
func (g *grid) exercised(i, j int) bool {
	return g.right == oneSided && i <= g.edge[j] || g.right == anywhere && g.any.on[j][i]
}

// open prepares the sweep of a normalised option, at its expiry.
//
// The node of the strike begins with the mean of the payoff over its cell, which
// keeps the error a smooth function of the mesh.
// Source: D. M. Pooley, K. R. Vetzal, P. A. Forsyth, Convergence remedies for
// non-smooth payoffs in option pricing, J. Computational Finance 6 (2003).
func (g *grid) open(l *layout, level int, strike float64) {
	g.place(l, level, g.sign)
	n := len(g.s)
	g.k = 0
	g.pay = resize(g.pay, n)
	for _, p := range [...]*[]row{&g.v, &g.prev, &g.mid, &g.lo, &g.di, &g.up, &g.f, &g.inv, &g.g, &g.z} {
		*p = resize(*p, n)
	}
	g.sum = resize(g.sum, n+1)
	if g.right == anywhere {
		g.any.size(n)
	}
	g.offset, g.ghost = row{}, row{}
	edge := -1
	for i, s := range g.s {
		p := float64(g.sign * (s - strike))
		g.pay[i] = p
		if p >= 0 {
			edge = i
		}
		v := positiveMean(float64(g.sign*(g.edges[i]-strike)), float64(g.sign*(g.edges[i+1]-strike)), p)
		for j := range lanes {
			g.v[i][j] = v
		}
	}
	for j := range lanes {
		g.edge[j] = edge
		if g.right == anywhere {
			for i := range n {
				g.any.on[j][i] = i <= edge
			}
		}
	}
}

// positiveMean is the mean of max(x, 0) over a cell in which x goes linearly
// from a to b; where x keeps its sign it is mid, or 0.
func positiveMean(a, b, mid float64) float64 {
	switch {
	case a >= 0 && b >= 0:
		return mid
	case a <= 0 && b <= 0:
		return 0
	}
	p := max(a, b)
	return float64(p*p) / (2 * math.Abs(a-b))
}

// factor sets up M = I − k·L and its factors.
func (g *grid) factor(k float64) {
	g.k = k
	var drift, halfVar, growth row
	for j := range lanes {
		drift[j] = float64(k * (g.rate[j] - g.yield[j]))
		halfVar[j] = float64(float64(0.5*k) * float64(g.vol[j]*g.vol[j]))
		growth[j] = 1 + float64(k*g.rate[j])
	}
	g.factorLanes(&drift, &halfVar, &growth)
}
