package american

import (
	"math"

	"nightbook/risk/vec"
)

// Setting chooses between speed and accuracy; see the table in doc.go.
type Setting int

const (
	Default Setting = iota
	Fast
	Exact
)

// ladder holds the sizes from coarse to fine. A boundary that has not converged
// at the size of the setting is sought again further up.
var ladder = [...]size{
	{points: 7, inner: 6, outer: 13, sweeps: 2},
	{points: 11, inner: 10, outer: 19, sweeps: 3},
	{points: 60, inner: 64, outer: 141, sweeps: 7},
}

var rung = [...]int{Fast: 0, Default: 1, Exact: 2}

// A boundary has converged if the last step of Newton's method, which doubles the
// digits, changed no H by more than this share of H now.
const converged = 3e-3

// Solver values batches of options. It keeps its working memory between batches
// and serves one goroutine at a time.
type Solver struct {
	// Interrupted, where it is set, is asked between boundaries: once it says yes,
	// Solve returns, and the results of that call are void.
	Interrupted func() bool

	first  int // rung
	width  int
	blocks [len(ladder)]*block

	scaled   scaled
	groups   groups
	todo     []int32 // lines with one boundary
	again    []int32 // of those, the ones to be solved on the next rung
	european european
}

// scaled are the lines with one boundary as puts with strike 1 and maturity 1.
type scaled struct{ a, b, v, x, ratio, unit []float64 }

// NewSolver returns a solver with the given setting.
func NewSolver(setting Setting) *Solver {
	return &Solver{first: rung[setting], width: lanes()}
}

// Solve values American calls and puts on a spot price with continuous rate and
// yield.
//
// Computes the price of Kim's equation: the European price plus
// ∫(rK·e^(−rz)·Φ(−d₋) − qS·e^(−qz)·Φ(−d₊)) du with z = T − u and d at S/B(u), and the
// boundary B from the condition that the slope of the price is −1 there. A call is
// the put with S and K, r and q exchanged. The derivatives are those of this
// price: delta and gamma at fixed B, since B is chosen to be the best; vega, rho,
// carry_rho, vanna and volga with ∂B/∂r, ∂B/∂q, ∂B/∂σ and ∂²B/∂σ² from the
// equation of B; theta and charm from the Black–Scholes equation. Lines with the
// same (T, r, q, σ) share a boundary, whatever their strikes and wherever they
// stand.
//
// Shapes: all slices have the length of Spot. Outputs may not share memory with
// inputs. The results of a line do not depend on the other lines.
// Units: see Lines and Greeks.
//
// Special cases, for puts; exchange r and q for calls:
//   - r ≤ 0 and q ≥ r: exercise is never optimal; the bits are those of vec.BSM.
//   - q < r < 0: two boundaries, OutOfReach.
//   - S at or beyond the boundary: Exercised.
//   - T = 0: Expired; the derivatives are those of the payoff, their means at S = K.
//   - σ√T below 1e-6: the forward is certain, and the option is worth the best
//     of max(0, K·e^(−rt) − S·e^(−qt)) over t, off by less than σ√T·S.
//   - Boundaries that converge at no size: OutOfReach. They have been seen with
//     r√T/σ or q√T/σ above 40, and with q just above r, both below 1e-4.
//
// NaN in all results: an input NaN or infinite, S or K not within 10^±100, T not
// within 0 … 1000, σ not within 0 … 100, |r| or |q|, or |r|T or |q|T, above 100, or
// a Sign other than ±1; the status is Invalid. OutOfReach.
//
// Accuracy: see the error study in doc.go.
// Source: I. J. Kim, Review of Financial Studies 3 (1990); L. Andersen, M. Lake &
// D. Offengenden, J. Computational Finance 20 (2016); R. McDonald & M. Schroder,
// J. Computational Finance 1 (1998), for calls; A. Battauz, M. De Donno &
// A. Sbuelz, Management Science 61 (2015), for the two boundaries.
func (s *Solver) Solve(r *Results, l *Lines) {
	l.check(r)
	n := len(l.Spot)
	s.todo = s.todo[:0]
	s.european.reset()
	z := &s.scaled
	for _, c := range []*[]float64{&z.a, &z.b, &z.v, &z.x, &z.ratio, &z.unit} {
		*c = resize(*c, n)
	}
	for i := range n {
		z.x[i], z.ratio[i], z.unit[i] = 1, 1, 1
		if !l.valid(i) {
			r.fill(i, math.NaN(), Invalid)
			continue
		}
		t, rate, yield, spot, strike := l.Time[i], l.Rate[i], l.Yield[i], l.Spot[i], l.Strike[i]
		if l.Sign[i] > 0 {
			rate, yield, spot, strike = yield, rate, strike, spot
		}
		v := l.Vol[i] * math.Sqrt(t)
		switch {
		case t == 0:
			r.expire(i, l)
		case rate <= 0 && yield >= rate:
			s.european.add(i, l)
		case v < leastV:
			r.certain(i, l)
		case rate < 0:
			r.fill(i, math.NaN(), OutOfReach)
		default:
			z.a[i], z.b[i], z.v[i] = float64(rate*t)+0, float64(yield*t)+0, v // +0 makes −0 equal to 0
			z.x[i], z.ratio[i], z.unit[i] = spot, spot/strike, strike
			s.todo = append(s.todo, int32(i))
		}
	}
	s.european.solve(r)
	vec.LogRatio(z.x, z.x, z.unit)
	for level := s.first; level < len(ladder); level++ {
		s.climb(r, l, level)
		s.todo, s.again = s.again, s.todo
	}
	for _, i := range s.todo {
		r.fill(int(i), math.NaN(), OutOfReach)
	}
}

