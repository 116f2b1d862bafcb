package american

import "math"

// Close to the boundary, δ = ln(S/B(1)) small, the integrands turn within a wait
// of δ²/v², which the nodes do not see; the derivatives in x have a peak there. So
// their sums are corrected by the error that they make for the touching boundary,
// for which the integrals
//
//	F = ∫e^(−az)·Φ(−(δ+μz)/(v√z)) dz,   G = −F′ = ∫e^(−az)·φ((δ+μz)/(v√z))/(v√z) dz,
//
// G′ and G″ (derivatives in δ) are known: with E = e^(−μδ/v²),
//
//	P = e^(−mδ/v²)·Φ((m−δ)/v),  Q = e^(mδ/v²)·Φ(−(m+δ)/v),
//	G = E(P−Q)/m,  Σ = E(P+Q)/v²,  G′ = −μG/v² − Σ,
//	Σ′ = −μΣ/v² − m²G/v⁴ − 2e^(−a)·φ((δ+μ)/v)/v³,  G″ = −μG′/v² − Σ′,
//	F = (½(v²Σ − μG) − e^(−a)·Φ(−(δ+μ)/v))/a.
//
// The difference of the true integrand has two orders of δ/v less of a peak. The
// result is taken as it is: for options far from the boundary both are 0.

// leastForF is the a below which F, a small difference over a, is left alone.
const leastForF = 1e-7

// nearDistancesGeneric sets |d₋| and the exponents for the touching boundary.
func (s *block) nearDistancesGeneric() {
	q, t := &s.quote, &s.curve.now
	a, invV := s.a[0], s.invV[0]
	delta, drift, speed := larger(q.x[0]+t.h[0], 0), t.drift[0], t.speed[0]
	for r, z := range s.price.wait {
		d := math.FMA(drift, z, delta) * float64(invV*s.price.invRoot[r])
		q.nearDensity[r] = larger(0-math.FMA(a, z, float64(d*0.5)*d), lowestExp)
		q.nearCash[r] = math.Abs(d)
	}
	q.nearDensity[s.price.n+1] = larger(0-float64(float64((drift+speed)*invV)*float64(delta*invV)), lowestExp)
	q.edge[0], q.edge[1] = math.Abs(speed-delta)*invV, (speed+delta)*invV
}

// refineGeneric corrects the values.
func (s *block) refineGeneric() {
	q, c, t := &s.quote, &s.curve, &s.curve.now
	a, invV := s.a[0], s.invV[0]
	delta, drift, speed := larger(q.x[0]+t.h[0], 0), t.drift[0], t.speed[0]
	e := s.price.n
	var f, g0, g1, g2 float64
	for r := range e {
		kappa := invV * s.price.invRoot[r]
		d := math.FMA(drift, s.price.wait[r], delta)
		cash := float64(q.nearDensity[r] * q.nearCash[r])
		if !(d > 0) {
			cash = c.decayA[r] - cash
		}
		f = math.FMA(s.price.weight[r], cash, f)
		g := float64(float64(s.price.density[r]*q.nearDensity[r]) * invV)
		square := float64(kappa * kappa)
		dk := d * square
		g0 += g
		g1 = math.FMA(0-g, dk, g1)
		g2 = math.FMA(g, math.FMA(dk, dk, 0-square), g2)
	}
	density, square := q.nearDensity[e], invV*invV
	cash := float64(density * q.nearCash[e])
	if !(delta+drift > 0) {
		cash = c.decayA[e] - cash
	}
	forth := float64(density * q.edge[0])
	if speed > delta {
		forth = q.nearDensity[e+1] - forth
	}
	back := float64(density * q.edge[1])
	turn := drift * square
	exactG := (forth - back) / speed
	both := forth + back
	sigma := both * square
	slope := 0 - math.FMA(turn, exactG, sigma)
	rate := float64(speed * square)
	sigmaSlope := 0 - math.FMA(turn, sigma, math.FMA(float64(rate*rate), exactG, float64(float64(2*invSqrt2Pi)*density)*float64(square*invV)))
	bend := 0 - math.FMA(turn, slope, sigmaSlope)

	amount := math.FMA(0-s.b[0], t.boundary[0], a) // a − b·B(1)
	g0, g1, g2 = float64(amount*(exactG-g0)), float64(amount*(slope-g1)), float64(amount*(bend-g2))
	exactF := math.FMA(0.5, math.FMA(0-drift, exactG, both), 0-cash) / a
	f = amount * (exactF - f)
	if !(a > leastForF) {
		f = 0
	}
	ta, tb, tv := t.tangent[0][0], t.tangent[1][0], t.tangent[2][0]
	o := &q.value
	o.p[0] += f
	o.x[0] -= g0
	o.xx[0] -= g1
	o.xxx[0] -= g2
	o.a[0] = math.FMA(ta, g0, o.a[0])
	o.b[0] = math.FMA(tb, g0, o.b[0])
	o.v[0] = math.FMA(tv, g0, o.v[0])
	o.xv[0] = math.FMA(tv, g1, o.xv[0])
	o.vv[0] = math.FMA(t.second[0], g0, math.FMA(0-float64(tv*tv), g1, o.vv[0]))
}
