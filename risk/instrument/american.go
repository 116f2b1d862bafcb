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
		if s == american.Exercised {
			r.Flags[i] = ExerciseNow
		}
	}
	for step := range r.revaluations {
		lines.Time = r.TimeAfter[step]
		m.after.Resize(r.N)
		m.integral.Solve(&m.after, &lines)
		copy(r.After[step], m.after.Price)
		for i, s := range m.after.Status {
			if s == american.OutOfReach { // then the line is priced on the grid throughout
				now.Status[i] = american.OutOfReach
			}
		}
	}
	r.rows = r.rows[:0]
	for i, s := range now.Status {
		if s == american.OutOfReach {
			r.rows = append(r.rows, int32(i))
		}
	}
	r.onGrid(r.rows, yield, true, nil)
}
