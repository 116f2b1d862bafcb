package pde

import "math"

// The sizes of level 0, the coarse mesh of a sweep, at density 1. Each was moved
// by itself on the 1,000 options of TestAgainstLattice at the default tolerance;
// the errors named are of prices, as shares of the spot:
//
//   - reach: from 3 to 5 nothing changes.
//   - densePart, for an equal number of nodes: with 0.7 and 1.5 99 % are within
//     5.5e-6 and 4.6e-6 rather than 4.2e-6; of gamma within 2.4e-5 and 3.8e-5
//     rather than 2.8e-5.
//   - timeSteps: the error of 99 % is 4.5e-6 with 4, 4.2e-6 with 5, 3.7e-6 with 7
//     and 10.
//   - halvings: 95 % are within 9.6e-6 with none, 3.8e-6 with 1, 2.3e-6 with 2 and 3.
//   - evenings: 99 % are within 2.2e-5 with none, 7.0e-6 with 1, 4.2e-6 with 2.
const (
	reach     = 4.0  // of the mesh beyond the spot, in standard deviations
	densePart = 1.0  // width of the dense part, in standard deviations
	nodeStep  = 0.15 // between nodes, in ξ
	timeSteps = 5.0
	halvings  = 3 // of the first step from expiry, where values change fastest
	evenings  = 2 // of the first step before an ex-date

	lowest = 1e-6 // price on a mesh with ex-dates, as a share of the spot
)

// plan is how a sweep is to go, but for the level.
type plan struct {
	layout
	legs []leg
	unit float64 // prices on the mesh are over this

	expected float64 // error left on level 1, as a share of the spot
	rough    bool    // exercise on an eve too near for the mesh to resolve
}

// leg is a run of equal steps back in time.
type leg struct {
	from  float64 // years from now
	dt    float64 // on level 0
	steps int
	event bool    // it begins on the eve of an ex-date
	drop  float64 // by which the price then falls
	ahead int     // the first dividend still to come
}

// On level 1 and density 1, the error before extrapolation was found to be
// firstError·σ√T of the spot; typicalRest of it was left after.
const (
	firstError  = 2.6e-4
	typicalRest = 0.1
)

// density is how much denser than at density 1 the mesh has to be for 0.75 of
// firstError to be within a tolerance, a share of the spot.
func density(sd, tolerance float64) float64 {
	return min(6, max(0.6, math.Sqrt(float64(0.75*firstError*sd)/tolerance)))
}

// lay plans a sweep that is to be read at lognormal prices from lo to hi, its mesh
// densest at unit, which lies between them. No strike comes into it.
func (p *plan) lay(unit, lo, hi, vol float64, c *Chain, divs schedule, tolerance float64) {
	sd := float64(vol * math.Sqrt(c.Time))
	d := density(sd, tolerance)
	drift, half, far := float64((c.Rate-c.Yield)*c.Time), float64(0.5*float64(sd*sd)), float64(reach*sd)
	lo = float64(lo * exp(min(0, drift-half)-far))
	hi = float64(hi * exp(max(0, drift+half)+far))
	if c.Convention == Piecewise {
		lo = max(lo-divs.sum(), float64(0.1*lo))
		if len(divs) > 0 { // lower cells are lost in the rounding of an ex-date, and their prices below its drop
			lo = max(lo, float64(lowest*unit))
		}
	}
	p.unit = unit
	p.width = float64(densePart*sd) + float64(0.5*math.Abs(drift))
	p.layout.step = nodeStep / d
	count := func(x float64) int { return max(4, int(math.Ceil(asinh(x/p.width)/p.layout.step))) }
	p.below, p.above = count(lnRatio(p.unit, lo)), count(lnRatio(hi, p.unit))
	p.layTime(c.Time, divs, math.Ceil(timeSteps*d))
	p.expected = typicalRest * firstError * sd / float64(d*d)
	p.rough = false
	if c.American && c.Sign > 0 && len(divs) > 0 {
		// the kink that the eve leaves in a value is as wide as the price moves until
		// then; the cells of level 1 around the spot should be no wider
		p.rough = float64(vol*math.Sqrt(divs[0].Time)) < float64(0.5*p.layout.step*p.width)
	}
}

// layTime plans the steps from expiry to now, with ex-dates between steps.
func (p *plan) layTime(time float64, divs schedule, steps float64) {
	p.legs = p.legs[:0]
	first := leg{from: time}
	halve := halvings
	for i := len(divs); i >= 0; i-- {
		until := 0.0
		if i > 0 {
			until = divs[i-1].Time
		}
		if length := first.from - until; length > 0 {
			n := max(1, int(math.Round(steps*(length/time))))
			dt := length / float64(n)
			first.dt, first.steps, first.ahead = dt/float64(int(1)<<halve), 1, i
			p.legs = append(p.legs, first)
			next := leg{from: first.from - first.dt, dt: first.dt, steps: 1, ahead: i}
			for range halve {
				p.legs = append(p.legs, next)
				next.from -= next.dt
				next.dt *= 2
			}
			if n > 1 {
				next.steps = n - 1
				p.legs = append(p.legs, next)
			}
			halve = evenings
			first.event, first.drop = false, 0
		}
		if i > 0 {
			first.from, first.event, first.drop = until, true, first.drop+divs[i-1].Amount
		}
	}
}
