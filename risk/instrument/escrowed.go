package instrument

import (
	"math"

	"nightbook/risk/model"
)

// escrowed prices European options under the escrowed model, in closed form.
func (r *Run) escrowed() {
	for i, d := range r.Dividends {
		value, _ := model.Escrow(r.Time[i], r.Rate[i], r.Yield[i], d.Now)
		r.rest[i] = r.Spot[i] - value
	}
	model.BSM(&r.Greeks, r.rest, r.Strike, r.Time, r.Vol, r.Rate, r.Yield, r.Sign)
	for i, d := range r.Dividends {
		value, byCarry := model.Escrow(r.Time[i], r.Rate[i], r.Yield[i], d.Now)
		r.FromEscrow(i, value, byCarry, r.Rate[i], r.Yield[i])
		r.Boundary[i], r.PriceError[i], r.Flags[i] = math.NaN(), math.NaN(), InClosedForm
	}
	for step := range r.revaluations {
		for i, d := range r.Dividends {
			value, _ := model.Escrow(r.TimeAfter[step][i], r.Rate[i], r.Yield[i], d.After[step])
			r.rest[i] = r.Spot[i] - d.Drop[step] - value
		}
		model.BSMPrice(r.After[step], r.rest, r.Strike, r.TimeAfter[step], r.Vol, r.Rate, r.Yield, r.Sign)
	}
}
