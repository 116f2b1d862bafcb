package instrument

import (
	"nightbook/risk/model"
	"nightbook/risk/vec"
)

// ForwardOnSpot values forwards on a spot price.
func ForwardOnSpot(r *Run) {
	model.Forward(&r.Greeks, r.Spot, r.Strike, r.Time, r.Rate, r.Yield)
	for i := range r.revaluations {
		model.ForwardPrice(r.After[i], r.Spot, r.Strike, r.TimeAfter[i], r.Rate, r.Yield)
	}
}

// ForwardWithDividends values forwards on a share that pays cash dividends before
// they expire.
func ForwardWithDividends(r *Run) {
	model.Forward(&r.Greeks, r.Spot, r.Strike, r.Time, r.Rate, r.Yield)
	for i, d := range r.Dividends {
		model.LessDividends(&r.Greeks, i, r.Time[i], r.Rate[i], r.Yield[i], d.Now)
	}
	for step := range r.revaluations {
		left := r.TimeAfter[step]
		model.ForwardPrice(r.After[step], r.Spot, r.Strike, left, r.Rate, r.Yield)
		for i, d := range r.Dividends {
			gone := float64(d.Drop[step] * vec.Exp1(0-float64(r.Yield[i]*left[i]))) // of the spot
			r.After[step][i] -= gone + model.DividendsWorth(left[i], r.Rate[i], r.Yield[i], d.After[step])
		}
	}
}

// ForwardOnFuture values forwards on a futures price.
func ForwardOnFuture(r *Run) {
	model.ForwardOnFuture(&r.Greeks, r.Spot, r.Strike, r.Time, r.Rate)
	for i := range r.revaluations {
		model.ForwardOnFuturePrice(r.After[i], r.Spot, r.Strike, r.TimeAfter[i], r.Rate)
	}
}

// ExpiredForward values forwards at S − K.
func ExpiredForward(r *Run) {
	clear(r.Sign)
	model.Payoff(&r.Greeks, r.Spot, r.Strike, r.Sign)
	r.held()
}
