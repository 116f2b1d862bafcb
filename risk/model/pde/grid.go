package pde

import "math"

// A sweep carries eight lanes. In Solve they are the option under its own
// parameters, under each of them a little higher and lower, and one lane that
// repeats the first; in Prices each is an option.
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

// all is x in every lane.
func all(x float64) row { return row{x, x, x, x, x, x, x, x} }

// terms are the coefficients of the equation in each lane.
type terms struct{ vol, rate, yield row }

// exercise is what the holder may do, and when.
type exercise int

const (
	never    exercise = iota // but at expiry
	oneSided                 // from a boundary to the end of the prices
	anywhere                 // at any prices
)

// grid is the state of one backward sweep of one line, or of a line in each lane.
type grid struct {
	*operator
	sign  float64
	right exercise

	// Exercise brings w(S−K) + offset, which in escrowed prices moves with time.
	strike   row
	offset   row
	interest row // on the strike, w·r·K

	worthless row // V at a price of 0, at the latest ex-date

	v, prev []row // values now and one step before

	// Nodes up to edge are exercised, none if it is −1; ghost is by how much the
	// smooth continuation of the held values exceeds exercise there. Where the
	// exercised prices may be any set, it is kept in any.
	edge  [lanes]int
	first []uint8 // the lanes, as bits, whose first held node this is
	ghost row
	any   scattered
}

// exercised reports whether node i of lane j is.
func (g *grid) exercised(i, j int) bool {
	return g.right == oneSided && i <= g.edge[j] || g.right == anywhere && g.any.on[j][i]
}

// moveEdge has nodes up to i exercised in lane j.
func (g *grid) moveEdge(j, i int) {
	g.first[g.edge[j]+1] &^= 1 << j
	g.first[i+1] |= 1 << j
	g.edge[j] = i
}

// pay is what exercise brings at node i of lane j, but for the offset.
func (g *grid) pay(i, j int) float64 { return float64(g.sign * (g.s[i][j] - g.strike[j])) }

// begin prepares the sweep of an option in each lane, at its expiry.
func (g *grid) begin(o *operator, sign float64, right exercise, strike *row) {
	g.operator, g.sign, g.right = o, sign, right
	n := len(g.s)
	g.v, g.prev = resize(g.v, n), resize(g.prev, n)
	g.first = resize(g.first, n+1)
	clear(g.first)
	g.first[0] = 1<<lanes - 1
	if g.right == anywhere {
		g.any.size(n)
	}
	g.strike, g.offset, g.ghost = *strike, row{}, row{}
	for j := range lanes {
		g.edge[j] = -1
		g.interest[j] = float64(float64(g.sign*g.rate[j]) * strike[j])
	}
	g.payoff()
	var past int
	var before, after float64
	for j := range lanes {
		if m, k := g.on[j], strike[j]; j == 0 || m != g.on[j-1] || k != strike[j-1] {
			before, after = 0, 0
			if past = m.beyond(k); past > 0 && past < n {
				before, after = m.kink(past, (k-m.s[past-1])/(m.s[past]-m.s[past-1]))
			}
		}
		if past > 0 && past < n {
			g.v[past-1][j] += before
			g.v[past][j] += after
		}
		g.moveEdge(j, past-1)
		if g.right == anywhere {
			for i := range n {
				g.any.on[j][i] = i < past
			}
		}
	}
}

// kink returns what the payoff at the nodes on either side of the strike, past
// being the second of them, is to be raised by, for the kink between them.
//
// Computes: between the nodes the linear interpolant of the payoff exceeds it by a
// triangle, which is taken off at its centroid; h²/8 is added at the strike, as
// much as the mean over a cell adds where the strike is a node. Mass and first
// moment are then those of the payoff wherever the strike lies, so the error is a
// smooth function of strike, spot and mesh; means over cells keep the mass alone,
// and the error jumps about by h³.
// Source: the idea in H.-O. Kreiss, V. Thomée, O. Widlund, Smoothing of initial
// data and rates of convergence for parabolic difference equations, Comm. Pure
// Appl. Math. 23 (1970); for options D. M. Pooley, K. R. Vetzal, P. A. Forsyth,
// Convergence remedies for non-smooth payoffs in option pricing, J. Computational
// Finance 6 (2003).
func (m *mesh) kink(past int, y float64) (before, after float64) {
	a, b := past-1, past
	h := m.s[b] - m.s[a]
	wa, wb := math.Abs(m.edges[a+1]-m.edges[a]), math.Abs(m.edges[b+1]-m.edges[b])
	added := 0.125 * (float64(float64(wa*wa)*(1-y)) + float64(float64(wb*wb)*y))
	excess := 0.5 * float64(float64(h*h)*float64(y*(1-y)))
	centroid := (1 + y) / 3
	before = (float64(added*(1-y)) - float64(excess*(1-centroid))) / wa
	after = (float64(added*y) - float64(excess*centroid)) / wb
	return before, after
}
