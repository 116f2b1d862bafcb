package instrument

import (
	"math"

	"nightbook/risk/model/american"
)

// AmericanOnSpot prices American calls and puts on a spot price.
func AmericanOnSpot(r *Run) { r.american(r.Yield) }

// AmericanOnFuture prices American calls and puts on a futures price, whose yield
// is the rate: Rho holds the futures price.
func AmericanOnFuture(r *Run) {
	r.american(r.Rate)
	for i := range r.N {
		r.Rho[i] += r.CarryRho[i]
		r.CarryRho[i] = 0
	}
}

// american prices by the integral equation of the boundary, and by finite
// differences what that does not reach.
func (r *Run) american(yield []float64) {
	m := r.Methods
	now := american.Results{Greeks: american.Greeks(r.Greeks), Boundary: r.Boundary, Status: resized(m.status, r.N)}
	lines := american.Lines{Spot: r.Spot, Strike: r.Strike, Time: r.Time, Vol: r.Vol, Rate: r.Rate, Yield: yield, Sign: r.Sign}
	m.integral.Solve(&now, &lines)
	m.status = now.Status
	for i, s := range now.Status {
		r.Flags[i], r.PriceError[i] = 0, math.NaN()
		switch s {
		case american.Exercised:
			r.Flags[i] = ExerciseNow
		case american.OutOfReach:
			r.onGrid(i, yield[i], true, &noDividends)
		}
	}
	for step := range r.After {
		lines.Time = r.TimeAfter[step]
		m.after.Resize(r.N)
		m.integral.Solve(&m.after, &lines)
		for i, s := range m.after.Status {
			if now.Status[i] == american.OutOfReach {
				continue // revalued on the grid
			}
			if r.After[step][i] = m.after.Price[i]; s == american.OutOfReach {
				r.gridAfter(i, step, yield[i], true, &noDividends)
			}
		}
	}
}
