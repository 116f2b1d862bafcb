package pde

import "math"

// edgeCell is what is known of a node if all nodes before it are exercised, and it
// is held.
type edgeCell struct {
	excess float64 // over exercise, were the node before it worth just that
	gain   float64 // ½Γ·h², what a cell h of held values adds to exercise at its start
	pull   float64 // by how much a ghost at the node before raises the excess
}

// gain is that of node i of lane j, one end of a cell h.
//
// At the boundary of optimal exercise the value leaves the payoff smoothly,
// V − payoff ≈ ½Γ(S−B)², and the equation itself gives ½σ²S²Γ = w(qS − rK).
func (g *grid) gain(i, j int, h float64) float64 {
	x := h / g.s[i][j]
	return g.gainOf(i, j, float64(x*x))
}

// gainOf is gain for (h/S)².
func (g *grid) gainOf(i, j int, ratio2 float64) float64 {
	x := float64((float64(g.signYield[j]*g.s[i][j]) - g.interest[j]) * float64(ratio2*g.perVar[j]))
	if x > 0 {
		return x
	}
	return 0
}

// ghost places the boundary within the cell before a held node, at the share θ
// of it where excess + pull·gain·θ² = gain·(1−θ)², and returns gain·θ².
func (c *edgeCell) ghost() float64 {
	if c.excess >= c.gain {
		return 0
	}
	p := 1 - c.pull
	d := 1 - float64(p*(1-c.excess/c.gain))
	if !(d > 0) {
		d = 0
	}
	x := (1 - math.Sqrt(d)) / p
	return c.gain * float64(x*x)
}

// substitute completes a stage: exercised values up to the boundary, held ones
// beyond it.
//
// Computes the solution of the complementarity problem by substitution from the
// exercised side, which is right where the exercised prices reach from a boundary
// to the end of the mesh. Beyond the usual scheme it finds the boundary inside
// its cell: the held values see there not an exercised value but their own smooth
// continuation, so the error does not depend on how the boundary lies to the nodes.
// Source: M. J. Brennan & E. S. Schwartz, The valuation of American put options,
// J. Finance 32 (1977), for the substitution.
func (g *grid) substitute(dst []row, offset *row) {
	var x row
	from := 0
	if g.right == oneSided {
		low, high := g.search(offset)
		g.substituteMixed(dst, low, high, offset, &x)
		from = high + 1
	}
	g.substituteHeld(dst, from, &x)
}

// search moves the edges to where they are now, and returns the first nodes that
// are held in some lane and in all.
//
// A node is held, all nodes before it being exercised, if it is worth more than
// exercise, or would be if it saw the continuation; the last one always is.
func (g *grid) search(offset *row) (low, high int) {
	last := len(g.s) - 1
	from := min(g.edge[base]+1, last) // nodes from from to until−1 have been examined
	until := from
	held := func(i, j int) bool {
		if i < from {
			g.examine(i, from, offset)
			from = i
		}
		if i >= until {
			g.examine(until, i+1, offset)
			until = i + 1
		}
		return g.held[i]>>j&1 > 0
	}
	low = last
	for j := range lanes {
		i := min(g.edge[j]+1, last)
		if held(i, j) {
			for i > 0 && held(i-1, j) {
				i--
			}
		} else {
			for i++; i < last && !held(i, j); i++ {
			}
			i = min(i, last)
		}
		if i != g.edge[j]+1 {
			g.moveEdge(j, i-1)
		}
		low, high = min(low, i), max(high, i)
	}
	return low, high
}
