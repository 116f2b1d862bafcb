package american

import (
	"math"

	"nightbook/risk/vec"
)

// store writes line i from lane j.
func (s *block) store(r *Results, i int, l *Lines, j int) {
	t, vol, rate, yield := l.Time[i], l.Vol[i], l.Rate[i], l.Yield[i]
	spot, strike, sign := l.Spot[i], l.Strike[i], l.Sign[i]
	now, o := &s.curve.now, &s.quote.value
	call := sign > 0
	unit := strike
	r.Boundary[i] = strike * now.boundary[j]
	if call {
		unit = spot
		r.Boundary[i] = strike / now.boundary[j]
	}
	payoff := float64(sign * (spot - strike))
	if s.quote.x[j] <= 0-now.h[j] {
		boundary := r.Boundary[i]
		r.fill(i, 0, Exercised)
		r.Price[i], r.Delta[i], r.Residual[i], r.Boundary[i] = payoff, sign, math.NaN(), boundary
		return
	}
	// Derivatives in ln S; for calls S is the strike of the put as well.
	p, slope, bend, third := o.p[j], o.x[j], o.xx[j]-o.x[j], o.xxx[j]-o.x[j]
	slopeVol, rhoUnit, carryUnit := o.xv[j], o.a[j], o.b[j]
	if call {
		slope, third, slopeVol = p-slope, 0-third, o.v[j]-slopeVol
		rhoUnit, carryUnit = carryUnit, rhoUnit
	} else {
		third = math.FMA(-3, bend, third) // pₓₓₓ − 3pₓₓ + 2pₓ
	}
	root, perSpot := math.Sqrt(t), 1/spot
	cash := float64(unit * slope)                       // S·Δ
	curve := float64(unit * bend)                       // S²·Γ
	value := larger(larger(float64(unit*p), payoff), 0) // the last digits may fall short
	vega := float64(unit*root) * o.v[j]
	rho, carryRho := float64(unit*t)*rhoUnit, float64(unit*t)*carryUnit
	variance := float64(vol * vol)
	halfVar := 0.5 * variance
	drift := rate - yield
	theta := math.FMA(rate, value, 0-math.FMA(drift, cash, float64(halfVar*curve)))
	r.Status[i] = Held
	r.Price[i], r.Delta[i], r.Gamma[i] = value, cash*perSpot, float64(curve*perSpot)*perSpot
	r.Vega[i], r.Theta[i], r.Rho[i], r.CarryRho[i] = vega, theta, rho, carryRho
	r.Vanna[i] = float64(float64(unit*root)*slopeVol) * perSpot
	r.Volga[i] = float64(unit*t) * o.vv[j]
	r.Charm[i] = math.FMA(yield, cash, 0-math.FMA(drift+variance, curve, float64(halfVar*float64(unit*third)))) * perSpot
	scaling := math.FMA(rate, rho, math.FMA(yield, carryRho, float64(float64(0.5*vol)*vega))) / t // −Θ
	r.Residual[i] = math.Abs(theta+scaling) / max(value, float64(1e-4*spot))
}

// expire sets line i to its payoff.
func (r *Results) expire(i int, l *Lines) {
	spot, strike, rate, yield, sign := l.Spot[i], l.Strike[i], l.Rate[i], l.Yield[i], l.Sign[i]
	r.fill(i, 0, Expired)
	r.Boundary[i], r.Residual[i] = strike, math.NaN()
	gain := float64(sign * (spot - strike))
	share := 0.0
	switch {
	case gain > 0:
		share = 1
	case gain == 0:
		share = 0.5
	}
	r.Price[i] = max(gain, 0)
	r.Delta[i] = sign * share
	r.Theta[i] = float64(sign*share) * (float64(yield*spot) - float64(rate*strike))
	r.Charm[i] = float64(sign*share) * yield
}

// certain values line i without volatility: exercise is at the best of all times t,
//
//	V = max over t of w(S·e^(−qt) − K·e^(−rt)), or 0,
//
// now, at expiry, or where the derivative is 0 in between. From the strike on, and
// past rK/q, exercise gains at once and never gains more later: that is the boundary.
func (r *Results) certain(i int, l *Lines) {
	spot, strike, t, rate, yield, sign := l.Spot[i], l.Strike[i], l.Time[i], l.Rate[i], l.Yield[i], l.Sign[i]
	worth := func(t float64) (asset, cash, v float64) {
		asset, cash = float64(spot*vec.Exp1(float64(-yield*t))), float64(strike*vec.Exp1(float64(-rate*t)))
		return asset, cash, float64(sign * (asset - cash))
	}
	r.fill(i, 0, Held)
	r.Boundary[i] = strike
	if sign < 0 && yield > rate && rate > 0 || sign > 0 && rate > yield && yield > 0 {
		r.Boundary[i] = float64(strike*rate) / yield
	}
	best, at := 0.0, -1.0
	candidates := [3]float64{t, -1, 0}
	if drift := rate - yield; drift != 0 && rate*yield > 0 {
		candidates[1] = (vec.LogRatio1(math.Abs(rate), math.Abs(yield)) - vec.LogRatio1(spot, strike)) / drift
	}
	for _, when := range candidates {
		if when >= 0 && when <= t {
			if _, _, v := worth(when); v > best {
				best, at = v, when
			}
		}
	}
	if at < 0 {
		return
	}
	asset, cash, v := worth(at)
	w := float64(sign * asset)
	r.Price[i], r.Delta[i] = v, w/spot
	if at == 0 {
		r.Status[i], r.Residual[i] = Exercised, math.NaN()
		return
	}
	r.Rho[i], r.CarryRho[i] = float64(sign*at)*cash, float64(-at*w)
	if at == t {
		r.Theta[i] = float64(sign * (float64(yield*asset) - float64(rate*cash)))
		r.Charm[i] = float64(yield * r.Delta[i])
		return
	}
	// The time moves with the spot.
	r.Gamma[i] = float64(yield*w) / (rate - yield) / spot / spot
}
