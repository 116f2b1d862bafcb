package american

import "math"

// curveExponentsGeneric turns hu from H into h and sets the exponents.
func (s *block) curveExponentsGeneric() {
	c := &s.curve
	least, last := float64(s.floor[0]*s.floor[0]), s.square[s.points]
	for r, z := range s.price.wait {
		hu := 0.0
		if r < s.price.n {
			hu = math.Sqrt(larger(c.hu[r], larger(least, float64(s.price.early[r]*last))))
		}
		c.hu[r] = hu
		c.boundary[r] = 0 - hu
		c.decayA[r] = 0 - float64(s.a[0]*z)
		c.decayB[r] = 0 - float64(s.b[0]*z)
	}
}

// curveTangentsGeneric turns the derivatives of H into those of ln B = −√H.
func (s *block) curveTangentsGeneric() {
	c := &s.curve
	for r := range s.price.n {
		inv := 1 / c.hu[r]
		half := -0.5 * inv
		ta, tb, tv := c.tangent[0][r]*half, c.tangent[1][r]*half, c.tangent[2][r]*half
		c.second[r] = math.FMA(float64(tv*tv), inv, float64(c.second[r]*half))
		c.tangent[0][r], c.tangent[1][r], c.tangent[2][r] = ta, tb, tv
	}
	t, n := &c.now, s.points
	h, a, v := s.h[n-1], s.a[0], s.v[0]
	inv := 1 / h
	half := -0.5 * inv
	ta, tb, tv := float64(s.tangent[0][n]*half), float64(s.tangent[1][n]*half), float64(s.tangent[2][n]*half)
	t.h[0], t.boundary[0] = h, 0-h
	t.tangent[0][0], t.tangent[1][0], t.tangent[2][0] = ta, tb, tv
	t.second[0] = math.FMA(float64(tv*tv), inv, float64(s.second[n]*half))
	// Time only scales a, b and v²: so s = −(a·∂ln B/∂a + b·∂ln B/∂b + ½v·∂ln B/∂v).
	drift := math.FMA(float64(0.5*v), tv-v, math.FMA(s.b[0], tb-1, float64(a*(ta+1))))
	t.drift[0] = drift
	t.speed[0] = larger(math.Sqrt(math.FMA(float64(2*a), float64(v*v), float64(drift*drift))), float64(leastSpeed*v))
}

const leastSpeed = 1e-8 // of m, in units of v: it divides

// priceDistancesGeneric sets dm, |d₋| and |d₊| and the exponent of density, with
//
//	d₋,₊ = (x + h(u) + (a−b)z)/(v√z) ∓ ½v√z.
func (s *block) priceDistancesGeneric() {
	q := &s.quote
	a, v, invV, x := s.a[0], s.v[0], s.invV[0], q.x[0]
	ab := a - s.b[0]
	for r, z := range s.price.wait {
		d := math.FMA(ab, z, x+s.curve.hu[r]) * float64(invV*s.price.invRoot[r])
		vz := float64(v * s.price.root[r])
		dm := math.FMA(vz, -0.5, d)
		q.dm[r] = dm
		q.density[r] = larger(0-math.FMA(a, z, float64(dm*0.5)*dm), lowestExp)
		q.cash[r] = math.Abs(dm)
		q.asset[r] = math.Abs(dm + vz)
	}
}

// priceTailsGeneric turns the Mills ratios into cash and asset.
func (s *block) priceTailsGeneric() {
	q, c := &s.quote, &s.curve
	for r, dm := range q.dm {
		x := q.density[r]
		cash := float64(x * q.cash[r])
		if !(dm > 0) {
			cash = c.decayA[r] - cash
		}
		asset := float64(float64(x*c.boundary[r]) * q.asset[r])
		if !(math.FMA(s.v[0], s.price.root[r], dm) > 0) {
			asset = math.FMA(q.ratio[0], c.decayB[r], 0-asset)
		}
		q.cash[r], q.asset[r] = cash, asset
	}
}
