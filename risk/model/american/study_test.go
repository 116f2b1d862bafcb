package american

import (
	"math"
	"testing"
)

// errors are the root of the mean square and the largest difference of two results
// of one quantity.
type errors struct{ rms, most float64 }

// compare returns the errors of each column of got, in the units of the table in
// doc.go, over the lines that neither exercises.
func compare(all []line, got, want *Results) (e [12]errors) {
	for i, o := range all {
		g, w := row(got, i), row(want, i)
		if got.Status[i] == Exercised || want.Status[i] == Exercised {
			for k := 2; k < 11; k++ {
				g[k], w[k] = 0, 0
			}
		}
		scale := [12]float64{1, 1, 1 / o.s, o.s, o.s, o.s, o.s, 1, o.s, 1, 1, o.k}
		for k := range g {
			d := math.Abs(g[k]-w[k]) / scale[k]
			if k == 11 && want.Status[i] == Never {
				d = 0
			}
			e[k].rms += d * d
			if !(d <= e[k].most) {
				e[k].most = d
			}
		}
	}
	for k := range e {
		e[k].rms = math.Sqrt(e[k].rms / float64(len(all)))
	}
	return e
}

// limit values lines at a size beyond that of Exact.
func limit(all []line) *Results {
	s := NewSolver(Exact)
	s.blocks[s.first] = newBlock(newRule(size{points: 76, inner: 88, outer: 221, sweeps: 8}), s.width)
	r := new(Results)
	r.Resize(len(all))
	s.Solve(r, linesOf(all...))
	return r
}

// TestErrorStudy is the study of doc.go, with 1,000 options for Fast and Default,
// against Exact, and 150 for Exact, against the limit.
func TestErrorStudy(t *testing.T) {
	all := ordinaryLines(1000, 5)
	exact := solveAll(Exact, all...)
	for _, c := range []struct {
		name    string
		setting Setting
		rms     float64 // of the price, K = 100
		most    [12]float64
	}{
		{"fast", Fast, 1e-5, [12]float64{1e-4, 1e-5, 1e-3, 1e-3, 5e-5, 3e-3, 3e-3, 1e-2, 5e-2, 3e-2, 1e-3, 1e-3}},
		{"default", Default, 1e-6, [12]float64{2e-5, 5e-6, 3e-4, 2e-5, 2e-5, 1e-4, 1e-4, 5e-3, 2e-2, 5e-3, 5e-5, 1e-3}},
		{"exact", Exact, 1e-10, [12]float64{1e-9, 3e-9, 1e-6, 5e-9, 5e-8, 1e-7, 1e-7, 1e-6, 2e-6, 1e-5, 1e-7, 1e-9}},
	} {
		all, got, want := all, exact, exact
		if c.setting == Exact {
			all = all[:150]
			want = limit(all)
		} else {
			got = solveAll(c.setting, all...)
		}
		e := compare(all, got, want)
		for k, e := range e {
			t.Logf("%-8s %-9s rms %.1e largest %.1e", c.name, names[k], e.rms, e.most)
			if !(e.most <= c.most[k]) || k == 0 && !(e.rms <= c.rms) {
				t.Errorf("%s: %s off by rms %.2g, largest %.2g", c.name, names[k], e.rms, e.most)
			}
		}
		for i := range all {
			if got.Status[i] != want.Status[i] {
				near(t, "price of a line with another status", got.Price[i], want.Price[i], 1e-6)
			}
		}
	}
}
