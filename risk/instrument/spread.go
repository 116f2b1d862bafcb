package instrument

import "nightbook/risk/model"

// VanillaOnSpread prices European calls and puts on a spread, whose price may be
// negative and whose volatility is in units of that price.
func VanillaOnSpread(r *Run) {
	model.Bachelier(&r.Greeks, r.Spot, r.Strike, r.Time, r.Vol, r.Rate, r.Sign)
	for i := range r.revaluations {
		model.BachelierPrice(r.After[i], r.Spot, r.Strike, r.TimeAfter[i], r.Vol, r.Rate, r.Sign)
	}
}
