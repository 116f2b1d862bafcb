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

	// Interrupted, where it is set, is asked between sweeps: once it says yes, the
	// call returns, and its results are void.
	Interrupted func() bool

	mu   sync.Mutex
	free []*work // scratch that no call is using
}

// work is the scratch of one call.
type work struct {
	op           operator
	grids        []grid // one for each strike of a strip
	plan         plan
	divs         schedule
	course       [lanes]course
	done         []bool
	group        []int     // the lines of one sweep
	similar      bool      // they are read from one grid, at S/K
	at           []row     // their lognormal prices, on the mesh, by lane
	older, newer []outcome // read from the coarser mesh and the finer one
	batch        batch
	prices       prices
	stop         func() bool
}

// Below certainBelow, σ√T changes a value by less than 4·10⁻⁶ of the spot.
const certainBelow = 1e-5

func (c *Chain) isCertain(i int) bool { return c.Vol[i]*math.Sqrt(c.Time) < certainBelow }

// finestLevel bounds the refinement: a mesh 8 times as dense as the coarse one.
const finestLevel = 3

// Solve prices the lines of a chain.
//
// Computes the value of each option under the backward equation, by TR-BDF2 in
// time and central differences in space on two meshes, the finer twice as dense
// both ways, extrapolated to none; see the package comment. Sensitivities to the
// spot and to time are read from the finished values, those to volatility, rate
// and yield from lanes that sweep along on the same mesh with one of them moved
// by 1.5 % and 0.001/max(1, T).
//
// Lines of one volatility share the mesh, the matrices of all steps and their
// factors, the remapping of ex-dates, and nearby memory. None of these depends on
// a strike: a line has the same bits alone and among any others.
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
	w := s.take()
	w.solve(c, r, s.tolerance())
	s.give(w)
}

func (s *Solver) tolerance() float64 {
	if s.Tolerance > 0 {
		return s.Tolerance
	}
	return DefaultTolerance
}

func (s *Solver) take() *work {
	s.mu.Lock()
	defer s.mu.Unlock()
	var w *work
	if n := len(s.free) - 1; n >= 0 {
		w, s.free = s.free[n], s.free[:n]
	} else {
		w = new(work)
	}
	w.stop = s.Interrupted
	return w
}

func (s *Solver) give(w *work) {
	s.mu.Lock()
	s.free = append(s.free, w)
	s.mu.Unlock()
}

func (w *work) solve(c *Chain, r *Results, tolerance float64) {
	n := len(c.Strike)
	r.Resize(n)
	w.done = resize(w.done, n)
	clear(w.done)
	w.divs = w.divs.take(c)
	core := w.divs.core(c)
	for i := range n {
		switch {
		case w.done[i]:
		case !c.valid(i, core):
			r.fill(i, math.NaN(), Invalid)
		case c.Time == 0:
			r.payoff(i, c)
		case c.isCertain(i):
			r.certain(i, c, w.divs)
		case w.stop != nil && w.stop():
			return
		default:
			w.gather(i, c, core)
			w.refine(c, r, core, tolerance)
		}
	}
}

// Lines that share a sweep.
const (
	// Without cash dividends V depends on S/K only, and a line is read at S/K from
	// the sweep of the strike 1, if the two are within so many σ√T of each other.
	similarWithin = 2
	// The others share the equation and its mesh; so many of them are a strip, for
	// their values to stay in a near cache.
	stripWidth = 8
)

// similar reports whether line i is read at S/K.
func (w *work) isSimilar(i int, c *Chain, core float64) bool {
	sd := float64(c.Vol[i] * math.Sqrt(c.Time))
	return len(w.divs) == 0 && math.Abs(lnRatio(core, c.Strike[i])) <= float64(similarWithin*sd)
}

// gather collects the lines that share the sweep of line i.
func (w *work) gather(i int, c *Chain, core float64) {
	w.group = append(w.group[:0], i)
	w.similar = w.isSimilar(i, c, core)
	for k := i + 1; k < len(c.Strike) && (w.similar || len(w.group) < stripWidth); k++ {
		if c.Vol[k] == c.Vol[i] && !w.done[k] && c.valid(k, core) && w.isSimilar(k, c, core) == w.similar {
			w.group = append(w.group, k)
			w.done[k] = true
		}
	}
}

// lay plans the sweep of lines of a volatility, similar or not.
func (w *work) lay(c *Chain, vol, core float64, similar bool, tolerance float64) {
	if similar {
		away := float64(similarWithin * float64(vol*math.Sqrt(c.Time)))
		w.plan.lay(1, exp(-away), exp(away), vol, c, w.divs, tolerance)
	} else {
		w.plan.lay(core, core, core, vol, c, w.divs, tolerance)
	}
}

// refine prices the lines of a group: on level 0 and 1, and each on further levels
// until its estimated error is within the tolerance. What comes out for a line
// does not depend on the others.
func (w *work) refine(c *Chain, r *Results, core, tolerance float64) {
	vol := c.Vol[w.group[0]]
	w.lay(c, vol, core, w.similar, tolerance)
	w.op.terms = bumped(c, vol)
	w.aim(c)
	w.older, w.newer = resize(w.older, len(w.group)), resize(w.newer, len(w.group))
	w.run(0, c, w.older)
	for level := 1; len(w.group) > 0; level++ {
		w.run(level, c, w.newer[:len(w.group)])
		left := 0
		for k, i := range w.group {
			scale := w.plan.unit
			if w.similar {
				scale = c.Strike[i]
			}
			w.newer[k].store(&w.older[k], r, i, c, w.divs, &w.plan, level, scale)
			if r.Error[i] <= tolerance*c.Spot {
				continue
			}
			if level == finestLevel {
				r.Status[i] = Uncertain
				continue
			}
			w.group[left], w.at[left], w.older[left] = i, w.at[k], w.newer[k]
			left++
		}
		w.group = w.group[:left]
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
