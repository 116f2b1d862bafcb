//go:build goexperiment.simd && amd64

package pde

import "simd/archsimd"

// The loops of kernel_generic.go with all lanes of a node in one AVX-512
// register. The steps are the same, in the same order, so the bits are too.

func load(p *row) archsimd.Float64x8 { return archsimd.LoadFloat64x8(p) }

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

func (o *operator) factorLanes8(drift, halfVar, growth *row) {
	n := len(o.s)
	lo1, up1, lo2, up2 := o.lo1[:n], o.up1[:n], o.lo2[:n], o.up2[:n]
	lo, di, up, fs, is, gs := o.lo[:n], o.di[:n], o.up[:n], o.f[:n], o.inv[:n], o.g[:n]
	one := archsimd.BroadcastFloat64x8(1)
	var inv, next archsimd.Float64x8
	for i := n - 1; i >= 0; i-- {
		b, h := load(drift), load(halfVar)
		a := b.MulAdd(archsimd.BroadcastFloat64x8(lo1[i]), h.Mul(archsimd.BroadcastFloat64x8(lo2[i])))
		c := b.MulAdd(archsimd.BroadcastFloat64x8(up1[i]), h.Mul(archsimd.BroadcastFloat64x8(up2[i])))
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

func (g *grid) cell8(i int, offset, signYield, interest, perVar, zero archsimd.Float64x8) (c edge8) {
	c.exercise = archsimd.BroadcastFloat64x8(g.pay[i]).Add(offset)
	c.pull = load(&g.g[i])
	c.excess = c.pull.MulAdd(archsimd.BroadcastFloat64x8(g.pay[max(i-1, 0)]).Add(offset), load(&g.z[i]).Sub(c.exercise))
	x := signYield.Mul(archsimd.BroadcastFloat64x8(g.s[i])).Sub(interest)
	x = x.Mul(archsimd.BroadcastFloat64x8(g.ratio2[i]).Mul(perVar))
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
	dst, pay, f, z, first := dst[:n], g.pay[:n], g.g[:n], g.z[:n], g.first[:n]
	o, y, zero := load(offset), load(x), archsimd.BroadcastFloat64x8(0)
	for i := range from {
		archsimd.BroadcastFloat64x8(pay[i]).Add(o).Store(&dst[i])
	}
	var held uint8
	for i := from; i < n; i++ {
		y = load(&f[i]).MulAdd(y, load(&z[i]))
		y = y.Merge(archsimd.BroadcastFloat64x8(pay[i]).Add(o), archsimd.Mask64x8FromBits(held))
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
		x = archsimd.BroadcastFloat64x8(span[i]).MulAdd(load(&v[i]), x)
		x.Store(&sum[i+1])
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) integrateDown8() {
	n := len(g.span)
	span, v, sum := g.span[:n], g.v[:n], g.sum[:n+1]
	x := archsimd.BroadcastFloat64x8(0)
	x.Store(&sum[n])
	for i := n - 1; i >= 0; i-- {
		x = archsimd.BroadcastFloat64x8(-span[i]).MulAdd(load(&v[i]), x)
		x.Store(&sum[i])
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) remap8() {
	d := &g.drop
	n := len(g.perSpan)
	cell, weight, at := d.cell[:d.until], d.weight[:d.until], g.at[:n+1]
	for i := d.from; i < d.until; i++ {
		w, s := &weight[i], g.sum[cell[i]:cell[i]+4]
		x := archsimd.BroadcastFloat64x8(w[0]).Mul(load(&s[0]))
		x = archsimd.BroadcastFloat64x8(w[1]).MulAdd(load(&s[1]), x)
		x = archsimd.BroadcastFloat64x8(w[2]).MulAdd(load(&s[2]), x)
		archsimd.BroadcastFloat64x8(w[3]).MulAdd(load(&s[3]), x).Store(&at[i])
	}
	v, per := g.v[:n], g.perSpan[:n]
	a := load(&at[0])
	for i := range n {
		b := load(&at[i+1])
		b.Sub(a).Mul(archsimd.BroadcastFloat64x8(per[i])).Store(&v[i])
		a = b
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) exceed8() {
	n := len(g.s)
	pay, v, z, more := g.pay[:n], g.v[:n], g.z[:n], g.more[:n]
	o, zero := load(&g.offset), archsimd.BroadcastFloat64x8(0)
	for i := range n {
		x := load(&v[i])
		d := archsimd.BroadcastFloat64x8(pay[i]).Add(o).Sub(x)
		d.Store(&z[i])
		positive := d.Greater(zero)
		more[i] = positive.ToBits()
		x.Add(d).Merge(x, positive).Store(&v[i])
	}
	archsimd.ClearAVXUpperBits()
}
