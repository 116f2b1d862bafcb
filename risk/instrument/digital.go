package instrument

import "nightbook/risk/model"

// CashDigitalOnSpot prices options on a spot price that pay a fixed amount.
func CashDigitalOnSpot(r *Run) {
	model.CashDigital(&r.Greeks, r.Spot, r.Strike, r.Payout, r.Time, r.Vol, r.Rate, r.Yield, r.Sign)
	for i := range r.revaluations {
		model.CashDigitalPrice(r.After[i], r.Spot, r.Strike, r.Payout, r.TimeAfter[i], r.Vol, r.Rate, r.Yield, r.Sign)
	}
}

// CashDigitalOnFuture prices options on a futures price that pay a fixed amount.
func CashDigitalOnFuture(r *Run) {
	model.CashDigitalOnFuture(&r.Greeks, r.Spot, r.Strike, r.Payout, r.Time, r.Vol, r.Rate, r.Sign)
	for i := range r.revaluations {
		model.CashDigitalPrice(r.After[i], r.Spot, r.Strike, r.Payout, r.TimeAfter[i], r.Vol, r.Rate, r.Rate, r.Sign)
	}
}

// ExpiredCashDigital values them at their payoff.
func ExpiredCashDigital(r *Run) {
	r.atExpiry()
	CashDigitalOnSpot(r)
}

// AssetDigitalOnSpot prices options that pay one unit of the underlying.
func AssetDigitalOnSpot(r *Run) {
	model.AssetDigital(&r.Greeks, r.Spot, r.Strike, r.Time, r.Vol, r.Rate, r.Yield, r.Sign)
	for i := range r.revaluations {
		model.AssetDigitalPrice(r.After[i], r.Spot, r.Strike, r.TimeAfter[i], r.Vol, r.Rate, r.Yield, r.Sign)
	}
}

// AssetDigitalOnFuture prices options that pay the futures price.
func AssetDigitalOnFuture(r *Run) {
	model.AssetDigitalOnFuture(&r.Greeks, r.Spot, r.Strike, r.Time, r.Vol, r.Rate, r.Sign)
	for i := range r.revaluations {
		model.AssetDigitalPrice(r.After[i], r.Spot, r.Strike, r.TimeAfter[i], r.Vol, r.Rate, r.Rate, r.Sign)
	}
}

// ExpiredAssetDigital values them at their payoff.
func ExpiredAssetDigital(r *Run) {
	r.atExpiry()
	AssetDigitalOnSpot(r)
}
