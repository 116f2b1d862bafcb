package american

import "math"

// valuesGeneric sums the European option and the premium
//
//	∫(a·e^(−az)·Φ(−d₋) − b·(S/K)·e^(−bz)·Φ(−d₊)) du
//
// and their derivatives. With κ = 1/(v√z), c as in Newton's method and β = b·B(u)·g,
// the integrand changes by c for ln B, −z·c for the drift, and so on.
func (s *block) valuesGeneric() {
	q, c := &s.quote, &s.curve
	a, b, v, invV := s.a[0], s.b[0], s.v[0], s.invV[0]
	e := s.price.n
	dm, dp := q.dm[e], q.dm[e]+v
	phi := q.density[e] * invSqrt2Pi
	g := float64(phi * invV)
	p, px := q.cash[e]-q.asset[e], 0-q.asset[e]
	pxx := px + g
	pxxx := math.FMA(0-g, float64(dm*invV), pxx)
	pa, pb, pv := 0-q.cash[e], q.asset[e], phi
	pxv := 0 - float64(g*dm)
	pvv := float64(g*dm) * dp
	for r := range e {
		weight, z, root, dm := s.price.weight[r], s.price.wait[r], s.price.root[r], q.dm[r]
		cash, asset := weight*q.cash[r], weight*q.asset[r]
		kappa := invV * s.price.invRoot[r]
		g := float64(s.price.density[r]*q.density[r]) * invV
		beta := float64(float64(b*c.boundary[r]) * g)
		cg := math.FMA(a, g, 0-beta)
		yield := float64(b * asset)
		dk := dm * kappa
		p = math.FMA(a, cash, p) - yield
		px = px - (yield + cg)
		u := beta - yield
		pxx += math.FMA(cg, dk, u)
		pxxx += math.FMA(cg, math.FMA(0-dk, dk, float64(kappa*kappa)), math.FMA(0-beta, dk, u))

		ta, tb, tv := c.tangent[0][r], c.tangent[1][r], c.tangent[2][r]
		pa = math.FMA(cash, math.FMA(0-a, z, 1), pa)
		pa = math.FMA(cg, ta-z, pa)
		pb = math.FMA(0-asset, math.FMA(0-b, z, 1), pb)
		pb = math.FMA(cg, tb+z, pb)
		vz := float64(v * root)
		dp := dm + vz
		dd := math.FMA(dm, dp, -1)
		bz := float64(beta * vz)
		both := math.FMA(cg, dp, bz)
		pv = math.FMA(root, both, pv)
		pv = math.FMA(cg, tv, pv)
		pull := float64(cg * dk)
		pxv -= math.FMA(math.FMA(cg, dd, float64(bz*dm)), invV, float64(pull*tv))
		pvv = math.FMA(math.FMA(dd, both, math.FMA(0-cg, dm, bz)), float64(root*invV), pvv)
		pvv = math.FMA(float64(float64(2*cg)*float64(dd*invV)), tv, pvv)
		pvv = math.FMA(pull-beta, float64(tv*tv), pvv)
		pvv = math.FMA(cg, c.second[r], pvv)
	}
	o := &q.value
	o.p[0], o.x[0], o.xx[0], o.xxx[0], o.a[0], o.b[0], o.v[0], o.xv[0], o.vv[0] = p, px, pxx, pxxx, pa, pb, pv, pxv, pvv
}
