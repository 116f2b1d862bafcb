package instrument

import "nightbook/risk/model"

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
	r.lessEscrow(func() {
		model.Forward(&r.Greeks, r.rest, r.Strike, r.Time, r.Rate, r.Yield)
	}, func(step int) {
		model.ForwardPrice(r.After[step], r.rest, r.Strike, r.TimeAfter[step], r.Rate, r.Yield)
	})
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
