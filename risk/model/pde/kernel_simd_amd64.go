//go:build goexperiment.simd && amd64

package pde

import (
	"simd/archsimd"

	"nightbook/risk/vec"
)

// The loops of kernel_generic.go with all lanes of a node in one AVX-512
// register. The steps are the same, in the same order, so the bits are too.

// wide says whether the vector forms are in use: where package vec uses its own.
var wide = vec.Tier() == "avx512"

func load(p *row) archsimd.Float64x8 { return archsimd.LoadFloat64x8(p) }

func (g *grid) explicitHeld(from, until int, y *row) {
	if !wide {
		g.explicitHeldGeneric(from, until, y)
		return
	}
	two, e := archsimd.BroadcastFloat64x8(2), load(y)
	if from < until {
		v, lo, di, up, f, inv, z := g.v[:until+1], g.lo[:until], g.di[:until], g.up[:until], g.f[:until], g.inv[:until], g.z[:until]
		b, c := load(&v[until-1]), load(&v[until])
		for i := until - 1; i >= from; i-- {
			a := load(&v[i-1])
			x := load(&lo[i]).MulAdd(a, load(&up[i]).MulAdd(c, two.Sub(load(&di[i])).Mul(b)))
			e = load(&f[i]).MulAdd(e, x)
			e.Mul(load(&inv[i])).Store(&z[i])
			b, c = a, b
		}
	}
	e.Store(y)
	archsimd.ClearAVXUpperBits()
}

func (g *grid) explicitExercised(from, until int, y, held *row) {
	if !wide {
		g.explicitExercisedGeneric(from, until, y, held)
		return
	}
	two, e, h := archsimd.BroadcastFloat64x8(2), load(y), load(held)
	if from < until {
		v, lo, di, up, f, inv, z := g.v[:until+1], g.lo[:until], g.di[:until], g.up[:until], g.f[:until], g.inv[:until], g.z[:until]
		b, c := load(&v[until-1]), load(&v[until])
		for i := until - 1; i >= from; i-- {
			a := load(&v[i-1])
			x := load(&lo[i]).MulAdd(a, load(&up[i]).MulAdd(c, two.Sub(load(&di[i])).Mul(b)))
			e = load(&f[i]).MulAdd(e, x.Max(b.Add(h)))
			e.Mul(load(&inv[i])).Store(&z[i])
			b, c = a, b
		}
	}
	e.Store(y)
	archsimd.ClearAVXUpperBits()
}

func (g *grid) backwardDifference() {
	if !wide {
		g.backwardDifferenceGeneric()
		return
	}
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

func (g *grid) substituteHeld(dst []row, from int, x *row) {
	if !wide {
		g.substituteHeldGeneric(dst, from, x)
		return
	}
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

func (g *grid) factorLanes(drift, halfVar, growth *row) {
	if !wide {
		g.factorGeneric(drift, halfVar, growth)
		return
	}
	n := len(g.s)
	lo1, up1, lo2, up2 := g.lo1[:n], g.up1[:n], g.lo2[:n], g.up2[:n]
	lo, di, up, fs, is, gs := g.lo[:n], g.di[:n], g.up[:n], g.f[:n], g.inv[:n], g.g[:n]
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

func (g *grid) blend(dst *row, v []row, w *[4]float64) {
	if !wide {
		blendGeneric(dst, v, w)
		return
	}
	x := archsimd.BroadcastFloat64x8(w[0]).Mul(load(&v[0]))
	x = archsimd.BroadcastFloat64x8(w[1]).MulAdd(load(&v[1]), x)
	x = archsimd.BroadcastFloat64x8(w[2]).MulAdd(load(&v[2]), x)
	archsimd.BroadcastFloat64x8(w[3]).MulAdd(load(&v[3]), x).Store(dst)
	archsimd.ClearAVXUpperBits()
}
