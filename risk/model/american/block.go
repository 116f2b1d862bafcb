package american

import "nightbook/risk/vec"

// block is width boundaries solved side by side. Element i of lane j of a column
// is at i·width + j; parameters are columns of one element.
//
// A boundary is that of a put with strike 1 and maturity 1: a = rT, b = qT,
// v = σ√T. Its logarithm is −h(τ), and H = h² is what is interpolated in √τ: it
// is smoother than h where h is 0 at expiry.
type block struct {
	*rule
	width int

	a, b, v, invV  []float64
	floor          []float64 // −ln min(1, a/b), the value of h at expiry and its least
	floorA, floorB []float64 // the derivatives of floor² in a and b

	h      []float64 // at the points
	square []float64 // H, from expiry on

	// at the nodes of the equations, the further ones included
	decay   []float64 // e^(−b·wait)
	hu      []float64 // h at u
	dm      []float64 // d₋
	density []float64 // e^(−a·wait − d₋²/2)
	ratio   []float64 // boundary at u over boundary at τ
	tail    []float64 // |d₊|, its Mills ratio, then e^(−b·wait)·Φ(d₊)

	top, bottom []float64    // of the fixed point, and scratch
	matrix      []float64    // of Newton's method, in each row factors and four right-hand sides
	step        []float64    // what was added to H last
	scale       []float64    // of each equation
	rho, sigma  []float64    // the weights of its sides
	sums        []float64    // scratch
	pull        []float64    // the weight of H at each node in its equation; later ∂H/∂v there
	beta, cash  []float64    // b·B(u)·g and c at each node
	bent        []float64    // right-hand side for ∂²H/∂v²
	tangent     [3][]float64 // ∂H/∂a, ∂H/∂b, ∂H/∂v, from expiry on
	second      []float64    // ∂²H/∂v², from expiry on

	feature feature
	curve   curve
	quote   quote
}

// sides is the number of right-hand sides: the step and the three tangents.
const sides = 4

func newBlock(r *rule, width int) *block {
	n, points := len(r.eq.wait), r.points
	columns := func(n int) []float64 { return column(packedRows(n) * width)[:n*width] }
	s := &block{rule: r, width: width}
	for _, c := range []*[]float64{&s.a, &s.b, &s.v, &s.invV, &s.floor, &s.floorA, &s.floorB} {
		*c = columns(1)
	}
	for _, c := range []*[]float64{&s.h, &s.step, &s.scale, &s.top, &s.bottom, &s.bent, &s.rho, &s.sigma} {
		*c = columns(points)
	}
	for _, c := range []*[]float64{&s.square, &s.tangent[0], &s.tangent[1], &s.tangent[2], &s.second, &s.sums} {
		*c = columns(points + 1)
	}
	for _, c := range []*[]float64{&s.decay, &s.hu, &s.dm, &s.density, &s.ratio, &s.tail, &s.pull, &s.beta, &s.cash} {
		*c = columns(n)
	}
	s.matrix = columns(points * (points + sides))
	s.feature.grow(columns)
	s.curve.grow(r, columns)
	s.quote.grow(r, columns)
	return s
}

// solve finds the boundaries of the lanes, their tangents and, for the second
// derivative in v, their curvature.
func (s *block) solve() {
	s.start()
	s.decays()
	vec.Exp(s.decay, s.decay)
	for k := range s.sweeps {
		s.visit()
		last := k == s.sweeps-1
		s.linearise(last)
		vec.LogRatio(s.top, s.top, s.bottom)
		s.eliminate(last)
		if last {
			s.eq.interpolate(s.pull, s.tangent[2], s.width)
			s.bend()
			s.resolve()
		}
		s.advance()
	}
}

// visit evaluates the functions the equations are made of at all nodes.
func (s *block) visit() {
	s.eq.interpolate(s.hu, s.square, s.width)
	s.distances()
	vec.Exp(s.density, s.density)
	vec.Exp(s.ratio, s.ratio)
	vec.Mills(s.tail, s.tail)
	s.tails()
}
