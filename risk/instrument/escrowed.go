package instrument

import (
	"math"

	"nightbook/risk/model"
	"nightbook/risk/model/pde"
)

// escrowed prices European options under the escrowed model, in closed form.
func (r *Run) escrowed() {
	r.lessEscrow(func() {
		model.BSM(&r.Greeks, r.rest, r.Strike, r.Time, r.Vol, r.Rate, r.Yield, r.Sign)
	}, func(step int) {
		model.BSMPrice(r.After[step], r.rest, r.Strike, r.TimeAfter[step], r.Vol, r.Rate, r.Yield, r.Sign)
	})
	for i := range r.N {
		r.Boundary[i], r.PriceError[i], r.Flags[i] = math.NaN(), math.NaN(), InClosedForm
	}
}

// lessEscrow values contracts as those on r.rest, the spot less what is in escrow
// for dividends: now, with sensitivities, and after each step.
func (r *Run) lessEscrow(value func(), after func(step int)) {
	for i, d := range r.Dividends {
		escrow, _ := pde.Escrow(d.Now, r.Time[i], r.Rate[i]-r.Yield[i])
		r.rest[i] = r.Spot[i] - escrow
	}
	value()
	for i, d := range r.Dividends {
		escrow, byCarry := pde.Escrow(d.Now, r.Time[i], r.Rate[i]-r.Yield[i])
		r.FromEscrow(i, escrow, byCarry, r.Rate[i], r.Yield[i])
	}
	for step := range r.revaluations {
		for i, d := range r.Dividends {
			escrow, _ := pde.Escrow(d.After[step], r.TimeAfter[step][i], r.Rate[i]-r.Yield[i])
			r.rest[i] = r.Spot[i] - d.Drop[step] - escrow
		}
		after(step)
	}
}