// leastV is the σ√T below which the forward is taken as certain.
const leastV = 1e-6

// climb values the lines of todo on one rung and leaves in again those whose
// boundary did not converge there.
func (s *Solver) climb(r *Results, l *Lines, level int) {
	s.again = s.again[:0]
	if len(s.todo) == 0 {
		return
	}
	if s.blocks[level] == nil {
		s.blocks[level] = newBlock(newRule(ladder[level]), s.width)
	}
	b, g := s.blocks[level], &s.groups
	g.collect(s.todo, &s.scaled)
	for order := g.order; len(order) > 0; {
		if s.Interrupted != nil && s.Interrupted() {
			return
		}
		members := order[:min(s.width, len(order))]
		order = order[len(members):]
		for j := range b.width {
			k := members[min(j, len(members)-1)]
			b.a[j], b.b[j], b.v[j] = g.a[k], g.b[k], g.v[k]
		}
		b.solve()
		b.share()
		for j, k := range members {
			if !b.settled(j) {
				for i := g.head[k]; i >= 0; i = g.next[i] {
					s.again = append(s.again, i)
				}
				g.head[k] = -1
			}
		}
		s.quote(r, l, b, members)
	}
}

// quote values the lines of the groups in the lanes of a block, one of each at a time.
func (s *Solver) quote(r *Results, l *Lines, b *block, members []int32) {
	g, q := &s.groups, &b.quote
	for j := range b.width {
		q.x[j], q.ratio[j] = 0, 1
	}
	for {
		left := false
		for j, k := range members {
			if i := g.head[k]; i >= 0 {
				q.x[j], q.ratio[j] = s.scaled.x[i], s.scaled.ratio[i]
				left = true
			}
		}
		if !left {
			return
		}
		b.evaluate()
		for j, k := range members {
			if i := g.head[k]; i >= 0 {
				b.store(r, int(i), l, j)
				g.head[k] = g.next[i]
			}
		}
	}
}

// settled reports whether the boundary in lane j has converged.
func (s *block) settled(j int) bool {
	n := s.points
	limit := converged * s.square[n*s.width+j]
	for i := range n {
		if !(math.Abs(s.step[i*s.width+j]) <= limit) {
			return false
		}
	}
	return true
}
