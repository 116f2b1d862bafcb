package pde

import (
	"math"

	"nightbook/risk/vec"
)

func exp(x float64) float64        { return vec.Exp1(x) }
func lnRatio(a, b float64) float64 { return vec.LogRatio1(a, b) }

// payoff writes line i at its expiry.
func (r *Results) payoff(i int, c *Chain) {
	r.fill(i, 0, Held)
	r.Residual[i], r.Boundary[i], r.Beyond[i] = math.NaN(), math.NaN(), math.NaN()
	if x := float64(c.Sign * (c.Spot - c.Strike[i])); x > 0 {
		r.Price[i], r.Delta[i], r.Status[i] = x, c.Sign, Exercised
	}
}

// path is the price without volatility: a lognormal core, which grows at r − q,
// and an escrow; with the derivatives of the core and of both together by spot,
// rate and yield.
type path struct {
	core, bySpot, coreByRate, byYield float64
	escrow, escrowByCarry             float64
}

func (p *path) grow(rate, yield, dt float64) {
	g := exp(float64((rate - yield) * dt))
	p.coreByRate = float64(g * (p.coreByRate + float64(dt*p.core)))
	p.byYield = float64(g * (p.byYield - float64(dt*p.core)))
	p.core, p.bySpot = float64(g*p.core), float64(g*p.bySpot)
}

func (p *path) drop(amount float64) {
	if p.core -= amount; p.core <= 0 {
		*p = path{escrow: p.escrow, escrowByCarry: p.escrowByCarry}
	}
}

// certain writes line i as if the volatility were 0.
//
// Computes the greatest discounted payoff along the certain path of the price: at
// expiry for a European option; for an American one also now, on both sides of
// each ex-date, and between them where q·S = r·K, S the part of the price that
// grows. Derivatives are those of the payoff at the best time (envelope theorem);
// turns is by how much that time comes sooner for a higher spot.
func (r *Results) certain(i int, c *Chain, divs schedule) {
	k, w, rate, yield := c.Strike[i], c.Sign, c.Rate, c.Yield
	r.payoff(i, c)
	if !c.American {
		r.fill(i, 0, Held)
		r.Boundary[i], r.Beyond[i] = math.NaN(), math.NaN()
	}
	r.Residual[i] = 0
	if r.Status[i] == Exercised {
		r.Residual[i] = math.NaN()
	}
	p := path{core: c.Spot, bySpot: 1}
	if c.Convention == Escrowed {
		v, d := divs.worth(rate-yield, 0)
		p.core, p.coreByRate, p.byYield = p.core-v, -d, d
	}
	try := func(p path, t, turns float64) {
		f := float64(w * exp(-float64(rate*t)))
		v := float64(f * (p.core + p.escrow - k))
		if v <= r.Price[i] {
			return
		}
		delta := float64(f * p.bySpot)
		r.Status[i], r.Price[i], r.Delta[i] = Held, v, delta
		gamma := float64(float64(yield*delta) * turns)
		r.Gamma[i] = gamma
		r.Charm[i] = float64(yield*delta) - float64(float64((rate-yield)*c.Spot)*gamma)
		r.Rho[i] = float64(f*(p.coreByRate+p.escrowByCarry)) - float64(t*v)
		r.CarryRho[i] = float64(f * (p.byYield - p.escrowByCarry))
		r.Theta[i] = float64(rate*v) - float64((rate-yield)*float64(c.Spot*delta))
		r.Residual[i] = 0
	}
	from := 0.0
	for m := 0; ; m++ {
		until := c.Time
		if m < len(divs) {
			until = divs[m].Time
		}
		at := func(t float64) path {
			q := p
			q.grow(rate, yield, t-from)
			if c.Convention == Escrowed {
				q.escrow, q.escrowByCarry = divs[m:].worth(rate-yield, t)
			}
			return q
		}
		if c.American {
			if from > 0 {
				try(at(from), from, 0)
			}
			if turn := lnRatio(rate*k, yield*p.core) / (rate - yield); turn > 0 && turn < until-from && w*yield < 0 == (rate < yield) {
				try(at(from+turn), from+turn, p.bySpot/float64((rate-yield)*p.core))
			}
			try(at(until), until, 0)
		}
		p.grow(rate, yield, until-from)
		from = until
		if m == len(divs) {
			break
		}
		if c.Convention == Piecewise {
			p.drop(divs[m].Amount)
		}
	}
	try(p, c.Time, 0)
}
