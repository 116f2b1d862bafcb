package american

import "math"

// The loops of a solution, for a block of one lane: the specification of the
// vector forms, which do the same for every lane.

const (
	leastH     = 1e-12 // of h: it divides
	lowestExp  = -500  // exponents below it make no difference
	invSqrt2Pi = 0.3989422804014327
)

func larger(x, y float64) float64 {
	if x > y {
		return x
	}
	return y
}

func smaller(x, y float64) float64 {
	if x < y {
		return x
	}
	return y
}

// interpolateGeneric sets dst to the values at the nodes of what has the values f
// at the points.
func (n *nodes) interpolateGeneric(dst, f []float64) {
	for r := range n.n {
		x := 0.0
		for k, w := range n.spread[r*len(f) : (r+1)*len(f)] {
			x = math.FMA(w, f[k], x)
		}
		dst[r] = x
	}
}

// decaysGeneric sets the exponents of decay.
func (s *block) decaysGeneric() {
	for r, z := range s.eq.wait {
		s.decay[r] = 0 - float64(s.b[0]*z)
	}
}

// distancesGeneric turns hu from H into h and sets dm, |d₊| and the exponents of
// density and ratio, with
//
//	d₋,₊ = (h(u) − h(τ) + (a−b)z)/(v√z) ∓ ½v√z.
func (s *block) distancesGeneric() {
	a, v, invV := s.a[0], s.v[0], s.invV[0]
	ab := a - s.b[0]
	least := float64(s.floor[0] * s.floor[0])
	for r, z := range s.eq.wait {
		i, hu := r/s.inner, 0.0
		if r < s.eq.n {
			hu = math.Sqrt(larger(s.hu[r], larger(least, float64(s.eq.early[r]*s.square[i+1]))))
		} else {
			i = r - s.eq.n
		}
		diff := s.h[i] - hu
		d := math.FMA(ab, z, 0-diff) * float64(invV*s.eq.invRoot[r])
		vz := float64(v * s.eq.root[r])
		dm := math.FMA(vz, -0.5, d)
		s.hu[r] = hu
		s.dm[r] = dm
		s.density[r] = larger(0-math.FMA(a, z, float64(dm*0.5)*dm), lowestExp)
		s.ratio[r] = diff
		s.tail[r] = math.Abs(dm + vz)
	}
}

// tailsGeneric sets tail to e^(−bz)·Φ(d₊): with ratio·density = √(2π)·e^(−bz)·φ(d₊)
// one exponential serves both.
func (s *block) tailsGeneric() {
	v := s.v[0]
	for r, dm := range s.dm {
		t := float64(float64(s.density[r]*s.ratio[r]) * s.tail[r])
		if math.FMA(v, s.eq.root[r], dm) > 0 {
			t = s.decay[r] - t
		}
		s.tail[r] = t
	}
}
