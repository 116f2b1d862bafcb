package pde

// Constants of TR-BDF2 with γ = 2 − √2, the choice for which both stages solve
// with the same matrix and the method is L-stable.
const (
	gamma  = 0.58578643762690495119831127579 // 2 − √2
	bdfMid = 1.20710678118654752440084436210 // 1/(γ(2−γ)) = (1+√2)/2
	bdfOld = 0.20710678118654752440084436210 // (1−γ)²/(γ(2−γ)) = (√2−1)/2
)

// step goes back in time by dt. offsetMid and offset are what exercise brings
// beyond pay after γ·dt and after dt.
//
// Computes the trapezoidal rule to t−γ·dt, (I − kL)·V₁ = V₀ + k·∂V₀, k = ½γ·dt,
// then the second backward difference to t−dt, (I − kL)·V₂ = a·V₁ − b·V₀. ∂V₀ is
// the rate at which V₀ changes: L·V₀ where the option is held.
// Accuracy: second order, without oscillation after the kink of a payoff or an
// ex-date.
// Source: R. E. Bank et al., Transient simulation of silicon devices and
// circuits, IEEE Trans. CAD 4 (1985).
func (g *grid) step(dt, offsetMid, offset *row) {
	var k row
	for j := range lanes {
		k[j] = float64(0.5 * gamma * dt[j])
	}
	if k != g.k {
		g.factor(&k)
	}
	if g.right == anywhere {
		g.stepAnywhere(offsetMid, offset)
		return
	}
	// nodes before low are exercised in all lanes, nodes from high on in none
	low, high := 0, 0
	if g.right == oneSided {
		n := len(g.s)
		low = n
		for _, e := range g.edge {
			low, high = min(low, e+1), max(high, e+2)
		}
		high = min(high, n)
	}
	var y, held row
	for j := range lanes {
		held[j] = float64(0.5 * (offsetMid[j] - g.offset[j]))
	}
	g.explicitHeld(high, len(g.s), &y)
	g.explicitMixed(low, high, &y, &held)
	g.explicitExercised(low, &y, &held)
	g.substitute(g.mid, offsetMid)
	g.backwardDifference()
	g.v, g.prev = g.prev, g.v
	g.substitute(g.v, offset)
	g.offset = *offset
}

// trapezoid is V₀ + k·∂V₀ at a node where exercised prices may be any set.
//
// An exercised value changes as exercise does, unless holding would gain more.
// The difference across the edge sees, in place of an exercised value, the smooth
// continuation of the held ones.
func (g *grid) trapezoid(i, j int, offsetMid *row) float64 {
	a, b, c := g.v[max(i-1, 0)][j], g.v[i][j], g.v[min(i+1, len(g.s)-1)][j]
	a, c = a+g.any.before[i][j], c+g.any.after[i][j]
	x := fma(g.lo[i][j], a, fma(g.up[i][j], c, float64((2-g.di[i][j])*b)))
	if g.any.on[j][i] {
		x = max(x, b+float64(0.5*(offsetMid[j]-g.offset[j])))
	}
	return x
}
