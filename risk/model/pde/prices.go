package pde

import (
	"cmp"
	"math"
	"slices"
)

// prices is the scratch of Prices.
type prices struct {
	order  []int     // lines, those of one option next to one another
	jobs   []job     // what there is to sweep
	turn   []int     // jobs, those of one class next to one another
	legs   []leg     // of their plans
	coarse []float64 // what a line was read at on the level before
	divs   [lanes]schedule
	one    Results
}

// job is what one lane sweeps: an option, or the strike 1 for similar ones.
type job struct {
	from, until int // its lines, in order, as long as they need a finer mesh
	similar     bool
	right       exercise
	sign, core  float64
	plan        plan
}

// Prices prices lines as SolveLines does, bit for bit, but for the price alone.
//
// Without sensitivities an option needs one lane of a sweep, and eight share it:
// any whose meshes have equally many nodes and whose times to expiry have equally
// many steps between ex-dates. A lane has the mesh, the matrices and the times
// that all lanes have in Solve, so what comes out for a line does not depend on
// the others.
//
// Shapes: price has the length of the slices of l.
// Invalid, special cases, accuracy: see Solve.
func (s *Solver) Prices(l *Lines, price []float64) {
	if len(price) != l.count() {
		panic("pde: slices of different lengths")
	}
	w := s.take()
	w.listJobs(l, price, s.tolerance())
	b := &w.prices
	for from, until := 0, 0; from < len(b.turn); from = until {
		first := &b.jobs[b.turn[from]]
		for until = from + 1; until < len(b.turn) && first.compare(&b.jobs[b.turn[until]]) == 0; until++ {
		}
		w.priceClass(b.turn[from:until], l, price, s.tolerance())
	}
	s.give(w)
}

// listJobs prices the lines that need no sweep, and lists what the others need.
func (w *work) listJobs(l *Lines, price []float64, tolerance float64) {
	b := &w.prices
	b.order = l.sorted(b.order)
	b.jobs, b.turn, b.legs = b.jobs[:0], b.turn[:0], b.legs[:0]
	b.coarse = resize(b.coarse, len(price))
	b.one.Resize(1)
	for from, until := 0, 0; from < len(b.order); from = until {
		i := b.order[from]
		until = from + 1
		c := l.chain(i)
		w.divs = w.divs.take(&c)
		core := w.divs.core(&c)
		switch {
		case !c.valid(0, core):
			price[i] = math.NaN()
			continue
		case c.Time == 0:
			price[i] = c.payoff(0)
			continue
		case c.isCertain(0):
			b.one.certain(0, &c, w.divs)
			price[i] = b.one.Price[0]
			continue
		}
		similar := w.isSimilar(0, &c, core)
		for until < len(b.order) && w.isShared(l, i, b.order[until], similar, core) {
			until++
		}
		w.lay(&c, c.Vol[0], core, similar, tolerance)
		o := job{from: from, until: until, similar: similar, right: w.right(&c), sign: c.Sign, core: core, plan: w.plan}
		o.plan.legs = b.keep(w.plan.legs)
		b.turn = append(b.turn, len(b.jobs))
		b.jobs = append(b.jobs, o)
	}
	slices.SortFunc(b.turn, func(i, k int) int { return cmp.Or(b.jobs[i].compare(&b.jobs[k]), i-k) })
}

// keep returns a copy of legs, which those of the job before may be: volatilities
// that are near each other have the same.
func (b *prices) keep(legs []leg) []leg {
	if last := len(b.jobs) - 1; last >= 0 && slices.Equal(b.jobs[last].plan.legs, legs) {
		return b.jobs[last].plan.legs
	}
	b.legs = append(b.legs, legs...)
	return b.legs[len(b.legs)-len(legs):]
}

// isShared reports whether line k is read from the grid of line i.
func (w *work) isShared(l *Lines, i, k int, similar bool, core float64) bool {
	if !similar {
		return l.compare(i, k) == 0
	}
	if l.compareTerms(i, k) != 0 {
		return false
	}
	c := l.chain(k)
	return c.valid(0, core) && w.isSimilar(0, &c, core)
}

