package pde

import "math"

func fma(x, y, z float64) float64 { return math.FMA(x, y, z) }

// The loops in which the time goes, each over all lanes of a run of nodes: the
// specification of every other form.

// payoffGeneric has V as it is at expiry, but for the kink.
func (g *grid) payoffGeneric() {
	for i := range g.s {
		for j := range lanes {
			g.v[i][j] = max(0, g.pay(i, j))
		}
	}
}

// explicitHeldGeneric is the right-hand side of the first stage, V + kL·V, at
// nodes from to until−1, eliminated from the far end; y is the eliminated value
// of the node after.
func (g *grid) explicitHeldGeneric(from, until int, y *row) {
	for i := until - 1; i >= from; i-- {
		a, b, c := &g.v[max(i-1, 0)], &g.v[i], &g.v[min(i+1, len(g.s)-1)]
		lo, di, up, f, inv, z := &g.lo[i], &g.di[i], &g.up[i], &g.f[i], &g.inv[i], &g.z[i]
		for j := range lanes {
			x := math.FMA(lo[j], a[j], math.FMA(up[j], c[j], float64((2-di[j])*b[j])))
			x = math.FMA(f[j], y[j], x)
			y[j] = x
			z[j] = x * inv[j]
		}
	}
}

// explicitExercisedGeneric is the same for the exercised nodes before until, whose
// values change by held if holding does not gain more.
func (g *grid) explicitExercisedGeneric(until int, y, held *row) {
	for i := until - 1; i >= 0; i-- {
		a, b, c := &g.v[max(i-1, 0)], &g.v[i], &g.v[min(i+1, len(g.s)-1)]
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
func (o *operator) factorGeneric(drift, halfVar, growth *row) {
	var inv, next row
	for i := len(o.s) - 1; i >= 0; i-- {
		a2, a1, c2, c1 := &o.lo2[i], &o.lo1[i], &o.up2[i], &o.up1[i]
		lo, di, up := &o.lo[i], &o.di[i], &o.up[i]
		fs, is, gs := &o.f[i], &o.inv[i], &o.g[i]
		for j := range lanes {
			a := math.FMA(drift[j], a1[j], float64(halfVar[j]*a2[j]))
			c := math.FMA(drift[j], c1[j], float64(halfVar[j]*c2[j]))
			d := growth[j] + (a + c)
			f := float64(c * inv[j])
			v := 1 / (d - float64(f*next[j]))
			inv[j], next[j] = v, a
			lo[j], di[j], up[j] = a, d, c
			fs[j], is[j], gs[j] = f, v, float64(a*v)
		}
	}
}

// repeatGeneric has all lanes on one mesh.
func (r *rows) repeatGeneric(m *mesh) {
	for _, c := range r.of(m) {
		to := *c.to
		for i, x := range c.from {
			to[i] = all(x)
		}
	}
}

// explicitMixedGeneric is the right-hand side of the first stage at nodes that are
// exercised in some lanes and held in others; the first that is held sees, in
// place of the exercised value before it, the continuation of the held ones.
func (g *grid) explicitMixedGeneric(from, until int, y, held *row) {
	var exercised uint8
	for _, f := range g.first[until:] {
		exercised |= f
	}
	for i := until - 1; i >= from; i-- {
		a, b, c := &g.v[max(i-1, 0)], &g.v[i], &g.v[min(i+1, len(g.s)-1)]
		lo, di, up, f, inv, z := &g.lo[i], &g.di[i], &g.up[i], &g.f[i], &g.inv[i], &g.z[i]
		for j := range lanes {
			ghost := 0.0
			if g.first[i]>>j&1 > 0 {
				ghost = g.ghost[j]
			}
			x := math.FMA(lo[j], a[j]+ghost, math.FMA(up[j], c[j], float64((2-di[j])*b[j])))
			if e := b[j] + held[j]; x < e && exercised>>j&1 > 0 {
				x = e
			}
			x = math.FMA(f[j], y[j], x)
			y[j] = x
			z[j] = x * inv[j]
		}
		exercised |= g.first[i]
	}
}

// examineGeneric finds in which lanes nodes from from to until−1 are held, if all
// nodes before them are exercised; see search.
func (g *grid) examineGeneric(from, until int, offset *row) {
	for i := from; i < until; i++ {
		var held uint8
		for j := range lanes {
			c := g.cellAt(i, j, offset[j])
			if c.excess > 0 || c.excess > -float64(c.pull*c.gain) {
				held |= 1 << j
			}
		}
		g.held[i] = held
	}
}

// cellAt is the cell before node i of lane j.
func (g *grid) cellAt(i, j int, offset float64) edgeCell {
	pull := g.g[i][j] // 0 at the first node
	e := g.z[i][j] - (g.pay(i, j) + offset)
	return edgeCell{excess: math.FMA(pull, g.pay(max(i-1, 0), j)+offset, e), pull: pull, gain: g.gainOf(i, j, g.ratio2[i][j])}
}

// substituteMixedGeneric completes a stage up to node last, from where on all
// lanes are held, with exercised values before the first node that is held. There
// it finds the ghosts.
func (g *grid) substituteMixedGeneric(dst []row, from, last int, offset, x *row) {
	for i := range from {
		for j := range lanes {
			dst[i][j] = g.pay(i, j) + offset[j]
		}
	}
	var held uint8
	for i := from; i <= last; i++ {
		f, z, o := &g.g[i], &g.z[i], &dst[i]
		first := g.first[i]
		for j := range lanes {
			switch {
			case held>>j&1 > 0:
				x[j] = math.FMA(f[j], x[j], z[j])
			case first>>j&1 > 0:
				c := g.cellAt(i, j, offset[j])
				g.ghost[j] = c.ghost()
				x[j] = g.pay(i, j) + offset[j] + math.FMA(c.pull, g.ghost[j], c.excess)
			default:
				x[j] = g.pay(i, j) + offset[j]
			}
			o[j] = x[j]
		}
		held |= first
	}
}

// integrateUpGeneric is the running integral of V over the cells, from the first
// edge on.
func (g *grid) integrateUpGeneric() {
	var x row
	g.sum[0] = x
	for i := range g.span {
		v, o, h := &g.v[i], &g.sum[i+1], &g.span[i]
		for j := range lanes {
			x[j] = math.FMA(h[j], v[j], x[j])
			o[j] = x[j]
		}
	}
}

// integrateDownGeneric is the same from the last edge on.
func (g *grid) integrateDownGeneric() {
	var x row
	n := len(g.span)
	g.sum[n] = x
	for i := n - 1; i >= 0; i-- {
		v, o, h := &g.v[i], &g.sum[i], &g.span[i]
		for j := range lanes {
			x[j] = math.FMA(-h[j], v[j], x[j])
			o[j] = x[j]
		}
	}
}

// interpolateGeneric is the integral at the edges after a drop, all lanes being on
// one mesh, but for what comes from below it.
func (g *grid) interpolateGeneric() {
	d := &g.drops[0]
	for i := d.from; i < d.until; i++ {
		k, w, o := d.cell[i], &d.weight[i], &g.at[i]
		p, q, r, s := &g.sum[k], &g.sum[k+1], &g.sum[k+2], &g.sum[k+3]
		for j := range lanes {
			o[j] = math.FMA(w[3], s[j], math.FMA(w[2], r[j], math.FMA(w[1], q[j], float64(w[0]*p[j]))))
		}
	}
}

// interpolateEach is the same where each lane is on a mesh of its own.
func (g *grid) interpolateEach() {
	for j := range lanes {
		d := &g.drops[g.owner[j]]
		for i := d.from; i < d.until; i++ {
			w, s := &d.weight[i], g.sum[d.cell[i]:d.cell[i]+4]
			g.at[i][j] = math.FMA(w[3], s[3][j], math.FMA(w[2], s[2][j], math.FMA(w[1], s[1][j], float64(w[0]*s[0][j]))))
		}
	}
}

// differenceGeneric has V as the means over the cells of the integral at the edges.
func (g *grid) differenceGeneric() {
	for i := range g.perSpan {
		a, b, o, h := &g.at[i], &g.at[i+1], &g.v[i], &g.perSpan[i]
		for j := range lanes {
			o[j] = (b[j] - a[j]) * h[j]
		}
	}
}

// exceedGeneric has in z by how much exercise exceeds V, and adds that where it is
// positive; more tells the lanes.
func (g *grid) exceedGeneric() {
	for i := range g.s {
		g.more[i] = 0
		for j := range lanes {
			d := g.pay(i, j) + g.offset[j] - g.v[i][j]
			g.z[i][j] = d
			if d > 0 {
				g.more[i] |= 1 << j
				g.v[i][j] += d
			}
		}
	}
}
