//go:build goexperiment.simd && amd64

package pde

import "simd/archsimd"

// The loops of kernel_generic.go with the lanes of a node in two AVX2 registers.

type float4 = archsimd.Float64x4

func lower(p *row) float4 { return archsimd.LoadFloat64x4((*[4]float64)(p[:4])) }
func upper(p *row) float4 { return archsimd.LoadFloat64x4((*[4]float64)(p[4:])) }

func store4(p *row, a, b float4) {
	a.Store((*[4]float64)(p[:4]))
	b.Store((*[4]float64)(p[4:]))
}

func broadcast4(x float64) float4 { return archsimd.BroadcastFloat64x4(x) }

// maskRows has a row for every set of lanes, 1 in those that belong to it.
var maskRows = func() (m [1 << lanes]row) {
	for set := range m {
		for j := range lanes {
			m[set][j] = float64(set >> j & 1)
		}
	}
	return m
}()

func masks4(set uint8) (a, b archsimd.Mask64x4) {
	zero := broadcast4(0)
	return lower(&maskRows[set]).Greater(zero), upper(&maskRows[set]).Greater(zero)
}

func bits4(a, b archsimd.Mask64x4) uint8 { return a.ToBits() | b.ToBits()<<4 }

func (g *grid) payoff4() {
	n := len(g.s)
	s, v, zero := g.s[:n], g.v[:n], broadcast4(0)
	for i := range n {
		a, b := g.pay4(&s[i])
		store4(&v[i], a.Merge(zero, a.Greater(zero)), b.Merge(zero, b.Greater(zero)))
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) explicitHeld4(from, until int, y *row) {
	if from >= until {
		return
	}
	two, e0, e1 := broadcast4(2), lower(y), upper(y)
	v, lo, di, up, f, inv, z := g.v[:until], g.lo[:until], g.di[:until], g.up[:until], g.f[:until], g.inv[:until], g.z[:until]
	next := &g.v[min(until, len(g.v)-1)]
	b0, b1, c0, c1 := lower(&v[until-1]), upper(&v[until-1]), lower(next), upper(next)
	for i := until - 1; i >= from; i-- {
		before := &v[max(i-1, 0)]
		a0, a1 := lower(before), upper(before)
		x0 := lower(&lo[i]).MulAdd(a0, lower(&up[i]).MulAdd(c0, two.Sub(lower(&di[i])).Mul(b0)))
		x1 := upper(&lo[i]).MulAdd(a1, upper(&up[i]).MulAdd(c1, two.Sub(upper(&di[i])).Mul(b1)))
		e0, e1 = lower(&f[i]).MulAdd(e0, x0), upper(&f[i]).MulAdd(e1, x1)
		store4(&z[i], e0.Mul(lower(&inv[i])), e1.Mul(upper(&inv[i])))
		b0, b1, c0, c1 = a0, a1, b0, b1
	}
	store4(y, e0, e1)
	archsimd.ClearAVXUpperBits()
}

func (g *grid) explicitMixed4(from, until int, y, held *row) {
	if from >= until {
		return
	}
	var exercised uint8
	for _, f := range g.first[until:] {
		exercised |= f
	}
	two, e0, e1 := broadcast4(2), lower(y), upper(y)
	h0, h1, g0, g1 := lower(held), upper(held), lower(&g.ghost), upper(&g.ghost)
	v, lo, di, up, f, inv, z := g.v[:until], g.lo[:until], g.di[:until], g.up[:until], g.f[:until], g.inv[:until], g.z[:until]
	first := g.first[:until]
	next := &g.v[min(until, len(g.v)-1)]
	b0, b1, c0, c1 := lower(&v[until-1]), upper(&v[until-1]), lower(next), upper(next)
	for i := until - 1; i >= from; i-- {
		before := &v[max(i-1, 0)]
		a0, a1 := lower(before), upper(before)
		m0, m1 := masks4(first[i])
		x0 := lower(&lo[i]).MulAdd(a0.Add(g0.Masked(m0)), lower(&up[i]).MulAdd(c0, two.Sub(lower(&di[i])).Mul(b0)))
		x1 := upper(&lo[i]).MulAdd(a1.Add(g1.Masked(m1)), upper(&up[i]).MulAdd(c1, two.Sub(upper(&di[i])).Mul(b1)))
		w0, w1 := b0.Add(h0), b1.Add(h1)
		m0, m1 = masks4(exercised)
		x0, x1 = w0.Merge(x0, x0.Less(w0).And(m0)), w1.Merge(x1, x1.Less(w1).And(m1))
		e0, e1 = lower(&f[i]).MulAdd(e0, x0), upper(&f[i]).MulAdd(e1, x1)
		store4(&z[i], e0.Mul(lower(&inv[i])), e1.Mul(upper(&inv[i])))
		exercised |= first[i]
		b0, b1, c0, c1 = a0, a1, b0, b1
	}
	store4(y, e0, e1)
	archsimd.ClearAVXUpperBits()
}

func (g *grid) explicitExercised4(until int, y, held *row) {
	if until == 0 {
		return
	}
	two, e0, e1, h0, h1 := broadcast4(2), lower(y), upper(y), lower(held), upper(held)
	v, lo, di, up, f, inv, z := g.v[:until], g.lo[:until], g.di[:until], g.up[:until], g.f[:until], g.inv[:until], g.z[:until]
	next := &g.v[min(until, len(g.v)-1)]
	b0, b1, c0, c1 := lower(&v[until-1]), upper(&v[until-1]), lower(next), upper(next)
	for i := until - 1; i >= 0; i-- {
		before := &v[max(i-1, 0)]
		a0, a1 := lower(before), upper(before)
		x0 := lower(&lo[i]).MulAdd(a0, lower(&up[i]).MulAdd(c0, two.Sub(lower(&di[i])).Mul(b0)))
		x1 := upper(&lo[i]).MulAdd(a1, upper(&up[i]).MulAdd(c1, two.Sub(upper(&di[i])).Mul(b1)))
		w0, w1 := b0.Add(h0), b1.Add(h1)
		x0, x1 = w0.Merge(x0, x0.Less(w0)), w1.Merge(x1, x1.Less(w1))
		e0, e1 = lower(&f[i]).MulAdd(e0, x0), upper(&f[i]).MulAdd(e1, x1)
		store4(&z[i], e0.Mul(lower(&inv[i])), e1.Mul(upper(&inv[i])))
		b0, b1, c0, c1 = a0, a1, b0, b1
	}
	store4(y, e0, e1)
	archsimd.ClearAVXUpperBits()
}

func (g *grid) backwardDifference4() {
	n := len(g.s)
	v, mid, f, inv, z := g.v[:n], g.mid[:n], g.f[:n], g.inv[:n], g.z[:n]
	m, o := broadcast4(bdfMid), broadcast4(-bdfOld)
	e0, e1 := broadcast4(0), broadcast4(0)
	for i := n - 1; i >= 0; i-- {
		e0 = lower(&f[i]).MulAdd(e0, m.MulAdd(lower(&mid[i]), o.Mul(lower(&v[i]))))
		e1 = upper(&f[i]).MulAdd(e1, m.MulAdd(upper(&mid[i]), o.Mul(upper(&v[i]))))
		store4(&z[i], e0.Mul(lower(&inv[i])), e1.Mul(upper(&inv[i])))
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) substituteHeld4(dst []row, from int, x *row) {
	n := len(g.s)
	f, z, dst := g.g[:n], g.z[:n], dst[:n]
	a, b := lower(x), upper(x)
	for i := from; i < n; i++ {
		a, b = lower(&f[i]).MulAdd(a, lower(&z[i])), upper(&f[i]).MulAdd(b, upper(&z[i]))
		store4(&dst[i], a, b)
	}
	store4(x, a, b)
	archsimd.ClearAVXUpperBits()
}

func (r *rows) repeat4(m *mesh) {
	n := len(m.s)
	for _, c := range r.of(m) {
		to, from := (*c.to)[:n], c.from[:n]
		for i := range n {
			x := broadcast4(from[i])
			store4(&to[i], x, x)
		}
	}
	archsimd.ClearAVXUpperBits()
}

func (o *operator) factorLanes4(drift, halfVar, growth *row) {
	n := len(o.s)
	lo1, up1, lo2, up2 := o.lo1[:n], o.up1[:n], o.lo2[:n], o.up2[:n]
	lo, di, up, fs, is, gs := o.lo[:n], o.di[:n], o.up[:n], o.f[:n], o.inv[:n], o.g[:n]
	one := broadcast4(1)
	b0, b1, h0, h1, r0, r1 := lower(drift), upper(drift), lower(halfVar), upper(halfVar), lower(growth), upper(growth)
	var inv0, inv1, next0, next1 float4
	for i := n - 1; i >= 0; i-- {
		a0, a1 := b0.MulAdd(lower(&lo1[i]), h0.Mul(lower(&lo2[i]))), b1.MulAdd(upper(&lo1[i]), h1.Mul(upper(&lo2[i])))
		c0, c1 := b0.MulAdd(lower(&up1[i]), h0.Mul(lower(&up2[i]))), b1.MulAdd(upper(&up1[i]), h1.Mul(upper(&up2[i])))
		d0, d1 := r0.Add(a0.Add(c0)), r1.Add(a1.Add(c1))
		f0, f1 := c0.Mul(inv0), c1.Mul(inv1)
		inv0, inv1 = one.Div(d0.Sub(f0.Mul(next0))), one.Div(d1.Sub(f1.Mul(next1)))
		next0, next1 = a0, a1
		store4(&lo[i], a0, a1)
		store4(&di[i], d0, d1)
		store4(&up[i], c0, c1)
		store4(&fs[i], f0, f1)
		store4(&is[i], inv0, inv1)
		store4(&gs[i], a0.Mul(inv0), a1.Mul(inv1))
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) integrateUp4() {
	n := len(g.span)
	span, v, sum := g.span[:n], g.v[:n], g.sum[:n+1]
	a, b := broadcast4(0), broadcast4(0)
	store4(&sum[0], a, b)
	for i := range n {
		a, b = lower(&span[i]).MulAdd(lower(&v[i]), a), upper(&span[i]).MulAdd(upper(&v[i]), b)
		store4(&sum[i+1], a, b)
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) integrateDown4() {
	n := len(g.span)
	span, v, sum := g.span[:n], g.v[:n], g.sum[:n+1]
	zero := broadcast4(0)
	a, b := zero, zero
	store4(&sum[n], a, b)
	for i := n - 1; i >= 0; i-- {
		a, b = zero.Sub(lower(&span[i])).MulAdd(lower(&v[i]), a), zero.Sub(upper(&span[i])).MulAdd(upper(&v[i]), b)
		store4(&sum[i], a, b)
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) interpolate4() {
	d := &g.drops[0]
	cell, weight, at := d.cell[:d.until], d.weight[:d.until], g.at[:d.until]
	for i := d.from; i < d.until; i++ {
		w, s := &weight[i], g.sum[cell[i]:cell[i]+4]
		w0, w1, w2, w3 := broadcast4(w[0]), broadcast4(w[1]), broadcast4(w[2]), broadcast4(w[3])
		store4(&at[i],
			w3.MulAdd(lower(&s[3]), w2.MulAdd(lower(&s[2]), w1.MulAdd(lower(&s[1]), w0.Mul(lower(&s[0]))))),
			w3.MulAdd(upper(&s[3]), w2.MulAdd(upper(&s[2]), w1.MulAdd(upper(&s[1]), w0.Mul(upper(&s[0]))))))
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) difference4() {
	n := len(g.perSpan)
	v, per, at := g.v[:n], g.perSpan[:n], g.at[:n+1]
	a0, a1 := lower(&at[0]), upper(&at[0])
	for i := range n {
		b0, b1 := lower(&at[i+1]), upper(&at[i+1])
		store4(&v[i], b0.Sub(a0).Mul(lower(&per[i])), b1.Sub(a1).Mul(upper(&per[i])))
		a0, a1 = b0, b1
	}
	archsimd.ClearAVXUpperBits()
}

func (g *grid) exceed4() {
	n := len(g.s)
	s, v, z, more := g.s[:n], g.v[:n], g.z[:n], g.more[:n]
	o0, o1, zero := lower(&g.offset), upper(&g.offset), broadcast4(0)
	for i := range n {
		p0, p1 := g.pay4(&s[i])
		x0, x1 := lower(&v[i]), upper(&v[i])
		d0, d1 := p0.Add(o0).Sub(x0), p1.Add(o1).Sub(x1)
		store4(&z[i], d0, d1)
		m0, m1 := d0.Greater(zero), d1.Greater(zero)
		more[i] = bits4(m0, m1)
		store4(&v[i], x0.Add(d0).Merge(x0, m0), x1.Add(d1).Merge(x1, m1))
	}
	archsimd.ClearAVXUpperBits()
}

// pay4 is pay in all lanes.
func (g *grid) pay4(s *row) (a, b float4) {
	sign := broadcast4(g.sign)
	return sign.Mul(lower(s).Sub(lower(&g.strike))), sign.Mul(upper(s).Sub(upper(&g.strike)))
}

// cell4 is one half of the cell before a node; see edgeCell. Exercise brings there
// here + offset, and at the node before it before + offset.
func cell4(here, before, s, ratio2, f, z, offset, signYield, interest, perVar float4) (exercise, excess, gain float4) {
	zero := broadcast4(0)
	exercise = here.Add(offset)
	excess = f.MulAdd(before.Add(offset), z.Sub(exercise))
	x := signYield.Mul(s).Sub(interest).Mul(ratio2.Mul(perVar))
	return exercise, excess, x.Merge(zero, x.Greater(zero))
}

func (g *grid) examine4(from, until int, offset *row) {
	zero := broadcast4(0)
	for i := from; i < until; i++ {
		f0, f1 := lower(&g.g[i]), upper(&g.g[i])
		here0, here1 := g.pay4(&g.s[i])
		before0, before1 := g.pay4(&g.s[max(i-1, 0)])
		_, e0, n0 := cell4(here0, before0, lower(&g.s[i]), lower(&g.ratio2[i]), f0, lower(&g.z[i]), lower(offset), lower(&g.signYield), lower(&g.interest), lower(&g.perVar))
		_, e1, n1 := cell4(here1, before1, upper(&g.s[i]), upper(&g.ratio2[i]), f1, upper(&g.z[i]), upper(offset), upper(&g.signYield), upper(&g.interest), upper(&g.perVar))
		g.held[i] = bits4(e0.Greater(zero).Or(e0.Greater(zero.Sub(f0.Mul(n0)))), e1.Greater(zero).Or(e1.Greater(zero.Sub(f1.Mul(n1)))))
	}
	archsimd.ClearAVXUpperBits()
}

// ghost4 is ghost for one half.
func ghost4(excess, pull, gain float4) float4 {
	zero, one := broadcast4(0), broadcast4(1)
	p := one.Sub(pull)
	d := one.Sub(p.Mul(one.Sub(excess.Div(gain))))
	d = d.Merge(zero, d.Greater(zero))
	share := one.Sub(d.Sqrt()).Div(p)
	return zero.Merge(gain.Mul(share.Mul(share)), excess.GreaterEqual(gain))
}

func (g *grid) substituteMixed4(dst []row, from, last int, offset, x *row) {
	n := last + 1
	dst, s, f, z, first := dst[:n], g.s[:n], g.g[:n], g.z[:n], g.first[:n]
	o0, o1, y0, y1 := lower(offset), upper(offset), lower(x), upper(x)
	for i := range from {
		p0, p1 := g.pay4(&s[i])
		store4(&dst[i], p0.Add(o0), p1.Add(o1))
	}
	var held uint8
	for i := from; i < n; i++ {
		f0, f1, z0, z1 := lower(&f[i]), upper(&f[i]), lower(&z[i]), upper(&z[i])
		here0, here1 := g.pay4(&s[i])
		m0, m1 := masks4(held)
		y0, y1 = f0.MulAdd(y0, z0).Merge(here0.Add(o0), m0), f1.MulAdd(y1, z1).Merge(here1.Add(o1), m1)
		if first[i] != 0 {
			m0, m1 = masks4(first[i])
			before0, before1 := g.pay4(&s[max(i-1, 0)])
			p0, e0, n0 := cell4(here0, before0, lower(&s[i]), lower(&g.ratio2[i]), f0, z0, o0, lower(&g.signYield), lower(&g.interest), lower(&g.perVar))
			p1, e1, n1 := cell4(here1, before1, upper(&s[i]), upper(&g.ratio2[i]), f1, z1, o1, upper(&g.signYield), upper(&g.interest), upper(&g.perVar))
			g0, g1 := ghost4(e0, f0, n0), ghost4(e1, f1, n1)
			y0, y1 = p0.Add(f0.MulAdd(g0, e0)).Merge(y0, m0), p1.Add(f1.MulAdd(g1, e1)).Merge(y1, m1)
			store4(&g.ghost, g0.Merge(lower(&g.ghost), m0), g1.Merge(upper(&g.ghost), m1))
			held |= first[i]
		}
		store4(&dst[i], y0, y1)
	}
	store4(x, y0, y1)
	archsimd.ClearAVXUpperBits()
}
