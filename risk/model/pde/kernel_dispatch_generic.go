//go:build !(goexperiment.simd && amd64)

package pde

func (g *grid) explicitHeld(from, until int, y *row) { g.explicitHeldGeneric(from, until, y) }

func (g *grid) explicitExercised(from, until int, y, held *row) {
	g.explicitExercisedGeneric(from, until, y, held)
}

func (g *grid) backwardDifference() { g.backwardDifferenceGeneric() }

func (g *grid) substituteHeld(dst []row, from int, x *row) { g.substituteHeldGeneric(dst, from, x) }

func (g *grid) factorLanes(drift, halfVar, growth *row) { g.factorGeneric(drift, halfVar, growth) }

func (g *grid) blend(dst *row, v []row, w *[4]float64) { blendGeneric(dst, v, w) }
