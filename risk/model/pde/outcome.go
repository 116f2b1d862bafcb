package pde

import "math"

// Steps by which the lanes differ.
const (
	volBump  = 0.015 // of the volatility
	rateBump = 1e-3  // over max(1, T)
)

// bumped returns the terms of all lanes.
func bumped(c *Chain, vol float64) terms {
	var t terms
	for j := range lanes {
		t.vol[j], t.rate[j], t.yield[j] = vol, c.Rate, c.Yield
	}
	dv, dr := bumps(c, vol)
	t.vol[volUp] += dv
	t.vol[volDown] -= dv
	t.rate[rateUp] += dr
	t.rate[rateDown] -= dr
	t.yield[yieldUp] += dr
	t.yield[yieldDown] -= dr
	return t
}

func bumps(c *Chain, vol float64) (dv, dr float64) {
	return float64(volBump * vol), rateBump / max(1, c.Time)
}

// outcome is what is read of a line from one mesh, in units of the mesh.
type outcome struct {
	price, delta, gamma, theta, charm, vega, vanna, volga, rho, carryRho float64
	boundary, beyond                                                     float64
	exercised                                                            bool
}

// aim finds where the lines of the group are to be read.
func (w *work) aim(c *Chain) {
	w.at = resize(w.at, len(w.group))
	for k, i := range w.group {
		for j := range lanes {
			x := c.Spot
			if c.Convention == Escrowed {
				escrow, _ := w.divs.worth(w.op.rate[j]-w.op.yield[j], 0)
				x -= escrow
			}
			unit := w.plan.unit
			if w.similar {
				unit = c.Strike[i]
			}
			w.at[k][j] = x / unit
		}
	}
}

// open prepares the sweep of a level: a grid for each strike, or one for the
// strike 1.
func (w *work) open(level int, c *Chain) []grid {
	w.op.open(&w.plan.layout, level, c.Sign)
	for j := range w.course {
		w.course[j] = course{&w.plan, w.divs}
	}
	n := len(w.group)
	if w.similar {
		n = 1
	}
	grids := w.some(n)
	right := w.right(c)
	for k := range grids {
		strike := 1.0
		if !w.similar {
			strike = c.Strike[w.group[k]] / w.plan.unit
		}
		strikes := all(strike)
		grids[k].begin(&w.op, c.Sign, right, &strikes)
	}
	return grids
}

// some returns so many grids.
func (w *work) some(n int) []grid {
	if n > len(w.grids) {
		w.grids = append(w.grids, make([]grid, n-len(w.grids))...)
	}
	return w.grids[:n]
}

// run sweeps from expiry to now on one level and reads the lines of the group,
// then one step further for what needs differences in time.
func (w *work) run(level int, c *Chain, out []outcome) {
	grids := w.open(level, c)
	w.sweep(level, c.Convention, grids)
	l := &w.plan.legs[len(w.plan.legs)-1]
	dt := l.dt / float64(int(1)<<level)
	for k := range out {
		g := &grids[min(k, len(grids)-1)]
		out[k] = g.outcome(&w.at[k], c)
		// with a fixed spot the lognormal part moves as the escrow does
		shift := w.escrowChange(c, l, dt) / w.plan.unit
		var aim reading
		later := g.read(&aim, g.prev, base, w.at[k][base]-shift)
		out[k].theta, out[k].charm = later.value, later.slope
	}
	steps := all(dt)
	w.step(c.Convention, grids, len(w.plan.legs)-1, &row{}, 0, &steps)
	for k := range out {
		g, o := &grids[min(k, len(grids)-1)], &out[k]
		shift := w.escrowChange(c, l, -dt) / w.plan.unit
		var aim reading
		earlier := g.read(&aim, g.v, base, w.at[k][base]-shift)
		o.theta = (o.theta - earlier.value) / (2 * dt)
		o.charm = (o.charm - earlier.slope) / (2 * dt)
	}
}

// outcome reads a line, but for its derivatives by time.
func (g *grid) outcome(x *row, c *Chain) outcome {
	var aim reading
	dv, dr := bumps(c, g.vol[base])
	now := g.read(&aim, g.v, base, x[base])
	vu, vd := g.read(&aim, g.v, volUp, x[volUp]), g.read(&aim, g.v, volDown, x[volDown])
	ru, rd := g.read(&aim, g.v, rateUp, x[rateUp]), g.read(&aim, g.v, rateDown, x[rateDown])
	qu, qd := g.read(&aim, g.v, yieldUp, x[yieldUp]), g.read(&aim, g.v, yieldDown, x[yieldDown])
	o := outcome{
		price: now.value, delta: now.slope, gamma: now.curve, exercised: now.exercised,
		vega:     (vu.value - vd.value) / (2 * dv),
		vanna:    (vu.slope - vd.slope) / (2 * dv),
		volga:    ((vu.value - now.value) - (now.value - vd.value)) / float64(dv*dv),
		rho:      (ru.value - rd.value) / (2 * dr),
		carryRho: (qu.value - qd.value) / (2 * dr),
	}
	o.boundary, o.beyond = g.boundaries(x[base], base)
	return o
}

