package instrument

import "nightbook/risk/model"

// VanillaOnSpot prices European calls and puts on a spot price.
func VanillaOnSpot(r *Run) {
	model.BSM(&r.Greeks, r.Spot, r.Strike, r.Time, r.Vol, r.Rate, r.Yield, r.Sign)
	for i := range r.revaluations {
		model.BSMPrice(r.After[i], r.Spot, r.Strike, r.TimeAfter[i], r.Vol, r.Rate, r.Yield, r.Sign)
	}
}

// VanillaOnFuture prices European calls and puts on a futures price.
func VanillaOnFuture(r *Run) {
	model.Black76(&r.Greeks, r.Spot, r.Strike, r.Time, r.Vol, r.Rate, r.Sign)
	for i := range r.revaluations {
		model.BSMPrice(r.After[i], r.Spot, r.Strike, r.TimeAfter[i], r.Vol, r.Rate, r.Rate, r.Sign)
	}
}

// ExpiredVanilla values vanilla options at their payoff.
func ExpiredVanilla(r *Run) {
	model.Payoff(&r.Greeks, r.Spot, r.Strike, r.Sign)
	r.held()
}
