package instrument_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/instrument"
	"nightbook/risk/model/american"
	"nightbook/risk/model/pde"
)

// Where the next day is a business day, both revaluations have the bits that each
// has where they are two.
func TestSameDay(t *testing.T) {
	for name, price := range map[string]func(*instrument.Run){
		"vanilla": instrument.VanillaOnSpot, "vanilla on future": instrument.VanillaOnFuture, "spread": instrument.VanillaOnSpread,
		"cash digital": instrument.CashDigitalOnSpot, "cash digital on future": instrument.CashDigitalOnFuture,
		"asset digital": instrument.AssetDigitalOnSpot, "asset digital on future": instrument.AssetDigitalOnFuture,
		"barrier": instrument.BarrierOnSpot, "barrier on future": instrument.BarrierOnFuture,
		"arithmetic average": instrument.ArithmeticAsianOnSpot, "arithmetic average on future": instrument.ArithmeticAsianOnFuture,
		"geometric average": instrument.GeometricAsianOnSpot, "geometric average on future": instrument.GeometricAsianOnFuture,
		"forward": instrument.ForwardOnSpot, "forward on future": instrument.ForwardOnFuture, "forward with dividends": instrument.ForwardWithDividends,
		"American": instrument.AmericanOnSpot, "American on future": instrument.AmericanOnFuture,
		"American with dividends": instrument.AmericanWithDividends, "European with dividends": instrument.EuropeanWithDividends,
		"stock": instrument.Stock, "expired": instrument.ExpiredVanilla,
	} {
		var runs [2]*instrument.Run
		for k := range runs {
			r := randomRun(50)
			r.SameDay = k > 0
			for _, after := range r.After {
				for i := range after {
					after[i] = math.Inf(1)
				}
			}
			price(r)
			runs[k] = r
		}
		for step := range instrument.Steps {
			for i, want := range runs[0].After[step] {
				if got := runs[1].After[step][i]; math.Float64bits(got) != math.Float64bits(want) || math.IsInf(got, 0) {
					t.Errorf("%s, step %d, line %d: %v, by itself %v", name, step, i, got, want)
				}
			}
		}
	}
}

// randomRun has lines for any product, on a day before a business day. Some have
// rates that only finite differences take.
func randomRun(n int) *instrument.Run {
	rng := rand.New(rand.NewPCG(71, 72))
	r := &instrument.Run{Methods: instrument.NewMethods(american.Default, pde.Piecewise, 1e-4)}
	r.Resize(n)
	const day = 1. / 365
	for i := range n {
		r.Spot[i], r.Strike[i], r.Entry[i] = 100, 80+40*rng.Float64(), 100
		r.Time[i] = day * float64(1+rng.IntN(400))
		r.Vol[i], r.Rate[i], r.Yield[i] = .1+.4*rng.Float64(), .08*rng.Float64()-.03, .06*rng.Float64()-.03
		r.Sign[i] = float64(1 - 2*rng.IntN(2))
		for step := range instrument.Steps {
			r.TimeAfter[step][i] = r.Time[i] - day
		}
		r.Payout[i], r.Barrier[i], r.Side[i], r.Knock[i] = 10, 70, -1, float64(1-2*rng.IntN(2))
		r.Rebate[i], r.Interval[i] = 2, 0
		r.AverageStart[i], r.Average[i] = .5*rng.Float64()-.25, 101
		s := &instrument.Schedule{Now: []pde.Dividend{{Time: .6 * r.Time[i], Amount: 2}}}
		for step := range instrument.Steps {
			if i%3 == 0 {
				s.Drop[step] = 2
			} else {
				s.After[step] = []pde.Dividend{{Time: .6*r.Time[i] - .5*day, Amount: 2}}
			}
		}
		r.Dividends[i] = s
	}
	return r
}
