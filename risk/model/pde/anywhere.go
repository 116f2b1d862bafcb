package pde

// Where the exercised prices may be any set: between two boundaries where rates
// are negative, or in pieces where a deep put is held for a dividend. Such lines
// are few, so a lane at a time.

// scattered is one lane of a stage whose exercised nodes may lie anywhere.
type scattered struct {
	on     [lanes][]bool // the exercised nodes of each lane
	rhs, x []float64
	pay    []float64 // what exercise brings
	// A held node is worth z + g·(the node before), the nodes after eliminated;
	// or nearZ + nearG·(the node after), the nodes before eliminated.
	z, g, nearZ, nearG []float64
	// By how much the smooth continuation of the held values exceeds exercise at
	// the exercised node before, and after, a held one.
	before, after []row
}

func (a *scattered) size(n int) {
	for _, p := range [...]*[]float64{&a.rhs, &a.x, &a.pay, &a.z, &a.g, &a.nearZ, &a.nearG} {
		*p = resize(*p, n)
	}
	a.before, a.after = resize(a.before, n), resize(a.after, n)
	clear(a.before)
	clear(a.after)
	for j := range a.on {
		a.on[j] = resize(a.on[j], n)
	}
}

// stepAnywhere is step for exercised prices anywhere.
func (g *grid) stepAnywhere(offsetMid, offset *row) {
	for j := range lanes {
		for i := range g.s {
			g.any.rhs[i] = g.trapezoid(i, j, offsetMid)
		}
		g.stageAnywhere(j, g.mid, offsetMid[j])
		for i := range g.s {
			g.any.rhs[i] = fma(bdfMid, g.mid[i][j], float64(-bdfOld*g.v[i][j]))
		}
		g.stageAnywhere(j, g.prev, offset[j])
	}
	g.v, g.prev = g.prev, g.v
	g.offset = *offset
}

// mostRounds bounds the rounds of a stage; two to four are the rule.
const mostRounds = 50

// stageAnywhere completes a stage of lane j.
//
// Computes the complementarity problem by policy iteration: given the exercised
// nodes, solve for the others; exercise those that fall short, release those that
// would rise above; until nothing changes. It begins with the nodes of the stage
// before. Then each boundary is found inside its cell, as in substitute.
// Source: R. A. Howard, Dynamic Programming and Markov Processes, 1960; for
// options P. A. Forsyth & K. R. Vetzal, SIAM J. Sci. Comput. 23 (2002).
func (g *grid) stageAnywhere(j int, dst []row, offset float64) {
	a, on := &g.any, g.any.on[j]
	n := len(g.s)
	for i, s := range g.on[j].s {
		a.pay[i] = float64(g.sign*(s-g.strike[j])) + offset
	}
	for range mostRounds {
		g.solveHeld(j)
		changed := false
		for i := range n {
			e := a.pay[i]
			short := e > a.x[i]
			if on[i] {
				rest := fma(g.lo[i][j], a.x[max(i-1, 0)], fma(g.up[i][j], a.x[min(i+1, n-1)], a.rhs[i]))
				short = float64(g.di[i][j]*e) >= rest
			}
			changed = changed || short != on[i]
			on[i] = short
		}
		if !changed {
			break
		}
	}
	// a last node before a boundary may be exercised only because the difference
	// there sees no continuation
	for i := range n {
		if !on[i] || a.pay[i] <= 0 {
			continue
		}
		if i > 0 && i < n-1 && on[i-1] && !on[i+1] {
			c := g.cellIf(i, i-1, i+1, j, g.lo[i][j], g.up[i][j], a.z, a.g)
			on[i] = c.excess <= -float64(c.pull*c.gain)
		} else if i > 0 && i < n-1 && on[i+1] && !on[i-1] {
			c := g.cellIf(i, i+1, i-1, j, g.up[i][j], g.lo[i][j], a.nearZ, a.nearG)
			on[i] = c.excess <= -float64(c.pull*c.gain)
			if !on[i] {
				break // the node before it is a boundary no more
			}
		}
	}
	g.solveHeld(j)
	for i := range n {
		a.before[i][j], a.after[i][j] = 0, 0
		if on[i] {
			continue
		}
		if i > 0 && on[i-1] {
			c := edgeCell{pull: a.g[i], gain: g.gain(i, j, g.s[i][j]-g.s[i-1][j])}
			c.excess = fma(c.pull, a.pay[i-1], a.z[i]) - a.pay[i]
			a.before[i][j] = c.ghost()
			a.rhs[i] = fma(g.lo[i][j], a.before[i][j], a.rhs[i])
		}
		if i < n-1 && on[i+1] {
			c := edgeCell{pull: a.nearG[i], gain: g.gain(i, j, g.s[i+1][j]-g.s[i][j])}
			c.excess = fma(c.pull, a.pay[i+1], a.nearZ[i]) - a.pay[i]
			a.after[i][j] = c.ghost()
			a.rhs[i] = fma(g.up[i][j], a.after[i][j], a.rhs[i])
		}
	}
	g.solveHeld(j)
	for i := range n {
		dst[i][j] = a.x[i]
	}
}

// cellIf is the cell of node i if it were held, its neighbour past exercised and
// its neighbour next held; weights are those of the two.
func (g *grid) cellIf(i, past, next, j int, pastWeight, nextWeight float64, z, h []float64) edgeCell {
	pivot := g.di[i][j] - float64(nextWeight*h[next])
	c := edgeCell{pull: pastWeight / pivot, gain: g.gain(i, j, g.s[i][j]-g.s[past][j])}
	c.excess = fma(c.pull, g.any.pay[past], fma(nextWeight, z[next], g.any.rhs[i])/pivot) - g.any.pay[i]
	return c
}

// solveHeld solves for the held nodes of lane j, from both ends.
func (g *grid) solveHeld(j int) {
	a, on := &g.any, g.any.on[j]
	n := len(g.s)
	var z, h float64
	for i := n - 1; i >= 0; i-- {
		pivot := g.di[i][j] - float64(g.up[i][j]*h)
		z, h = fma(g.up[i][j], z, a.rhs[i])/pivot, g.lo[i][j]/pivot
		if on[i] {
			z, h = a.pay[i], 0
		}
		a.z[i], a.g[i] = z, h
	}
	z, h = 0, 0
	for i := range n {
		pivot := g.di[i][j] - float64(g.lo[i][j]*h)
		z, h = fma(g.lo[i][j], z, a.rhs[i])/pivot, g.up[i][j]/pivot
		if on[i] {
			z, h = a.pay[i], 0
		}
		a.nearZ[i], a.nearG[i] = z, h
	}
	var x float64
	for i := range n {
		x = fma(a.g[i], x, a.z[i])
		a.x[i] = x
	}
}
