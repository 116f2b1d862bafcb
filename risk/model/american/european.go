package american

import (
	"math"

	"nightbook/risk/vec"
)

// european gathers the lines for which exercise is never optimal.
type european struct {
	at                     []int32
	s, k, t, v, r, q, w    []float64
	price, delta, gamma    []float64
	vega, theta, rho       []float64
	carryRho, vanna, volga []float64
	charm, residual        []float64
}

func (e *european) reset() {
	e.at = e.at[:0]
	for _, c := range []*[]float64{&e.s, &e.k, &e.t, &e.v, &e.r, &e.q, &e.w} {
		*c = (*c)[:0]
	}
}

func (e *european) add(i int, l *Lines) {
	e.at = append(e.at, int32(i))
	e.s, e.k, e.t, e.v = append(e.s, l.Spot[i]), append(e.k, l.Strike[i]), append(e.t, l.Time[i]), append(e.v, l.Vol[i])
	e.r, e.q, e.w = append(e.r, l.Rate[i]), append(e.q, l.Yield[i]), append(e.w, l.Sign[i])
}

func (e *european) solve(r *Results) {
	n := len(e.at)
	out := [...]*[]float64{&e.price, &e.delta, &e.gamma, &e.vega, &e.theta, &e.rho, &e.carryRho, &e.vanna, &e.volga, &e.charm, &e.residual}
	for _, c := range out {
		*c = resize(*c, n)
	}
	b := vec.BSM{Spot: e.s, Strike: e.k, Time: e.t, Vol: e.v, Rate: e.r, Yield: e.q, Sign: e.w,
		Price: e.price, Delta: e.delta, Gamma: e.gamma, Vega: e.vega, Theta: e.theta, Rho: e.rho,
		CarryRho: e.carryRho, Vanna: e.vanna, Volga: e.volga, Charm: e.charm, Residual: e.residual}
	b.All()
	to := r.columns()
	for k, c := range out {
		dst := *to[k]
		for j, i := range e.at {
			dst[i] = (*c)[j]
		}
	}
	for _, i := range e.at {
		r.Boundary[i], r.Status[i] = math.NaN(), Never
	}
}
