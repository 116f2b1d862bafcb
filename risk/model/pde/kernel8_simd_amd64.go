//go:build goexperiment.simd && amd64

package pde

import "simd/archsimd"

// The loops of kernel_generic.go with all lanes of a node in one AVX-512
// register. The steps are the same, in the same order, so the bits are too.

func load(p *row) archsimd.Float64x8 { return archsimd.LoadFloat64x8(p) }

func (g *grid) payoff8() {
	n := len(g.s)
	s, v := g.s[:n], g.v[:n]
	strike, sign, zero := load(&g.strike), archsimd.BroadcastFloat64x8(g.sign), archsimd.BroadcastFloat64x8(0)
	for i := range n {
		p := pay8(&s[i], strike, sign)
		p.Merge(zero, p.Greater(zero)).Store(&v[i])
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) explicitHeld8(from, until int, y *row) {
	if from >= until {
		return
	}
	two, e := archsimd.BroadcastFloat64x8(2), load(y)
	v, lo, di, up, f, inv, z := g.v[:until], g.lo[:until], g.di[:until], g.up[:until], g.f[:until], g.inv[:until], g.z[:until]
	b, c := load(&v[until-1]), load(&g.v[min(until, len(g.v)-1)])
	for i := until - 1; i >= from; i-- {
		a := load(&v[max(i-1, 0)])
		x := load(&lo[i]).MulAdd(a, load(&up[i]).MulAdd(c, two.Sub(load(&di[i])).Mul(b)))
		e = load(&f[i]).MulAdd(e, x)
		e.Mul(load(&inv[i])).Store(&z[i])
		b, c = a, b
	}
	e.Store(y)
	archsimd.ClearAVXUpperBits()
}

func (g *grid) explicitExercised8(until int, y, held *row) {
	if until == 0 {
		return
	}
	two, e, h := archsimd.BroadcastFloat64x8(2), load(y), load(held)
	v, lo, di, up, f, inv, z := g.v[:until], g.lo[:until], g.di[:until], g.up[:until], g.f[:until], g.inv[:until], g.z[:until]
	b, c := load(&v[until-1]), load(&g.v[min(until, len(g.v)-1)])
	for i := until - 1; i >= 0; i-- {
		a := load(&v[max(i-1, 0)])
		x := load(&lo[i]).MulAdd(a, load(&up[i]).MulAdd(c, two.Sub(load(&di[i])).Mul(b)))
		w := b.Add(h)
		e = load(&f[i]).MulAdd(e, w.Merge(x, x.Less(w)))
		e.Mul(load(&inv[i])).Store(&z[i])
		b, c = a, b
	}
	e.Store(y)
	archsimd.ClearAVXUpperBits()
}

func (g *grid) backwardDifference8() {
	n := len(g.s)
	v, mid, f, inv, z := g.v[:n], g.mid[:n], g.f[:n], g.inv[:n], g.z[:n]
	m, o := archsimd.BroadcastFloat64x8(bdfMid), archsimd.BroadcastFloat64x8(-bdfOld)
	e := archsimd.BroadcastFloat64x8(0)
	for i := n - 1; i >= 0; i-- {
		x := m.MulAdd(load(&mid[i]), o.Mul(load(&v[i])))
		e = load(&f[i]).MulAdd(e, x)
		e.Mul(load(&inv[i])).Store(&z[i])
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) substituteHeld8(dst []row, from int, x *row) {
	n := len(g.s)
	f, z, dst := g.g[:n], g.z[:n], dst[:n]
	y := load(x)
	for i := from; i < n; i++ {
		y = load(&f[i]).MulAdd(y, load(&z[i]))
		y.Store(&dst[i])
	}
	y.Store(x)
	archsimd.ClearAVXUpperBits()
}

func (r *rows) repeat8(m *mesh) {
	n := len(m.s)
	for _, c := range r.of(m) {
		to, from := (*c.to)[:n], c.from[:n]
		for i := range n {
			archsimd.BroadcastFloat64x8(from[i]).Store(&to[i])
		}
	}
	archsimd.ClearAVXUpperBits()
}

func (o *operator) factorLanes8(drift, halfVar, growth *row) {
	n := len(o.s)
	lo1, up1, lo2, up2 := o.lo1[:n], o.up1[:n], o.lo2[:n], o.up2[:n]
	lo, di, up, fs, is, gs := o.lo[:n], o.di[:n], o.up[:n], o.f[:n], o.inv[:n], o.g[:n]
	one := archsimd.BroadcastFloat64x8(1)
	var inv, next archsimd.Float64x8
	for i := n - 1; i >= 0; i-- {
		b, h := load(drift), load(halfVar)
		a := b.MulAdd(load(&lo1[i]), h.Mul(load(&lo2[i])))
		c := b.MulAdd(load(&up1[i]), h.Mul(load(&up2[i])))
		d := load(growth).Add(a.Add(c))
		f := c.Mul(inv)
		inv = one.Div(d.Sub(f.Mul(next)))
		next = a
		a.Store(&lo[i])
		d.Store(&di[i])
		c.Store(&up[i])
		f.Store(&fs[i])
		inv.Store(&is[i])
		a.Mul(inv).Store(&gs[i])
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) explicitMixed8(from, until int, y, held *row) {
	if from >= until {
		return
	}
	var exercised uint8
	for _, f := range g.first[until:] {
		exercised |= f
	}
	two, e, h, ghost := archsimd.BroadcastFloat64x8(2), load(y), load(held), load(&g.ghost)
	v, lo, di, up, f, inv, z := g.v[:until], g.lo[:until], g.di[:until], g.up[:until], g.f[:until], g.inv[:until], g.z[:until]
	first := g.first[:until]
	b, c := load(&v[until-1]), load(&g.v[min(until, len(g.v)-1)])
	for i := until - 1; i >= from; i-- {
		a := load(&v[max(i-1, 0)])
		x := load(&lo[i]).MulAdd(a.Add(ghost.Masked(archsimd.Mask64x8FromBits(first[i]))), load(&up[i]).MulAdd(c, two.Sub(load(&di[i])).Mul(b)))
		w := b.Add(h)
		x = w.Merge(x, x.Less(w).And(archsimd.Mask64x8FromBits(exercised)))
		e = load(&f[i]).MulAdd(e, x)
		e.Mul(load(&inv[i])).Store(&z[i])
		exercised |= first[i]
		b, c = a, b
	}
	e.Store(y)
	archsimd.ClearAVXUpperBits()
}

// edge8 is what the cell before a node is in all lanes; see edgeCell.
type edge8 struct{ exercise, excess, pull, gain archsimd.Float64x8 }

// pay8 is pay in all lanes.
func pay8(s *row, strike, sign archsimd.Float64x8) archsimd.Float64x8 {
	return sign.Mul(load(s).Sub(strike))
}

func (g *grid) cell8(i int, offset, signYield, interest, perVar, zero archsimd.Float64x8) (c edge8) {
	strike, sign := load(&g.strike), archsimd.BroadcastFloat64x8(g.sign)
	c.exercise = pay8(&g.s[i], strike, sign).Add(offset)
	c.pull = load(&g.g[i])
	c.excess = c.pull.MulAdd(pay8(&g.s[max(i-1, 0)], strike, sign).Add(offset), load(&g.z[i]).Sub(c.exercise))
	x := signYield.Mul(load(&g.s[i])).Sub(interest)
	x = x.Mul(load(&g.ratio2[i]).Mul(perVar))
	c.gain = x.Merge(zero, x.Greater(zero))
	return c
}

func (g *grid) examine8(from, until int, offset *row) {
	o, signYield, interest, perVar, zero := load(offset), load(&g.signYield), load(&g.interest), load(&g.perVar), archsimd.BroadcastFloat64x8(0)
	for i := from; i < until; i++ {
		c := g.cell8(i, o, signYield, interest, perVar, zero)
		g.held[i] = c.excess.Greater(zero).Or(c.excess.Greater(zero.Sub(c.pull.Mul(c.gain)))).ToBits()
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) substituteMixed8(dst []row, from, last int, offset, x *row) {
	n := last + 1
	dst, s, f, z, first := dst[:n], g.s[:n], g.g[:n], g.z[:n], g.first[:n]
	o, y, zero := load(offset), load(x), archsimd.BroadcastFloat64x8(0)
	strike, sign := load(&g.strike), archsimd.BroadcastFloat64x8(g.sign)
	for i := range from {
		pay8(&s[i], strike, sign).Add(o).Store(&dst[i])
	}
	var held uint8
	for i := from; i < n; i++ {
		y = load(&f[i]).MulAdd(y, load(&z[i]))
		y = y.Merge(pay8(&s[i], strike, sign).Add(o), archsimd.Mask64x8FromBits(held))
		if first[i] != 0 {
			here := archsimd.Mask64x8FromBits(first[i])
			c := g.cell8(i, o, load(&g.signYield), load(&g.interest), load(&g.perVar), zero)
			one := archsimd.BroadcastFloat64x8(1)
			p := one.Sub(c.pull)
			d := one.Sub(p.Mul(one.Sub(c.excess.Div(c.gain))))
			d = d.Merge(zero, d.Greater(zero))
			share := one.Sub(d.Sqrt()).Div(p)
			ghost := zero.Merge(c.gain.Mul(share.Mul(share)), c.excess.GreaterEqual(c.gain))
			ghost.Merge(load(&g.ghost), here).Store(&g.ghost)
			y = c.exercise.Add(c.pull.MulAdd(ghost, c.excess)).Merge(y, here)
			held |= first[i]
		}
		y.Store(&dst[i])
	}
	y.Store(x)
	archsimd.ClearAVXUpperBits()
}

func (g *grid) integrateUp8() {
	n := len(g.span)
	span, v, sum := g.span[:n], g.v[:n], g.sum[:n+1]
	x := archsimd.BroadcastFloat64x8(0)
	x.Store(&sum[0])
	for i := range n {
		x = load(&span[i]).MulAdd(load(&v[i]), x)
		x.Store(&sum[i+1])
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) integrateDown8() {
	n := len(g.span)
	span, v, sum := g.span[:n], g.v[:n], g.sum[:n+1]
	zero := archsimd.BroadcastFloat64x8(0)
	x := zero
	x.Store(&sum[n])
	for i := n - 1; i >= 0; i-- {
		x = zero.Sub(load(&span[i])).MulAdd(load(&v[i]), x)
		x.Store(&sum[i])
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) interpolate8() {
	d := &g.drops[0]
	cell, weight, at := d.cell[:d.until], d.weight[:d.until], g.at[:d.until]
	for i := d.from; i < d.until; i++ {
		w, s := &weight[i], g.sum[cell[i]:cell[i]+4]
		x := archsimd.BroadcastFloat64x8(w[0]).Mul(load(&s[0]))
		x = archsimd.BroadcastFloat64x8(w[1]).MulAdd(load(&s[1]), x)
		x = archsimd.BroadcastFloat64x8(w[2]).MulAdd(load(&s[2]), x)
		archsimd.BroadcastFloat64x8(w[3]).MulAdd(load(&s[3]), x).Store(&at[i])
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) difference8() {
	n := len(g.perSpan)
	v, per, at := g.v[:n], g.perSpan[:n], g.at[:n+1]
	a := load(&at[0])
	for i := range n {
		b := load(&at[i+1])
		b.Sub(a).Mul(load(&per[i])).Store(&v[i])
		a = b
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) exceed8() {
	n := len(g.s)
	s, v, z, more := g.s[:n], g.v[:n], g.z[:n], g.more[:n]
	o, zero := load(&g.offset), archsimd.BroadcastFloat64x8(0)
	strike, sign := load(&g.strike), archsimd.BroadcastFloat64x8(g.sign)
	for i := range n {
		x := load(&v[i])
		d := pay8(&s[i], strike, sign).Add(o).Sub(x)
		d.Store(&z[i])
		positive := d.Greater(zero)
		more[i] = positive.ToBits()
		x.Add(d).Merge(x, positive).Store(&v[i])
	}
	archsimd.ClearAVXUpperBits()
}
