//go:build !(goexperiment.simd && amd64)

package pde

func (g *grid) payoff() { g.payoffGeneric() }

func (g *grid) explicitHeld(from, until int, y *row) { g.explicitHeldGeneric(from, until, y) }

func (g *grid) explicitExercised(until int, y, held *row) { g.explicitExercisedGeneric(until, y, held) }

func (g *grid) examine(from, until int, offset *row) { g.examineGeneric(from, until, offset) }

func (g *grid) backwardDifference() { g.backwardDifferenceGeneric() }

func (g *grid) substituteHeld(dst []row, from int, x *row) { g.substituteHeldGeneric(dst, from, x) }

func (r *rows) repeat(m *mesh) { r.repeatGeneric(m) }

func (o *operator) factorLanes(drift, halfVar, growth *row) { o.factorGeneric(drift, halfVar, growth) }

func (g *grid) explicitMixed(from, until int, y, held *row) {
	g.explicitMixedGeneric(from, until, y, held)
}

func (g *grid) substituteMixed(dst []row, from, last int, offset, x *row) {
	g.substituteMixedGeneric(dst, from, last, offset, x)
}

func (g *grid) integrateUp() { g.integrateUpGeneric() }

func (g *grid) integrateDown() { g.integrateDownGeneric() }

func (g *grid) interpolate() { g.interpolateGeneric() }

func (g *grid) difference() { g.differenceGeneric() }

func (g *grid) exceed() { g.exceedGeneric() }
