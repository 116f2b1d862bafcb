//go:build goexperiment.simd && amd64

package american

import "simd/archsimd"

// The loops of price_generic.go, values_generic.go and near_generic.go for eight
// lanes, in stages that keep their vectors in registers.

func (s *block) curveExponents8() {
	c, n := &s.curve, len(s.price.wait)
	hus, boundary, decayA, decayB := vectors8(c.hu)[:n], vectors8(c.boundary)[:n], vectors8(c.decayA)[:n], vectors8(c.decayB)[:n]
	floor, a, b := load8(&vectors8(s.floor)[0]), load8(&vectors8(s.a)[0]), load8(&vectors8(s.b)[0])
	least, last := floor.Mul(floor), load8(&vectors8(s.square)[s.points])
	var zero float8
	for r, z := range s.price.wait {
		hu := zero
		if r < s.price.n {
			hu = load8(&hus[r]).Max(least.Max(broadcast8(s.price.early[r]).Mul(last))).Sqrt()
		}
		hu.Store(&hus[r])
		zero.Sub(hu).Store(&boundary[r])
		zero.Sub(a.Mul(broadcast8(z))).Store(&decayA[r])
		zero.Sub(b.Mul(broadcast8(z))).Store(&decayB[r])
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) curveTangents8() {
	c, n := &s.curve, s.price.n
	hu, ta, tb, tv, second := vectors8(c.hu)[:n], vectors8(c.tangent[0])[:n], vectors8(c.tangent[1])[:n], vectors8(c.tangent[2])[:n], vectors8(c.second)[:n]
	one, negHalf := broadcast8(1), broadcast8(-0.5)
	for r := range hu {
		inv := one.Div(load8(&hu[r]))
		half := negHalf.Mul(inv)
		v := load8(&tv[r]).Mul(half)
		v.Mul(v).MulAdd(inv, load8(&second[r]).Mul(half)).Store(&second[r])
		load8(&ta[r]).Mul(half).Store(&ta[r])
		load8(&tb[r]).Mul(half).Store(&tb[r])
		v.Store(&tv[r])
	}
	s.touch8()
	archsimd.ClearAVXUpperBits()
}

// touch8 sets the touching boundary.
func (s *block) touch8() {
	t, n := &s.curve.now, s.points
	h, a, v := load8(&vectors8(s.h)[n-1]), load8(&vectors8(s.a)[0]), load8(&vectors8(s.v)[0])
	one, halfOne := broadcast8(1), broadcast8(0.5)
	var zero float8
	inv := one.Div(h)
	half := broadcast8(-0.5).Mul(inv)
	ta := load8(&vectors8(s.tangent[0])[n]).Mul(half)
	tb := load8(&vectors8(s.tangent[1])[n]).Mul(half)
	tv := load8(&vectors8(s.tangent[2])[n]).Mul(half)
	h.Store(&vectors8(t.h)[0])
	zero.Sub(h).Store(&vectors8(t.boundary)[0])
	ta.Store(&vectors8(t.tangent[0])[0])
	tb.Store(&vectors8(t.tangent[1])[0])
	tv.Store(&vectors8(t.tangent[2])[0])
	tv.Mul(tv).MulAdd(inv, load8(&vectors8(s.second)[n]).Mul(half)).Store(&vectors8(t.second)[0])
	drift := halfOne.Mul(v).MulAdd(tv.Sub(v), load8(&vectors8(s.b)[0]).MulAdd(tb.Sub(one), a.Mul(ta.Add(one))))
	drift.Store(&vectors8(t.drift)[0])
	speed := a.Add(a).MulAdd(v.Mul(v), drift.Mul(drift)).Sqrt()
	speed.Max(broadcast8(leastSpeed).Mul(v)).Store(&vectors8(t.speed)[0])
}

func (s *block) priceDistances8() {
	q, n := &s.quote, len(s.price.wait)
	dms, density, cash, asset, hu := vectors8(q.dm)[:n], vectors8(q.density)[:n], vectors8(q.cash)[:n], vectors8(q.asset)[:n], vectors8(s.curve.hu)[:n]
	root, invRoot := s.price.root[:n], s.price.invRoot[:n]
	a, v, invV, x := load8(&vectors8(s.a)[0]), load8(&vectors8(s.v)[0]), load8(&vectors8(s.invV)[0]), load8(&vectors8(q.x)[0])
	ab := a.Sub(load8(&vectors8(s.b)[0]))
	half, negHalf, lowest := broadcast8(0.5), broadcast8(-0.5), broadcast8(lowestExp)
	var zero float8
	for r, wait := range s.price.wait {
		z := broadcast8(wait)
		d := ab.MulAdd(z, x.Add(load8(&hu[r]))).Mul(invV.Mul(broadcast8(invRoot[r])))
		vz := v.Mul(broadcast8(root[r]))
		dm := vz.MulAdd(negHalf, d)
		dm.Store(&dms[r])
		zero.Sub(a.MulAdd(z, dm.Mul(half).Mul(dm))).Max(lowest).Store(&density[r])
		dm.Max(zero.Sub(dm)).Store(&cash[r])
		dp := dm.Add(vz)
		dp.Max(zero.Sub(dp)).Store(&asset[r])
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) nearDistances8() {
	q, t, n := &s.quote, &s.curve.now, len(s.price.wait)
	densities, cash, edge := vectors8(q.nearDensity)[:n+1], vectors8(q.nearCash)[:n], vectors8(q.edge)
	invRoot := s.price.invRoot[:n]
	a, invV := load8(&vectors8(s.a)[0]), load8(&vectors8(s.invV)[0])
	drift, speed := load8(&vectors8(t.drift)[0]), load8(&vectors8(t.speed)[0])
	half, lowest := broadcast8(0.5), broadcast8(lowestExp)
	var zero float8
	delta := load8(&vectors8(q.x)[0]).Add(load8(&vectors8(t.h)[0])).Max(zero)
	for r, wait := range s.price.wait {
		z := broadcast8(wait)
		d := drift.MulAdd(z, delta).Mul(invV.Mul(broadcast8(invRoot[r])))
		zero.Sub(a.MulAdd(z, d.Mul(half).Mul(d))).Max(lowest).Store(&densities[r])
		d.Max(zero.Sub(d)).Store(&cash[r])
	}
	zero.Sub(drift.Add(speed).Mul(invV).Mul(delta.Mul(invV))).Max(lowest).Store(&densities[n])
	gap := speed.Sub(delta)
	gap.Max(zero.Sub(gap)).Mul(invV).Store(&edge[0])
	speed.Add(delta).Mul(invV).Store(&edge[1])
	archsimd.ClearAVXUpperBits()
}

func (s *block) priceTails8() {
	q, c, n := &s.quote, &s.curve, len(s.price.wait)
	dms, density, cashes, assets := vectors8(q.dm)[:n], vectors8(q.density)[:n], vectors8(q.cash)[:n], vectors8(q.asset)[:n]
	boundary, decayA, decayB := vectors8(c.boundary)[:n], vectors8(c.decayA)[:n], vectors8(c.decayB)[:n]
	v, ratio := load8(&vectors8(s.v)[0]), load8(&vectors8(q.ratio)[0])
	var zero float8
	for r, root := range s.price.root {
		dm, x := load8(&dms[r]), load8(&density[r])
		cash := x.Mul(load8(&cashes[r]))
		cash.Merge(load8(&decayA[r]).Sub(cash), dm.Greater(zero)).Store(&cashes[r])
		asset := x.Mul(load8(&boundary[r])).Mul(load8(&assets[r]))
		dp := v.MulAdd(broadcast8(root), dm)
		asset.Merge(ratio.MulAdd(load8(&decayB[r]), zero.Sub(asset)), dp.Greater(zero)).Store(&assets[r])
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) values8() {
	s.valuesSpot8()
	s.valuesRates8()
	s.valuesVol8()
	s.valuesVolVol8()
	archsimd.ClearAVXUpperBits()
}

// valuesSpot8 sums the price and its derivatives in x, and sets carry and beta.
func (s *block) valuesSpot8() {
	q, e := &s.quote, s.price.n
	dms, densities, cashes, assets := vectors8(q.dm)[:e+1], vectors8(q.density)[:e+1], vectors8(q.cash)[:e+1], vectors8(q.asset)[:e+1]
	carry, betas, boundary := vectors8(q.carry)[:e], vectors8(q.beta)[:e], vectors8(s.curve.boundary)[:e]
	weight, density, invRoot := s.price.weight[:e], s.price.density[:e], s.price.invRoot[:e]
	a, b, iv := vectors8(s.a), vectors8(s.b), vectors8(s.invV)
	invV := load8(&iv[0])
	var zero float8
	dm := load8(&dms[e])
	g := load8(&densities[e]).Mul(broadcast8(invSqrt2Pi)).Mul(invV)
	p, px := load8(&cashes[e]).Sub(load8(&assets[e])), zero.Sub(load8(&assets[e]))
	pxx := px.Add(g)
	pxxx := zero.Sub(g).MulAdd(dm.Mul(invV), pxx)
	for r := range weight {
		w, invV := broadcast8(weight[r]), load8(&iv[0])
		kappa := invV.Mul(broadcast8(invRoot[r]))
		g := broadcast8(density[r]).Mul(load8(&densities[r])).Mul(invV)
		beta := load8(&b[0]).Mul(load8(&boundary[r])).Mul(g)
		c := load8(&a[0]).MulAdd(g, zero.Sub(beta))
		c.Store(&carry[r])
		beta.Store(&betas[r])
		yield := load8(&b[0]).Mul(w.Mul(load8(&assets[r])))
		p = load8(&a[0]).MulAdd(w.Mul(load8(&cashes[r])), p).Sub(yield)
		px = px.Sub(yield.Add(c))
		dk := load8(&dms[r]).Mul(kappa)
		u := beta.Sub(yield)
		pxx = pxx.Add(c.MulAdd(dk, u))
		pxxx = pxxx.Add(c.MulAdd(zero.Sub(dk).MulAdd(dk, kappa.Mul(kappa)), zero.Sub(beta).MulAdd(dk, u)))
	}
	o := &q.value
	p.Store(&vectors8(o.p)[0])
	px.Store(&vectors8(o.x)[0])
	pxx.Store(&vectors8(o.xx)[0])
	pxxx.Store(&vectors8(o.xxx)[0])
}

// valuesRates8 sums the derivatives in a and b.
func (s *block) valuesRates8() {
	q, c, e := &s.quote, &s.curve, s.price.n
	cashes, assets := vectors8(q.cash)[:e+1], vectors8(q.asset)[:e+1]
	carry, ta, tb := vectors8(q.carry)[:e], vectors8(c.tangent[0])[:e], vectors8(c.tangent[1])[:e]
	weight, wait := s.price.weight[:e], s.price.wait[:e]
	var zero float8
	one := broadcast8(1)
	minusA, minusB := zero.Sub(load8(&vectors8(s.a)[0])), zero.Sub(load8(&vectors8(s.b)[0]))
	pa, pb := zero.Sub(load8(&cashes[e])), load8(&assets[e])
	for r := range weight {
		w, z, cg := broadcast8(weight[r]), broadcast8(wait[r]), load8(&carry[r])
		pa = w.Mul(load8(&cashes[r])).MulAdd(minusA.MulAdd(z, one), pa)
		pa = cg.MulAdd(load8(&ta[r]).Sub(z), pa)
		pb = zero.Sub(w.Mul(load8(&assets[r]))).MulAdd(minusB.MulAdd(z, one), pb)
		pb = cg.MulAdd(load8(&tb[r]).Add(z), pb)
	}
	pa.Store(&vectors8(q.value.a)[0])
	pb.Store(&vectors8(q.value.b)[0])
}

// valuesVol8 sums the derivatives in v and in x and v.
func (s *block) valuesVol8() {
	q, c, e := &s.quote, &s.curve, s.price.n
	dms, carry, betas, tangent := vectors8(q.dm)[:e+1], vectors8(q.carry)[:e], vectors8(q.beta)[:e], vectors8(c.tangent[2])[:e]
	roots, invRoot := s.price.root[:e], s.price.invRoot[:e]
	v, iv := vectors8(s.v), vectors8(s.invV)
	var zero float8
	minusOne := broadcast8(-1)
	pv := load8(&vectors8(q.density)[e]).Mul(broadcast8(invSqrt2Pi))
	pxv := zero.Sub(pv.Mul(load8(&iv[0])).Mul(load8(&dms[e])))
	for r := range roots {
		dm, cg, root, tv := load8(&dms[r]), load8(&carry[r]), broadcast8(roots[r]), load8(&tangent[r])
		vz := load8(&v[0]).Mul(root)
		dp := dm.Add(vz)
		bz := load8(&betas[r]).Mul(vz)
		pv = cg.MulAdd(tv, root.MulAdd(cg.MulAdd(dp, bz), pv))
		invV := load8(&iv[0])
		pull := cg.Mul(dm.Mul(invV.Mul(broadcast8(invRoot[r]))))
		pxv = pxv.Sub(cg.MulAdd(dm.MulAdd(dp, minusOne), bz.Mul(dm)).MulAdd(invV, pull.Mul(tv)))
	}
	pv.Store(&vectors8(q.value.v)[0])
	pxv.Store(&vectors8(q.value.xv)[0])
}

// valuesVolVol8 sums the second derivative in v.
func (s *block) valuesVolVol8() {
	q, c, e := &s.quote, &s.curve, s.price.n
	dms, carry, betas := vectors8(q.dm)[:e+1], vectors8(q.carry)[:e], vectors8(q.beta)[:e]
	tangent, second := vectors8(c.tangent[2])[:e], vectors8(c.second)[:e]
	roots, invRoot := s.price.root[:e], s.price.invRoot[:e]
	v, iv := vectors8(s.v), vectors8(s.invV)
	var zero float8
	minusOne := broadcast8(-1)
	dm := load8(&dms[e])
	phi := load8(&vectors8(q.density)[e]).Mul(broadcast8(invSqrt2Pi))
	pvv := phi.Mul(load8(&iv[0])).Mul(dm).Mul(dm.Add(load8(&v[0])))
	for r := range roots {
		dm, cg, root, tv := load8(&dms[r]), load8(&carry[r]), broadcast8(roots[r]), load8(&tangent[r])
		vz := load8(&v[0]).Mul(root)
		dp := dm.Add(vz)
		dd := dm.MulAdd(dp, minusOne)
		bz := load8(&betas[r]).Mul(vz)
		invV := load8(&iv[0])
		pvv = dd.MulAdd(cg.MulAdd(dp, bz), zero.Sub(cg).MulAdd(dm, bz)).MulAdd(root.Mul(invV), pvv)
		pvv = cg.Add(cg).Mul(dd.Mul(invV)).MulAdd(tv, pvv)
		pull := cg.Mul(dm.Mul(invV.Mul(broadcast8(invRoot[r]))))
		pvv = pull.Sub(load8(&betas[r])).MulAdd(tv.Mul(tv), pvv)
		pvv = cg.MulAdd(load8(&second[r]), pvv)
	}
	pvv.Store(&vectors8(q.value.vv)[0])
}

func (s *block) refine8() {
	q, c, t, e := &s.quote, &s.curve, &s.curve.now, s.price.n
	densities, cashes, decayA := vectors8(q.nearDensity)[:e+2], vectors8(q.nearCash)[:e+1], vectors8(c.decayA)[:e+1]
	weight, density, invRoot, wait := s.price.weight[:e], s.price.density[:e], s.price.invRoot[:e], s.price.wait[:e]
	invVs, sums := vectors8(s.invV), vectors8(s.sums)[:4]
	drift := load8(&vectors8(t.drift)[0])
	var zero, f, g0, g1, g2 float8
	delta := load8(&vectors8(q.x)[0]).Add(load8(&vectors8(t.h)[0])).Max(zero)
	for r := range weight {
		invV := load8(&invVs[0])
		kappa := invV.Mul(broadcast8(invRoot[r]))
		d := drift.MulAdd(broadcast8(wait[r]), delta)
		x := load8(&densities[r])
		cash := x.Mul(load8(&cashes[r]))
		cash = cash.Merge(load8(&decayA[r]).Sub(cash), d.Greater(zero))
		f = broadcast8(weight[r]).MulAdd(cash, f)
		g := broadcast8(density[r]).Mul(x).Mul(invV)
		square := kappa.Mul(kappa)
		dk := d.Mul(square)
		g0 = g0.Add(g)
		g1 = zero.Sub(g).MulAdd(dk, g1)
		g2 = g.MulAdd(dk.MulAdd(dk, zero.Sub(square)), g2)
	}
	f.Store(&sums[0])
	g0.Store(&sums[1])
	g1.Store(&sums[2])
	g2.Store(&sums[3])
	s.correct8(delta)
	archsimd.ClearAVXUpperBits()
}

// correct8 ends refine8: sums holds F, G, G′ and G″ as the nodes have them.
func (s *block) correct8(delta float8) {
	q, t, e := &s.quote, &s.curve.now, s.price.n
	densities, sums := vectors8(q.nearDensity)[:e+2], vectors8(s.sums)[:4]
	a, invV, drift, speed := load8(&vectors8(s.a)[0]), load8(&vectors8(s.invV)[0]), load8(&vectors8(t.drift)[0]), load8(&vectors8(t.speed)[0])
	var zero float8
	density, square := load8(&densities[e]), invV.Mul(invV)
	forth := density.Mul(load8(&vectors8(q.edge)[0]))
	forth = load8(&densities[e+1]).Sub(forth).Merge(forth, speed.Greater(delta))
	back := density.Mul(load8(&vectors8(q.edge)[1]))
	turn := drift.Mul(square)
	exactG := forth.Sub(back).Div(speed)
	both := forth.Add(back)
	cash := density.Mul(load8(&vectors8(q.nearCash)[e]))
	cash = cash.Merge(load8(&vectors8(s.curve.decayA)[e]).Sub(cash), delta.Add(drift).Greater(zero))
	exactF := broadcast8(0.5).MulAdd(zero.Sub(drift).MulAdd(exactG, both), zero.Sub(cash)).Div(a)
	amount := zero.Sub(load8(&vectors8(s.b)[0])).MulAdd(load8(&vectors8(t.boundary)[0]), a)
	f := amount.Mul(exactF.Sub(load8(&sums[0])))
	f = f.Merge(zero, a.Greater(broadcast8(leastForF)))
	sigma := both.Mul(square)
	slope := zero.Sub(turn.MulAdd(exactG, sigma))
	rate := speed.Mul(square)
	last := broadcast8(2 * invSqrt2Pi).Mul(density).Mul(square.Mul(invV))
	sigmaSlope := zero.Sub(turn.MulAdd(sigma, rate.Mul(rate).MulAdd(exactG, last)))
	bend := zero.Sub(turn.MulAdd(slope, sigmaSlope))
	g0 := amount.Mul(exactG.Sub(load8(&sums[1])))
	g1 := amount.Mul(slope.Sub(load8(&sums[2])))
	g2 := amount.Mul(bend.Sub(load8(&sums[3])))

	o := &q.value
	change := func(column []float64, by float8) {
		p := &vectors8(column)[0]
		load8(p).Add(by).Store(p)
	}
	change(o.p, f)
	change(o.x, zero.Sub(g0))
	change(o.xx, zero.Sub(g1))
	change(o.xxx, zero.Sub(g2))
	ta, tb, tv := load8(&vectors8(t.tangent[0])[0]), load8(&vectors8(t.tangent[1])[0]), load8(&vectors8(t.tangent[2])[0])
	pa, pb, pv, pxv, pvv := &vectors8(o.a)[0], &vectors8(o.b)[0], &vectors8(o.v)[0], &vectors8(o.xv)[0], &vectors8(o.vv)[0]
	ta.MulAdd(g0, load8(pa)).Store(pa)
	tb.MulAdd(g0, load8(pb)).Store(pb)
	tv.MulAdd(g0, load8(pv)).Store(pv)
	tv.MulAdd(g1, load8(pxv)).Store(pxv)
	load8(&vectors8(t.second)[0]).MulAdd(g0, zero.Sub(tv.Mul(tv)).MulAdd(g1, load8(pvv))).Store(pvv)
}
