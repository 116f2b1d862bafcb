package vec_test

import (
	"math"
	"testing"

	"nightbook/risk/internal/ref"
	"nightbook/risk/vec"
)

// Volatilities from prices that mpmath computed at 80 digits: σ√T from 1e-4 to 6,
// prices down to 1e-300. The rounding of the price alone makes an error of
// ε·price/(σ·vega) in σ.
func TestImpliedVolAgainstReference(t *testing.T) {
	const eps = 0x1p-53
	quotes := ref.Quotes()
	if len(quotes) != 3000 {
		t.Fatalf("%d quotes in the table", len(quotes))
	}
	vol, outcome := []float64{0}, []vec.Implied{0}
	worst, smallest := 0.0, math.Inf(1)
	for _, q := range quotes {
		vec.ImpliedVol(vol, outcome, []float64{q.Forward}, []float64{q.Strike}, []float64{1}, []float64{q.Price}, []float64{q.Sign})
		if outcome[0] != vec.ImpliedOK {
			t.Fatalf("%+v: outcome %d", q, outcome[0])
		}
		s, x := q.TotalVol, math.Log(q.Forward/q.Strike)
		d1 := x/s + s/2
		vega := q.Forward * math.Exp(-d1*d1/2) / math.Sqrt(2*math.Pi) // per unit of s
		limit := 12*eps + 2*eps*q.Price/(s*vega)                      // the attainable one, and six units in the last place
		err := math.Abs(vol[0]/s - 1)
		if !(err <= limit) {
			t.Errorf("%+v: %v, relative error %.3g, limit %.3g", q, vol[0], err, limit)
		}
		worst, smallest = max(worst, err/limit), min(smallest, q.Price)
	}
	t.Logf("largest error: %.2f of the limit; smallest price %.3g", worst, smallest)
}
