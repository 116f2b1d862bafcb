package instrument

import "nightbook/risk/model"

// ForwardOnSpot values forwards on a spot price.
func ForwardOnSpot(r *Run) {
	model.Forward(&r.Greeks, r.Spot, r.Strike, r.Time, r.Rate, r.Yield)
	for i := range r.After {
		model.ForwardPrice(r.After[i], r.Spot, r.Strike, r.TimeAfter[i], r.Rate, r.Yield)
	}
}

// ForwardOnFuture values forwards on a futures price.
func ForwardOnFuture(r *Run) {
	model.ForwardOnFuture(&r.Greeks, r.Spot, r.Strike, r.Time, r.Rate)
	for i := range r.After {
		model.ForwardOnFuturePrice(r.After[i], r.Spot, r.Strike, r.TimeAfter[i], r.Rate)
	}
}

// ExpiredForward values forwards at S − K.
func ExpiredForward(r *Run) {
	clear(r.Sign)
	model.Payoff(&r.Greeks, r.Spot, r.Strike, r.Sign)
	r.held()
}