// compare orders jobs by what those of one sweep have in common.
func (o *job) compare(p *job) int {
	if c := cmp.Compare(o.sign, p.sign); c != 0 {
		return c
	}
	if c := cmp.Compare(o.right, p.right); c != 0 {
		return c
	}
	if c := cmp.Compare(o.plan.below, p.plan.below); c != 0 {
		return c
	}
	if c := cmp.Compare(o.plan.above, p.plan.above); c != 0 {
		return c
	}
	return slices.CompareFunc(o.plan.legs, p.plan.legs, func(a, b leg) int {
		return cmp.Or(cmp.Compare(a.steps, b.steps), cmp.Compare(o.plan.event(&a), p.plan.event(&b)))
	})
}

// event tells what happens at the start of a leg: nothing, an ex-date, or one on
// which the price drops by more than rounding leaves of it.
func (p *plan) event(l *leg) int {
	switch {
	case !l.event:
		return 0
	case l.drop/p.unit > 0:
		return 2
	}
	return 1
}

// priceClass prices the lines of jobs that may share sweeps, level by level, as
// refine does.
func (w *work) priceClass(turn []int, l *Lines, price []float64, tolerance float64) {
	b := &w.prices
	for level := 0; len(turn) > 0; level++ {
		left := 0
		for from := 0; from < len(turn); from += lanes {
			if w.stop != nil && w.stop() {
				return
			}
			some := turn[from:min(from+lanes, len(turn))]
			g := w.sweepJobs(some, level, l)
			for j, k := range some {
				if b.settle(&b.jobs[k], g, j, level, l, price, tolerance); b.jobs[k].from < b.jobs[k].until {
					turn[left] = k
					left++
				}
			}
		}
		turn = turn[:left]
	}
}

// sweepJobs sweeps up to eight jobs on one level; lanes to spare repeat the last.
func (w *work) sweepJobs(some []int, level int, l *Lines) *grid {
	b := &w.prices
	var meshes [lanes]*layout
	var strike row
	var before *job
	for j := range lanes {
		o := &b.jobs[some[min(j, len(some)-1)]]
		i := b.order[o.from]
		c := l.chain(i)
		w.op.vol[j], w.op.rate[j], w.op.yield[j] = c.Vol[0], c.Rate, c.Yield
		if strike[j] = 1; !o.similar {
			strike[j] = c.Strike[0] / o.plan.unit
		}
		if before == nil || o.similar != before.similar || l.compareTerms(i, b.order[before.from]) != 0 {
			meshes[j] = &o.plan.layout
		}
		b.divs[j] = b.divs[j].take(&c)
		w.course[j] = course{&o.plan, b.divs[j]}
		before = o
	}
	w.op.openEach(&meshes, level, before.sign)
	grids := w.some(1)
	grids[0].begin(&w.op, before.sign, before.right, &strike)
	w.sweep(level, l.Convention, grids)
	return &grids[0]
}

// settle reads the lines of a job from lane j. It prices those whose error is
// within the tolerance, or that no finer mesh is for, and keeps the others.
func (b *prices) settle(o *job, g *grid, j, level int, l *Lines, price []float64, tolerance float64) {
	left := o.from
	for _, i := range b.order[o.from:o.until] {
		c, scale := l.chain(i), o.plan.unit
		if o.similar {
			scale = c.Strike[0]
		}
		var aim reading
		now := g.read(&aim, g.v, j, o.core/scale)
		a := b.coarse[i]
		b.coarse[i] = now.value
		if level > 0 {
			if now.exercised {
				price[i] = c.payoff(0)
				continue
			}
			price[i] = extrapolated(a, now.value, scale, &c, 0)
			if level == finestLevel || o.plan.errorOf(a, now.value, scale, c.Spot, level) <= tolerance*c.Spot {
				continue
			}
		}
		b.order[left] = i
		left++
	}
	o.until = left
}
