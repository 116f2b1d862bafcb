package pde

import "math"

// edgeCell is what is known of node i if all nodes before it are exercised.
type edgeCell struct {
	excess float64 // over exercise, were the node before it worth just that
	gain   float64 // ½Γ·h², what a cell h of held values adds to exercise at its start
	pull   float64 // by how much a ghost at the node before raises the excess
}

// cell examines node i of lane j, the first that is held.
//
// At the boundary of optimal exercise the value leaves the payoff smoothly,
// V − payoff ≈ ½Γ(S−B)², and the equation itself gives ½σ²S²Γ = w(qS − rK), K
// the strike, which is where pay is 0.
func (g *grid) cell(i, j int, offset float64) edgeCell {
	e := g.z[i][j] - (g.pay[i] + offset)
	if i == 0 {
		return edgeCell{excess: e}
	}
	c := edgeCell{pull: g.g[i][j]}
	c.excess = math.FMA(c.pull, g.pay[i-1]+offset, e)
	c.gain = g.gain(i, j, g.s[i]-g.s[i-1])
	return c
}

func (g *grid) gain(i, j int, h float64) float64 {
	s := g.s[i]
	strike := s - float64(g.sign*g.pay[i])
	x := h / float64(s*g.vol[j])
	return max(0, float64(g.sign*(float64(g.yield[j]*s)-float64(g.rate[j]*strike)))*float64(x*x))
}

// ghost places the boundary within the cell before a held node, at the share θ
// of it where excess + pull·gain·θ² = gain·(1−θ)², and returns gain·θ².
func (c *edgeCell) ghost() float64 {
	if c.excess >= c.gain {
		return 0
	}
	p := 1 - c.pull
	x := (1 - math.Sqrt(max(0, 1-float64(p*(1-c.excess/c.gain))))) / p
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
	if g.right != oneSided {
		g.substituteHeld(dst, 0, new(row))
		return
	}
	n := len(g.s)
	low, high := n, 0
	for j := range lanes {
		i := g.search(j, offset[j])
		low, high = min(low, i), max(high, i)
	}
	var x row
	for i := range low {
		for j := range lanes {
			x[j] = g.pay[i] + offset[j]
		}
		dst[i] = x
	}
	for i := low; i <= high; i++ {
		for j := range lanes {
			switch e := g.edge[j]; {
			case i <= e:
				x[j] = g.pay[i] + offset[j]
			case i == e+1:
				c := g.cell(i, j, offset[j])
				g.ghost[j] = c.ghost()
				x[j] = g.pay[i] + offset[j] + fma(c.pull, g.ghost[j], c.excess)
			default:
				x[j] = fma(g.g[i][j], x[j], g.z[i][j])
			}
		}
		dst[i] = x
	}
	g.substituteHeld(dst, high+1, &x)
}

// search moves the edge of lane j to where it is now, and returns the first node
// that is held, len(s)−1 if none is.
func (g *grid) search(j int, offset float64) int {
	n := len(g.s)
	i := min(g.edge[j]+1, n-1)
	if g.held(i, j, offset) {
		for i > 0 && g.held(i-1, j, offset) {
			i--
		}
	} else {
		for i++; i < n-1 && !g.held(i, j, offset); i++ {
		}
		i = min(i, n-1)
	}
	g.edge[j] = i - 1
	return i
}

// held reports whether the boundary lies before node i, all nodes before it being
// exercised: whether it is worth more than exercise, or would be if it saw the
// continuation.
func (g *grid) held(i, j int, offset float64) bool {
	e := g.z[i][j] - (g.pay[i] + offset)
	if i == 0 {
		return e > 0
	}
	pull := g.g[i][j]
	e = fma(pull, g.pay[i-1]+offset, e)
	return e > 0 || e > -float64(pull*g.gain(i, j, g.s[i]-g.s[i-1]))
}
