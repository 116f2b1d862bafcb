package pde

import "math"

func fma(x, y, z float64) float64 { return math.FMA(x, y, z) }

// The loops in which the time goes, each over all lanes of a run of nodes: the
// specification of every other form.

// explicitHeldGeneric is the right-hand side of the first stage, V + kL·V, at
// nodes from to until−1, eliminated from the far end; y is the eliminated value
// of the node after.
func (g *grid) explicitHeldGeneric(from, until int, y *row) {
	for i := until - 1; i >= from; i-- {
		a, b, c := &g.v[i-1], &g.v[i], &g.v[i+1]
		lo, di, up, f, inv, z := &g.lo[i], &g.di[i], &g.up[i], &g.f[i], &g.inv[i], &g.z[i]
		for j := range lanes {
			x := math.FMA(lo[j], a[j], math.FMA(up[j], c[j], float64((2-di[j])*b[j])))
			x = math.FMA(f[j], y[j], x)
			y[j] = x
			z[j] = x * inv[j]
		}
	}
}

// explicitExercisedGeneric is the same for exercised nodes, whose values change
// by held if holding does not gain more.
func (g *grid) explicitExercisedGeneric(from, until int, y, held *row) {
	for i := until - 1; i >= from; i-- {
		a, b, c := &g.v[i-1], &g.v[i], &g.v[i+1]
		lo, di, up, f, inv, z := &g.lo[i], &g.di[i], &g.up[i], &g.f[i], &g.inv[i], &g.z[i]
		for j := range lanes {
			x := math.FMA(lo[j], a[j], math.FMA(up[j], c[j], float64((2-di[j])*b[j])))
			if e := b[j] + held[j]; x < e {
				x = e
			}
			x = math.FMA(f[j], y[j], x)
			y[j] = x
			z[j] = x * inv[j]
		}
	}
}

// backwardDifferenceGeneric is the right-hand side of the second stage at all
// nodes, eliminated from the far end.
func (g *grid) backwardDifferenceGeneric() {
	var y row
	for i := len(g.s) - 1; i >= 0; i-- {
		b, m := &g.v[i], &g.mid[i]
		f, inv, z := &g.f[i], &g.inv[i], &g.z[i]
		for j := range lanes {
			x := math.FMA(bdfMid, m[j], float64(-bdfOld*b[j]))
			x = math.FMA(f[j], y[j], x)
			y[j] = x
			z[j] = x * inv[j]
		}
	}
}

// substituteHeldGeneric completes a stage from node from on; x is the value of
// the node before.
func (g *grid) substituteHeldGeneric(dst []row, from int, x *row) {
	for i := from; i < len(g.s); i++ {
		f, z, o := &g.g[i], &g.z[i], &dst[i]
		for j := range lanes {
			x[j] = math.FMA(f[j], x[j], z[j])
			o[j] = x[j]
		}
	}
}

// factorGeneric fills the rows (−lo, di, −up) of M = I − k·L and its factors:
// f = up/pivot of the node after, g = lo/pivot, inv = 1/pivot. Elimination goes
// from the far end, so that the last substitution begins on the side of exercise.
func (g *grid) factorGeneric(drift, halfVar, growth *row) {
	var inv, next row
	for i := len(g.s) - 1; i >= 0; i-- {
		a2, a1, c2, c1 := g.lo2[i], g.lo1[i], g.up2[i], g.up1[i]
		lo, di, up := &g.lo[i], &g.di[i], &g.up[i]
		fs, is, gs := &g.f[i], &g.inv[i], &g.g[i]
		for j := range lanes {
			a := math.FMA(drift[j], a1, float64(halfVar[j]*a2))
			c := math.FMA(drift[j], c1, float64(halfVar[j]*c2))
			d := growth[j] + (a + c)
			f := float64(c * inv[j])
			v := 1 / (d - float64(f*next[j]))
			inv[j], next[j] = v, a
			lo[j], di[j], up[j] = a, d, c
			fs[j], is[j], gs[j] = f, v, float64(a*v)
		}
	}
}

// blendGeneric is the weighted sum of four rows.
func blendGeneric(dst *row, v []row, w *[4]float64) {
	a, b, c, d := &v[0], &v[1], &v[2], &v[3]
	for j := range lanes {
		dst[j] = math.FMA(w[3], d[j], math.FMA(w[2], c[j], math.FMA(w[1], b[j], float64(w[0]*a[j]))))
	}
}
