//go:build goexperiment.simd && amd64

package pde

import "nightbook/risk/vec"

// Which form of the loops is in use: that of package vec.
var (
	wide = vec.Tier() == "avx512"
	half = vec.Tier() == "avx2"
)

func (g *grid) payoff() {
	switch {
	case wide:
		g.payoff8()
	case half:
		g.payoff4()
	default:
		g.payoffGeneric()
	}
}

func (g *grid) explicitHeld(from, until int, y *row) {
	switch {
	case wide:
		g.explicitHeld8(from, until, y)
	case half:
		g.explicitHeld4(from, until, y)
	default:
		g.explicitHeldGeneric(from, until, y)
	}
}

func (g *grid) explicitExercised(until int, y, held *row) {
	switch {
	case wide:
		g.explicitExercised8(until, y, held)
	case half:
		g.explicitExercised4(until, y, held)
	default:
		g.explicitExercisedGeneric(until, y, held)
	}
}

func (g *grid) backwardDifference() {
	switch {
	case wide:
		g.backwardDifference8()
	case half:
		g.backwardDifference4()
	default:
		g.backwardDifferenceGeneric()
	}
}

func (g *grid) substituteHeld(dst []row, from int, x *row) {
	switch {
	case wide:
		g.substituteHeld8(dst, from, x)
	case half:
		g.substituteHeld4(dst, from, x)
	default:
		g.substituteHeldGeneric(dst, from, x)
	}
}

func (r *rows) repeat(m *mesh) {
	switch {
	case wide:
		r.repeat8(m)
	case half:
		r.repeat4(m)
	default:
		r.repeatGeneric(m)
	}
}

func (o *operator) factorLanes(drift, halfVar, growth *row) {
	switch {
	case wide:
		o.factorLanes8(drift, halfVar, growth)
	case half:
		o.factorLanes4(drift, halfVar, growth)
	default:
		o.factorGeneric(drift, halfVar, growth)
	}
}

func (g *grid) explicitMixed(from, until int, y, held *row) {
	switch {
	case wide:
		g.explicitMixed8(from, until, y, held)
	case half:
		g.explicitMixed4(from, until, y, held)
	default:
		g.explicitMixedGeneric(from, until, y, held)
	}
}

func (g *grid) examine(from, until int, offset *row) {
	switch {
	case wide:
		g.examine8(from, until, offset)
	case half:
		g.examine4(from, until, offset)
	default:
		g.examineGeneric(from, until, offset)
	}
}

func (g *grid) substituteMixed(dst []row, from, last int, offset, x *row) {
	switch {
	case wide:
		g.substituteMixed8(dst, from, last, offset, x)
	case half:
		g.substituteMixed4(dst, from, last, offset, x)
	default:
		g.substituteMixedGeneric(dst, from, last, offset, x)
	}
}

func (g *grid) integrateUp() {
	switch {
	case wide:
		g.integrateUp8()
	case half:
		g.integrateUp4()
	default:
		g.integrateUpGeneric()
	}
}

func (g *grid) integrateDown() {
	switch {
	case wide:
		g.integrateDown8()
	case half:
		g.integrateDown4()
	default:
		g.integrateDownGeneric()
	}
}

func (g *grid) interpolate() {
	switch {
	case wide:
		g.interpolate8()
	case half:
		g.interpolate4()
	default:
		g.interpolateGeneric()
	}
}

func (g *grid) difference() {
	switch {
	case wide:
		g.difference8()
	case half:
		g.difference4()
	default:
		g.differenceGeneric()
	}
}

func (g *grid) exceed() {
	switch {
	case wide:
		g.exceed8()
	case half:
		g.exceed4()
	default:
		g.exceedGeneric()
	}
}
