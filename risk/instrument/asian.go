package instrument

import "nightbook/risk/model"

// ArithmeticAsianOnSpot prices options on the arithmetic average of a spot price.
func ArithmeticAsianOnSpot(r *Run) {
	model.ArithmeticAsian(&r.Greeks, r.Spot, r.Strike, r.AverageStart, r.Average, r.Time, r.Vol, r.Rate, r.Yield, r.Sign)
	r.averageOn(model.ArithmeticAverageAfter, model.ArithmeticAsianPrice, r.Yield)
}

// ArithmeticAsianOnFuture prices options on the arithmetic average of a futures price.
func ArithmeticAsianOnFuture(r *Run) {
	model.ArithmeticAsianOnFuture(&r.Greeks, r.Spot, r.Strike, r.AverageStart, r.Average, r.Time, r.Vol, r.Rate, r.Sign)
	r.averageOn(model.ArithmeticAverageAfter, model.ArithmeticAsianPrice, r.Rate)
}

// ExpiredArithmeticAsian values them at their payoff.
func ExpiredArithmeticAsian(r *Run) {
	r.atExpiry()
	ArithmeticAsianOnSpot(r)
}

// GeometricAsianOnSpot prices options on the geometric average of a spot price.
func GeometricAsianOnSpot(r *Run) {
	model.GeometricAsian(&r.Greeks, r.Spot, r.Strike, r.AverageStart, r.Average, r.Time, r.Vol, r.Rate, r.Yield, r.Sign)
	r.averageOn(model.GeometricAverageAfter, model.GeometricAsianPrice, r.Yield)
}

// GeometricAsianOnFuture prices options on the geometric average of a futures price.
func GeometricAsianOnFuture(r *Run) {
	model.GeometricAsianOnFuture(&r.Greeks, r.Spot, r.Strike, r.AverageStart, r.Average, r.Time, r.Vol, r.Rate, r.Sign)
	r.averageOn(model.GeometricAverageAfter, model.GeometricAsianPrice, r.Rate)
}

// ExpiredGeometricAsian values them at their payoff.
func ExpiredGeometricAsian(r *Run) {
	r.atExpiry()
	GeometricAsianOnSpot(r)
}

// averageOn revalues options on an average: as days pass at an unchanged spot,
// the average so far moves towards it.
func (r *Run) averageOn(average func(dst, average, spot, start, passed []float64),
	price func(price, spot, strike, start, average, time, vol, rate, yield, sign []float64), yield []float64) {
	for i := range r.revaluations {
		for j, left := range r.TimeAfter[i] {
			r.passed[j] = r.Time[j] - left
			r.startAfter[j] = min(r.AverageStart[j]-r.passed[j], left) // the rounding of two differences
		}
		average(r.averageAfter, r.Average, r.Spot, r.AverageStart, r.passed)
		price(r.After[i], r.Spot, r.Strike, r.startAfter, r.averageAfter, r.TimeAfter[i], r.Vol, r.Rate, yield, r.Sign)
	}
}
