package american

import (
	"math"

	"nightbook/risk/vec"
)

// size says how finely a boundary is resolved and how it is found.
type size struct {
	points int // times at which the boundary is unknown
	inner  int // quadrature nodes of each of their equations
	outer  int // quadrature nodes of a price
	sweeps int // of Newton's method
}

// rule holds what depends on the size alone. Time is in units of T and runs back
// from expiry. The points are τ_i = w_i², w_i the Chebyshev points of (0, 1];
// point 0 would be the expiry, where the boundary is known. Quadrature follows
// u = τ·sin²θ, with which both the square root of the elapsed time, at u = 0, and
// that of the time to wait z = τ − u = τ·cos²θ are smooth.
//
// Node r = i·inner + j of the equations is followed by one further node for every
// point, z = τ_i, for the terms outside the integral: its u is the expiry, its
// boundary the strike. So is node outer of the price by the European option.
type rule struct {
	size
	root    []float64 // w_i
	logRoot []float64 // ln w_i
	eq      nodes     // of the equations
	price   nodes     // of the price
}

// nodes are quadrature nodes. Weights are missing for the further nodes.
type nodes struct {
	n       int // without the further nodes
	wait    []float64
	root    []float64 // √wait
	invRoot []float64
	weight  []float64 // Σ weight·f(u) ≈ ∫ f du
	density []float64 // weight/√(2π·wait)
	packed  []float64 // spread, four rows at a time: element k of row r at (r/4·(points+1) + k)·4 + r%4
	early   []float64 // leastSlope·u/τ: no less is H(u)/H(τ)
	spread  []float64 // row r: Σ_k spread[r·(points+1)+k]·F(w_k) ≈ F(√u_r)
}

// H(u)/u falls as u grows, so H(u)/H(τ) is at least u/τ. An interpolant that
// falls below this share of that swings, and is not followed.
const leastSlope = 0.25

func (n *nodes) add(wait, root float64) {
	n.wait, n.root, n.invRoot = append(n.wait, wait), append(n.root, root), append(n.invRoot, 1/root)
}

// pack sets packed; the last rows are filled up with zeros.
func (n *nodes) pack(points int) {
	n.packed = make([]float64, packedRows(n.n)*points)
	for r := range n.n {
		for k := range points {
			n.packed[(r/4*points+k)*4+r%4] = n.spread[r*points+k]
		}
	}
}

// packedRows is the number of rows that n take in packed.
func packedRows(n int) int { return (n + 3) / 4 * 4 }

func newRule(s size) *rule {
	r := &rule{size: s}
	ch := newChebyshev(s.points)
	x, wx := legendre(s.inner)
	for i := 1; i <= s.points; i++ {
		w := ch.at[i]
		r.root, r.logRoot = append(r.root, w), append(r.logRoot, vec.Log1(w))
		for j := range x {
			sin, cos := quarterTurn(x[j])
			weight := math.Pi * w * w * sin * cos * wx[j]
			r.eq.add(w*w*cos*cos, w*cos)
			r.eq.weight = append(r.eq.weight, weight)
			r.eq.density = append(r.eq.density, weight/(w*cos*math.Sqrt(2*math.Pi)))
			r.eq.early = append(r.eq.early, leastSlope*sin*sin)
			r.eq.spread = append(r.eq.spread, ch.weights(w*sin)...)
		}
	}
	r.eq.n = len(r.eq.wait)
	r.eq.pack(s.points + 1)
	for _, w := range r.root {
		r.eq.add(w*w, w)
	}
	x, wx = legendre(s.outer)
	for j := range x {
		sin, cos := quarterTurn(x[j])
		weight := math.Pi * sin * cos * wx[j]
		r.price.add(cos*cos, cos)
		r.price.weight = append(r.price.weight, weight)
		r.price.density = append(r.price.density, weight/(cos*math.Sqrt(2*math.Pi)))
		r.price.early = append(r.price.early, leastSlope*sin*sin)
		r.price.spread = append(r.price.spread, ch.weights(sin)...)
	}
	r.price.n = s.outer
	r.price.pack(s.points + 1)
	r.price.add(1, 1)
	return r
}
