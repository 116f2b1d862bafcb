package pde

import (
	"math"
	"sync"
)

// DefaultTolerance is that of the zero Solver.
const DefaultTolerance = 2e-5

// Solver prices chains. The zero Solver is ready for use and may be used by
// several goroutines at once; it must not be copied after its first use.
type Solver struct {
	// Tolerance is the error allowed in a price, as a share of the spot; 0
	// means DefaultTolerance.
	Tolerance float64

	mu   sync.Mutex
	free []*work // scratch that no call is using
}

// work is the scratch of one call.
type work struct {
	coarse, fine grid
	plan         plan
	divs         schedule
	done         []bool
	group        []int     // the lines of one sweep
	at           []row     // their lognormal prices, on the mesh, by lane
	older, newer []outcome // read from the coarser mesh and the finer one
}

// Below certainBelow, σ√T changes a value by less than 4·10⁻⁶ of the spot.
const certainBelow = 1e-5

// finestLevel bounds the refinement: a mesh 8 times as dense as the coarse one.
const finestLevel = 3

// Solve prices the lines of a chain.
//
// Computes the value of each option under the backward equation, by TR-BDF2 in
// time and central differences in space on two meshes, the finer twice as dense
// both ways, extrapolated to none; see the package comment. Sensitivities to the
// spot and to time are read from the finished values, those to volatility, rate
// and yield from lanes that sweep along on the same mesh with one of them moved
// by 1.5 % and 0.001/max(1, T). Lines of one volatility share a sweep where there
// are no dividends, for then V depends on S/K only.
//
// Shapes: Strike and Vol have one length; r is resized to it, and nothing is
// allocated once r and the solver have seen a chain of that length.
//
// Special cases: Time = 0 gives the payoff; σ√T below 1e-5 gives the best the
// certain path of the price allows; where exercise is optimal now, Price is what
// it brings, Delta is Sign and the other derivatives are 0.
// Invalid: NaN or infinite inputs, Spot, Strike ≤ 0, Time, Vol, Amount < 0, a
// Sign other than ±1, an escrowed spot worth less than its dividends, or inputs
// so wide (σ√T beyond 13, say) that prices overflow.
//
// Accuracy: the price within the tolerance, unless the line is Uncertain; see
// reference_test.go and identities_test.go for all outputs.
// Source: L. F. Richardson, Phil. Trans. Royal Society A 226 (1927), for the
// extrapolation; see step, substitute and shift for the rest.
func (s *Solver) Solve(c *Chain, r *Results) {
	if len(c.Strike) != len(c.Vol) {
		panic("pde: slices of different lengths")
	}
	tolerance := s.Tolerance
	if !(tolerance > 0) {
		tolerance = DefaultTolerance
	}
	w := s.take()
	w.solve(c, r, tolerance)
	s.mu.Lock()
	s.free = append(s.free, w)
	s.mu.Unlock()
}

func (s *Solver) take() *work {
	s.mu.Lock()
	defer s.mu.Unlock()
	n := len(s.free) - 1
	if n < 0 {
		return new(work)
	}
	w := s.free[n]
	s.free = s.free[:n]
	return w
}

func (w *work) solve(c *Chain, r *Results, tolerance float64) {
	n := len(c.Strike)
	r.Resize(n)
	w.done = resize(w.done, n)
	clear(w.done)
	w.divs = w.divs.take(c)
	core := c.Spot
	if c.Convention == Escrowed {
		escrow, _ := w.divs.worth(c.Rate, 0)
		core -= escrow
	}
	for i := range n {
		switch {
		case w.done[i]:
		case !c.valid(i, core):
			r.fill(i, math.NaN(), Invalid)
		case c.Time == 0:
			r.payoff(i, c)
		case c.Vol[i]*math.Sqrt(c.Time) < certainBelow:
			r.certain(i, c, w.divs)
		default:
			w.gather(i, c, core)
			w.sweep(c, r, core, tolerance)
		}
	}
}

// gather collects the lines that share the sweep of line i.
func (w *work) gather(i int, c *Chain, core float64) {
	w.group = append(w.group[:0], i)
	if len(w.divs) > 0 {
		return
	}
	for k := i + 1; k < len(c.Strike); k++ {
		if c.Vol[k] == c.Vol[i] && !w.done[k] && c.valid(k, core) {
			w.group = append(w.group, k)
			w.done[k] = true
		}
	}
}

// sweep prices the lines of a group: on level 0 and 1, and on further levels
// until the estimated error of all is within the tolerance.
func (w *work) sweep(c *Chain, r *Results, core, tolerance float64) {
	lead := w.group[0]
	strike := c.Strike[lead]
	lo, hi := core, core // where lines share a sweep, prices over their strikes, times that of the first
	for _, i := range w.group {
		x := float64(core * (strike / c.Strike[i]))
		lo, hi = min(lo, x), max(hi, x)
	}
	w.plan.lay(lo, hi, strike, c.Vol[lead], c, w.divs, tolerance)
	for _, g := range [...]*grid{&w.coarse, &w.fine} {
		g.terms = bumped(c, c.Vol[lead])
		g.sign, g.right = c.Sign, w.right(c)
	}
	w.aim(c, strike)
	w.older, w.newer = resize(w.older, len(w.group)), resize(w.newer, len(w.group))
	w.run(&w.coarse, 0, c, strike, w.older)
	for level := 1; ; level++ {
		w.run(&w.fine, level, c, strike, w.newer)
		worst := 0.0
		for k, i := range w.group {
			scale := c.Strike[i] / strike * w.plan.unit
			w.newer[k].store(&w.older[k], r, i, c, w.divs, &w.plan, level, scale)
			worst = max(worst, r.Error[i])
			if r.Error[i] > tolerance*c.Spot {
				r.Status[i] = Uncertain
			}
		}
		if worst <= tolerance*c.Spot || level == finestLevel {
			return
		}
		w.older, w.newer = w.newer, w.older
	}
}

// right returns where the options of a chain may be exercised before expiry.
//
// The value of a put falls by no more than the spot rises, if q ≥ 0 or if nothing
// is held deep in the money, and that of a call rises by no more, if q ≥ 0: then
// the exercised prices reach to the end. Exercise gains where w(qS − rK) > 0: for
// q < r < 0 a put is exercised between two prices, a call for r < q < 0. A deep
// put with q < 0 that is held for a dividend leaves exercised prices on both sides.
func (w *work) right(c *Chain) exercise {
	switch cash := len(w.divs) > 0; {
	case !c.American:
		return never
	case c.Sign < 0 && c.Yield < 0 && (cash || c.Rate < 0 && c.Yield < c.Rate), c.Sign > 0 && c.Yield < 0 && c.Rate < c.Yield:
		return anywhere
	}
	return oneSided
}