// escrowChange is by how much the escrow grows in dt from now.
func (w *work) escrowChange(c *Chain, l *leg, dt float64) float64 {
	if c.Convention != Escrowed {
		return 0
	}
	a, _ := w.divs[l.ahead:].worth(c.Rate-c.Yield, dt)
	b, _ := w.divs[l.ahead:].worth(c.Rate-c.Yield, 0)
	return a - b
}

// What is left of the error of the finer mesh after extrapolation, for the
// estimate: half of it. On smooth values it is far less, but the exercise boundary
// and ex-dates leave terms of odd order. Where a kink is not resolved, the error
// falls by half only from mesh to mesh and extrapolation gains nothing.
const (
	keptError  = 0.5
	roughError = 3
)

// How far from the price a boundary is told of, in standard deviations: it is right
// to 1 % up to there, and the end of the mesh soon moves it by ten times that. From
// among exercised prices the end is nearer to it.
const (
	seenHeld      = 4.0
	seenExercised = 2.0
)

// errorOf estimates the error of a price, from those on meshes of a level, b, and
// of the level before, a, both times scale.
func (p *plan) errorOf(a, b, scale, spot float64, level int) float64 {
	kept := keptError
	if p.rough {
		kept = roughError
	}
	return max(kept*math.Abs(b-a)/3*scale, p.expected*spot/float64(int(1)<<(2*level-2)))
}

// richardson extrapolates to none the second-order error of b and, on cells twice
// as wide, a.
func richardson(b, a float64) float64 { return b + (b-a)/3 }

// extrapolated is the price of line i, held, from those of two meshes.
func extrapolated(a, b, scale float64, c *Chain, i int) float64 {
	v := max(0, float64(richardson(b, a)*scale))
	if c.American {
		v = max(v, c.payoff(i))
	}
	return v
}

// payoff is what line i pays if it is exercised now.
func (c *Chain) payoff(i int) float64 { return max(0, float64(c.Sign*(c.Spot-c.Strike[i]))) }

// store writes line i: the outcome of the finer mesh b extrapolated from that of
// the coarser one a, both times scale.
func (b *outcome) store(a *outcome, r *Results, i int, c *Chain, divs schedule, p *plan, level int, scale float64) {
	f := richardson
	r.Boundary[i], r.Beyond[i] = float64(b.boundary*scale), float64(b.beyond*scale)
	if x := f(b.boundary, a.boundary); x == x {
		r.Boundary[i] = float64(x * scale)
	}
	if x := f(b.beyond, a.beyond); x == x {
		r.Beyond[i] = float64(x * scale)
	}
	escrow := 0.0
	if c.Convention == Escrowed {
		escrow, _ = divs.worth(c.Rate-c.Yield, 0)
	}
	seen := seenHeld
	if b.exercised {
		seen = seenExercised
	}
	seen *= float64(c.Vol[i] * math.Sqrt(c.Time))
	for _, x := range [...]*float64{&r.Boundary[i], &r.Beyond[i]} {
		if !(math.Abs(lnRatio(*x, c.Spot-escrow)) <= seen) {
			*x = math.NaN()
		}
		*x += escrow
	}
	if b.exercised {
		at, beyond := r.Boundary[i], r.Beyond[i]
		r.fill(i, 0, Exercised)
		r.Boundary[i], r.Beyond[i] = at, beyond
		r.Price[i], r.Delta[i], r.Residual[i] = c.payoff(i), c.Sign, math.NaN()
		return
	}
	r.Status[i] = Held
	r.Error[i] = p.errorOf(a.price, b.price, scale, c.Spot, level)
	v := extrapolated(a.price, b.price, scale, c, i)
	delta, g, theta := f(b.delta, a.delta), f(b.gamma, a.gamma)/scale, float64(f(b.theta, a.theta)*scale)
	r.Price[i], r.Delta[i], r.Gamma[i], r.Theta[i] = v, delta, g, theta
	r.Vega[i], r.Volga[i] = f(b.vega, a.vega)*scale, f(b.volga, a.volga)*scale
	r.Rho[i], r.CarryRho[i] = f(b.rho, a.rho)*scale, f(b.carryRho, a.carryRho)*scale
	r.Vanna[i], r.Charm[i] = f(b.vanna, a.vanna), f(b.charm, a.charm)
	s, vol := c.Spot-escrow, c.Vol[i]
	e := fma(float64(0.5*float64(vol*vol)), float64(float64(s*s)*g), theta)
	e = fma(c.Rate-c.Yield, float64(c.Spot*delta), e)
	e = fma(-c.Rate, v, e)
	r.Residual[i] = math.Abs(e) / max(math.Abs(v), float64(1e-4*c.Spot))
}
