package american

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/vec"
)

// europeanPrices are the prices of the European options with the same terms.
func europeanPrices(all []line) []float64 {
	l, p := linesOf(all...), make([]float64, len(all))
	b := vec.BSM{Spot: l.Spot, Strike: l.Strike, Time: l.Time, Vol: l.Vol, Rate: l.Rate, Yield: l.Yield, Sign: l.Sign, Price: p}
	b.Prices()
	return p
}

func TestWorthNoLess(t *testing.T) {
	all := ordinaryLines(3000, 71)
	r, european := solveAll(Default, all...), europeanPrices(all)
	for i, o := range all {
		payoff := max(0, o.w*(o.s-o.k))
		if p := r.Price[i]; p < payoff || p < european[i]-1e-13*(o.s+o.k) {
			t.Errorf("%+v is worth %v; exercised %v, without the right to exercise %v", o, p, payoff, european[i])
		}
	}
}

// More time is worth more, and the boundary goes away from the strike with it.
func TestMonotoneInTime(t *testing.T) {
	for _, o := range ordinaryLines(20, 72) {
		var all []line
		for k := range 24 {
			o.t = 0.05 + 0.1*float64(k)
			all = append(all, o)
		}
		r := solveAll(Exact, all...)
		for i := 1; i < len(all); i++ {
			if r.Price[i] < r.Price[i-1]-1e-9*o.s {
				t.Errorf("%+v: %v, with less time %v", all[i], r.Price[i], r.Price[i-1])
			}
			if o.w*(r.Boundary[i]-r.Boundary[i-1]) < -1e-9*o.k {
				t.Errorf("%+v: boundary %v, with less time %v", all[i], r.Boundary[i], r.Boundary[i-1])
			}
		}
	}
}

// In the spot the price is convex and its slope lies between those of the payoff;
// at the boundary price and slope pass into the payoff.
func TestConvexInSpot(t *testing.T) {
	for _, o := range ordinaryLines(60, 73) {
		o.s = 100
		boundary := solveAll(Exact, o).Boundary[0]
		var all []line
		for k := range 41 {
			o.s = boundary * math.Exp(-o.w*0.05*o.v*math.Sqrt(o.t)*float64(k-2))
			all = append(all, o)
		}
		r := solveAll(Exact, all...)
		for i, o := range all {
			if r.Gamma[i] < -1e-9 || math.Abs(r.Delta[i]) > 1+1e-9 || o.w*r.Delta[i] < -1e-12 {
				t.Errorf("%+v: delta %v, gamma %v", o, r.Delta[i], r.Gamma[i])
			}
			if exercised := i < 2; i != 2 && exercised != (r.Status[i] == Exercised) {
				t.Errorf("%+v: status %d, the boundary is %v", o, r.Status[i], boundary)
			}
			if i > 0 && o.w*(r.Delta[i]-r.Delta[i-1]) > 1e-9 {
				t.Errorf("%+v: delta %v after %v", o, r.Delta[i], r.Delta[i-1])
			}
		}
		o.s = boundary * math.Exp(-o.w*1e-7)
		at := solveAll(Exact, o)
		near(t, "price at the boundary", at.Price[0], o.w*(o.s-o.k), 1e-9*(o.s+o.k))
		near(t, "delta at the boundary", at.Delta[0], o.w, 1e-4)
		// The equation gives gamma there: ½σ²S²Γ = rK − qS for a put.
		gamma := o.w * (o.q*o.s - o.r*o.k) / (0.5 * o.v * o.v * o.s * o.s)
		near(t, "gamma at the boundary", at.Gamma[0]*o.s, gamma*o.s, 2e-4*(1+gamma*o.s))
	}
}

// Without a gain from exercise the option is the European one, to the last bit:
// the same code values it.
func TestNeverExercised(t *testing.T) {
	rng := rand.New(rand.NewPCG(74, 1))
	var all []line
	for range 500 {
		o := ordinary(rng)
		o.r, o.q = rng.Float64()*0.1, -rng.Float64()*0.1 // a call: the yield is negative
		switch rng.IntN(4) {
		case 0:
			o.q = 0
		case 1:
			o.r, o.q = 0, 0
		case 2:
			o.r = o.q // both negative
		}
		if o.w < 0 {
			o.r, o.q = o.q, o.r
		}
		all = append(all, o)
	}
	r, european := solveAll(Default, all...), europeanPrices(all)
	for i, o := range all {
		if r.Status[i] != Never || r.Price[i] != european[i] || r.Boundary[i] == r.Boundary[i] {
			t.Errorf("%+v: status %d, price %v, European %v, boundary %v", o, r.Status[i], r.Price[i], european[i], r.Boundary[i])
		}
	}
}

// Small gains from exercise join the two cases.
func TestSmallRate(t *testing.T) {
	for _, q := range []float64{-1e-7, 0, 0.03} {
		o := line{100, 100, 1, 0.25, 1e-8, q, -1}
		if q < 0 {
			o.r = 0
		}
		r := solveAll(Default, o)
		if r.Status[0] != Held {
			t.Errorf("q %v: status %d", q, r.Status[0])
		}
		near(t, "price", r.Price[0], europeanPrices([]line{o})[0], 1e-5)
	}
}

// Calls are puts with spot and strike, rate and yield exchanged, and prices scale
// with the currency.
func TestSymmetryAndScale(t *testing.T) {
	for _, o := range ordinaryLines(300, 75) {
		other := line{o.k, o.s, o.t, o.v, o.q, o.r, -o.w}
		scaled := o
		scaled.s, scaled.k = 7*o.s, 7*o.k
		r := solveAll(Fast, o, other, scaled)
		if r.Status[0] != r.Status[1] || r.Status[0] != r.Status[2] {
			t.Errorf("%+v: status %v", o, r.Status)
		}
		near(t, "price of the other side", r.Price[1], r.Price[0], 1e-12*(o.s+o.k))
		near(t, "rho and carry_rho exchanged", r.CarryRho[1], r.Rho[0], 1e-11*(o.s+o.k))
		near(t, "boundaries", r.Boundary[1]*r.Boundary[0], o.s*o.k, 1e-12*o.s*o.k)
		near(t, "scaled price", r.Price[2], 7*r.Price[0], 1e-11*(o.s+o.k))
		near(t, "scaled delta", r.Delta[2], r.Delta[0], 1e-11)
	}
}
