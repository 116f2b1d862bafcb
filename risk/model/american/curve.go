package american

import "nightbook/risk/vec"

// curve is what all strikes of a boundary share, at the nodes of the price.
type curve struct {
	hu, boundary []float64    // h and B at u
	decayA       []float64    // e^(−a·wait)
	decayB       []float64    // e^(−b·wait)
	tangent      [3][]float64 // ∂ln B/∂a, ∂ln B/∂b, ∂ln B/∂v
	second       []float64    // ∂²ln B/∂v²

	now touching
}

// touching is the boundary ln B(1) + s·z, with s the slope of ln B today: it
// touches the true one at z = 0, and integrals along it have closed forms.
type touching struct {
	h, boundary  []float64 // h and B at u = 1
	tangent      [3][]float64
	second       []float64
	drift, speed []float64 // μ = a − b − s − ½v² and m = √(μ² + 2av²)
}

func (c *curve) grow(r *rule, columns func(n int) []float64) {
	for _, p := range []*[]float64{&c.hu, &c.boundary, &c.decayA, &c.decayB, &c.tangent[0], &c.tangent[1], &c.tangent[2], &c.second} {
		*p = columns(len(r.price.wait))
	}
	t := &c.now
	for _, p := range []*[]float64{&t.h, &t.boundary, &t.tangent[0], &t.tangent[1], &t.tangent[2], &t.second, &t.drift, &t.speed} {
		*p = columns(1)
	}
}

// quote is one option on each boundary of a block.
type quote struct {
	x, ratio []float64 // ln(S/K), S/K

	// at the nodes of the price
	dm, density []float64 // d₋, e^(−a·wait − d₋²/2)
	cash, asset []float64 // |d₋| and |d₊|, their Mills ratios, then e^(−a·wait)·Φ(−d₋) and (S/K)·e^(−b·wait)·Φ(−d₊)

	carry, beta []float64 // c and b·B(u)·g

	// the same for the touching boundary, without the asset; behind the nodes
	// nearDensity has e^(−(μ+m)δ/v²)
	nearDensity, nearCash []float64
	edge                  []float64 // Mills ratios at |m−δ|/v and (m+δ)/v

	value values
}

// values are the price p(x, a, b, v) for strike 1 and its partial derivatives.
type values struct{ p, x, xx, xxx, a, b, v, xv, vv []float64 }

func (q *quote) grow(r *rule, columns func(n int) []float64) {
	n := len(r.price.wait)
	for _, p := range []*[]float64{&q.dm, &q.density, &q.cash, &q.asset, &q.carry, &q.beta, &q.nearCash} {
		*p = columns(n)
	}
	q.nearDensity = columns(n + 1)
	q.edge = columns(2)
	v := &q.value
	for _, p := range []*[]float64{&q.x, &q.ratio, &v.p, &v.x, &v.xx, &v.xxx, &v.a, &v.b, &v.v, &v.xv, &v.vv} {
		*p = columns(1)
	}
}

// share evaluates what the options on a boundary have in common.
func (s *block) share() {
	c := &s.curve
	s.price.interpolate(c.hu, s.square, s.width)
	s.curveExponents()
	vec.Exp(c.boundary, c.boundary)
	vec.Exp(c.decayA, c.decayA)
	vec.Exp(c.decayB, c.decayB)
	for k := range c.tangent {
		s.price.interpolate(c.tangent[k], s.tangent[k], s.width)
	}
	s.price.interpolate(c.second, s.second, s.width)
	s.curveTangents()
	vec.Exp(c.now.boundary, c.now.boundary)
}

// evaluate values one option on each boundary, with quote.x and quote.ratio set.
func (s *block) evaluate() {
	q := &s.quote
	s.priceDistances()
	s.nearDistances()
	vec.Exp(q.density, q.density)
	vec.Exp(q.nearDensity, q.nearDensity)
	vec.Mills(q.cash, q.cash)
	vec.Mills(q.asset, q.asset)
	vec.Mills(q.nearCash, q.nearCash)
	vec.Mills(q.edge, q.edge)
	s.priceTails()
	s.values()
	s.refine()
}
