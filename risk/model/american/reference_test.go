package american

import (
	"math"
	"testing"

	"nightbook/risk/internal/ref"
)

// Against a lattice, which knows nothing of boundaries: at Exact as far as the
// lattice itself is good for, at the other settings as far as they promise.
func TestAgainstLattice(t *testing.T) {
	table := ref.AmericanOptions()
	var all []line
	for _, o := range table {
		all = append(all, line{100, o.Strike, o.Time, o.Vol, o.Rate, o.Yield, o.Sign})
	}
	if len(all) < 150 {
		t.Fatalf("%d options in the table", len(all))
	}
	for _, c := range []struct {
		name                     string
		setting                  Setting
		price, delta, gamma, sum float64
	}{
		{"fast", Fast, 1e-4, 1e-5, 1e-5, 1e-1},
		{"default", Default, 2e-5, 1e-6, 1e-6, 2e-2},
		{"exact", Exact, 1e-6, 1e-7, 1e-7, 5e-3},
	} {
		r := solveAll(c.setting, all...)
		worst := func(name string, got []float64, want func(o *ref.AmericanOption) float64, tolerance float64) {
			most, at := -1.0, 0
			for i := range table {
				if e := math.Abs(got[i] - want(&table[i])); !(e <= most) {
					most, at = e, i
				}
			}
			t.Logf("%-8s %-9s within %.1e", c.name, name, most)
			if !(most <= tolerance) {
				t.Errorf("%s: %s of %+v is %v, the lattice has %v", c.name, name, all[at], got[at], want(&table[at]))
			}
		}
		worst("price", r.Price, func(o *ref.AmericanOption) float64 { return o.Price }, c.price)
		worst("delta", r.Delta, func(o *ref.AmericanOption) float64 { return o.Delta }, c.delta)
		worst("gamma", r.Gamma, func(o *ref.AmericanOption) float64 { return o.Gamma }, c.gamma)

		// The lattice has the other three as differences, some over a good part of the
		// way to the exercise region: here are the same differences.
		difference := func(change func(o *line) *float64, step func(o *line) float64) []float64 {
			var up, down []line
			for _, o := range all {
				h := step(&o)
				*change(&o) += h
				up = append(up, o)
				*change(&o) -= 2 * h
				down = append(down, o)
			}
			u, d := solveAll(c.setting, up...).Price, solveAll(c.setting, down...).Price
			for i := range u {
				u[i] = (u[i] - d[i]) / (2 * step(&all[i]))
			}
			return u
		}
		small := func(*line) float64 { return 1e-3 }
		worst("vega", difference(func(o *line) *float64 { return &o.v }, func(o *line) float64 { return 0.01 * o.v }),
			func(o *ref.AmericanOption) float64 { return o.Vega }, c.sum)
		worst("rho", difference(func(o *line) *float64 { return &o.r }, small), func(o *ref.AmericanOption) float64 { return o.Rho }, c.sum)
		worst("carry_rho", difference(func(o *line) *float64 { return &o.q }, small), func(o *ref.AmericanOption) float64 { return o.CarryRho }, c.sum)
	}
}
