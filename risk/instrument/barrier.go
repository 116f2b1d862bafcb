package instrument

import "nightbook/risk/model"

// BarrierOnSpot prices single-barrier options on a spot price.
func BarrierOnSpot(r *Run) {
	model.Barrier(&r.Greeks, &r.BarrierTerms, r.Spot, r.Strike, r.Time, r.Vol, r.Rate, r.Yield, r.Sign)
	for i := range r.revaluations {
		model.BarrierPrice(r.After[i], &r.BarrierTerms, r.Spot, r.Strike, r.TimeAfter[i], r.Vol, r.Rate, r.Yield, r.Sign)
	}
}

// BarrierOnFuture prices single-barrier options on a futures price.
func BarrierOnFuture(r *Run) {
	model.BarrierOnFuture(&r.Greeks, &r.BarrierTerms, r.Spot, r.Strike, r.Time, r.Vol, r.Rate, r.Sign)
	for i := range r.revaluations {
		model.BarrierPrice(r.After[i], &r.BarrierTerms, r.Spot, r.Strike, r.TimeAfter[i], r.Vol, r.Rate, r.Rate, r.Sign)
	}
}

// ExpiredBarrier values them at their payoff, the current price telling whether
// the barrier has been touched.
func ExpiredBarrier(r *Run) {
	r.atExpiry()
	BarrierOnSpot(r)
}
