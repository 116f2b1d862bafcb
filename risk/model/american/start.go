package american

import (
	"math"

	"nightbook/risk/vec"
)

// The start of the search: as τ grows h(τ) goes from its value at expiry, that
// of min(1, a/b), to the boundary of a perpetual option, and the way is close to
//
//	h(τ) = h(0) + c(1 − e^(−ω·v√τ/c)),   c = h(∞) − h(0),
//
// with ln ω a polynomial of degree 4 in three numbers that say how wide, how
// drifted and how late the point is; one for b ≤ a and one for b > a. If b is only
// just above a, the way soon is that of b = a, which starts from h = 0.

const (
	startDegree = 4
	startTerms  = 35 // of a polynomial in three variables

	leastRate  = 1e-14 // a = 0 with b < 0 is taken as this
	thinLayer  = 0.3   // an h(0) this small, in units of v·w₁, is taken as 0
	justAbove  = 0.3   // an h(0) this small, in units of v, makes b just above a
	leastRise  = 0.5   // of h above h(0), in units of v√τ, where b is just above a
	leastWidth = -2.2  // range of the first variable, ⅓·ln(v√τ)
	mostWidth  = 0.6
	leastDrift = -4.6 // range of the second, ⅓·ln((a + max(0, −b))√τ/v)
	mostDrift  = 0.4
)

// feature holds what the polynomial needs of a lane.
type feature struct {
	third, rate []float64 // ⅓·ln v, ⅓·ln((a + max(0, −b))/v)
	base        []float64 // where the way starts: h(0), or 0 if b is just above a
	rise        []float64 // the least of h(τ) − h(0), over √τ
	layer       []float64 // base/v
	side        []float64 // the third variable where h(0) is 0
	reach       []float64 // c
	coef        []float64 // of the polynomial
	num, den    []float64 // quotients whose logarithm is wanted
}

func (f *feature) grow(columns func(n int) []float64) {
	for _, p := range []*[]float64{&f.third, &f.rate, &f.base, &f.rise, &f.layer, &f.side, &f.reach} {
		*p = columns(1)
	}
	f.coef = columns(startTerms)
	f.num, f.den = columns(4), columns(4)
}

// start sets the parameters that follow from a, b and v, and a first boundary.
func (s *block) start() {
	f, w := &s.feature, s.width
	for j := range w {
		a, b, v := s.a[j], s.b[j], s.v[j]
		at := max(a, leastRate)
		inv := 1 / v
		drift := math.FMA(float64((a-b)*inv), inv, -0.5)
		beta := drift + math.Sqrt(math.FMA(drift, drift, float64(float64(2*a)*inv)*inv))
		beta = max(beta, leastRate) // the perpetual option is worth S^(−beta) times a constant
		s.invV[j] = inv
		f.num[j], f.den[j] = max(at, b), at
		f.num[w+j], f.den[w+j] = beta+1, beta
		f.num[2*w+j], f.den[2*w+j] = v, 1
		f.num[3*w+j], f.den[3*w+j] = at-min(b, 0), v
		f.side[j] = 2 * b / (at + math.Abs(b))
	}
	vec.LogRatio(f.num, f.num, f.den)
	for j := range w {
		h0 := f.num[j]
		s.floor[j], s.floorA[j], s.floorB[j] = 0, 0, 0
		f.base[j], f.rise[j] = 0, 0
		from := &startBelow
		if h0 > float64(float64(thinLayer*s.v[j])*s.root[0]) {
			s.floor[j], s.floorA[j], s.floorB[j] = h0, -2*h0/s.a[j], 2*h0/s.b[j]
			if h0 > float64(justAbove*s.v[j]) {
				from, f.base[j] = &startAbove, h0
			} else {
				f.rise[j] = min(leastRise*s.v[j], max(0, f.num[w+j]-h0)/2)
			}
		}
		f.layer[j] = f.base[j] * s.invV[j]
		f.reach[j] = max(f.num[w+j]-f.base[j], leastH)
		f.third[j] = f.num[2*w+j] / 3
		f.rate[j] = f.num[3*w+j] / 3
		for k, c := range from {
			f.coef[k*w+j] = c
		}
		s.square[j] = float64(s.floor[j] * s.floor[j])
	}
	s.guess()
	vec.Exp(s.h, s.h)
	s.approach()
	vec.Exp(s.h, s.h)
	s.arrive()
}

// guessGeneric sets h to ln ω.
func (s *block) guessGeneric() {
	f := &s.feature
	c := f.coef
	for i, log := range s.logRoot {
		log /= 3
		x := smaller(larger(f.third[0]+log, leastWidth), mostWidth)
		y := smaller(larger(f.rate[0]+log, leastDrift), mostDrift)
		z := f.side[0]
		if f.layer[0] > 0 {
			m := f.layer[0] / s.root[i]
			z = m / (1 + m)
		}
		k, p := startTerms, 0.0
		for dx := startDegree; dx >= 0; dx-- {
			q := 0.0
			for dy := startDegree - dx; dy >= 0; dy-- {
				u := 0.0
				for range startDegree - dx - dy + 1 {
					k--
					u = math.FMA(u, z, c[k])
				}
				q = math.FMA(q, y, u)
			}
			p = math.FMA(p, x, q)
		}
		s.h[i] = p
	}
}

// approachGeneric turns ω into the exponent −ω·v√τ/c.
func (s *block) approachGeneric() {
	inv := s.v[0] / s.feature.reach[0]
	for i, x := range s.h {
		s.h[i] = larger(0-float64(x*float64(inv*s.root[i])), lowestExp)
	}
}

// arriveGeneric sets h and H.
func (s *block) arriveGeneric() {
	for i, x := range s.h {
		h := math.FMA(s.feature.reach[0], 1-x, s.feature.base[0])
		h = larger(larger(h, math.FMA(s.feature.rise[0], s.root[i], s.floor[0])), leastH)
		s.h[i] = h
		s.square[i+1] = h * h
	}
}
