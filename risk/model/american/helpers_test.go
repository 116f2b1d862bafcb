package american

import (
	"math"
	"math/rand/v2"
	"testing"
)

// line is one option of a test.
type line struct{ s, k, t, v, r, q, w float64 }

func linesOf(all ...line) *Lines {
	l := new(Lines)
	for _, o := range all {
		l.Spot, l.Strike, l.Time, l.Vol = append(l.Spot, o.s), append(l.Strike, o.k), append(l.Time, o.t), append(l.Vol, o.v)
		l.Rate, l.Yield, l.Sign = append(l.Rate, o.r), append(l.Yield, o.q), append(l.Sign, o.w)
	}
	return l
}

// solveAll values lines in one batch.
func solveAll(setting Setting, all ...line) *Results {
	r := new(Results)
	r.Resize(len(all))
	NewSolver(setting).Solve(r, linesOf(all...))
	return r
}

func between(rng *rand.Rand, a, b float64) float64 { return a * math.Exp(rng.Float64()*math.Log(b/a)) }

// ordinary draws an option from the range the accuracy is promised for.
func ordinary(rng *rand.Rand) line {
	return line{s: between(rng, 50, 200), k: 100, t: between(rng, 7./365, 3), v: between(rng, 0.05, 0.8),
		r: 0.1 * rng.Float64(), q: 0.12 * rng.Float64(), w: float64(1 - 2*rng.IntN(2))}
}

func ordinaryLines(n int, seed uint64) []line {
	rng := rand.New(rand.NewPCG(seed, 1))
	all := make([]line, n)
	for i := range all {
		all[i] = ordinary(rng)
	}
	return all
}

// wild draws any option that makes sense, and more of what is awkward.
func wild(rng *rand.Rand) line {
	o := line{k: 100, t: between(rng, 1./365/24, 30), v: between(rng, 0.005, 3), w: float64(1 - 2*rng.IntN(2))}
	o.s = between(rng, 1, 10000)
	if rng.IntN(2) == 0 {
		o.s = 100 * math.Exp(o.v*math.Sqrt(o.t)*3*(2*rng.Float64()-1))
	}
	o.r, o.q = between(rng, 1e-6, 0.3), between(rng, 1e-6, 0.3)
	if rng.IntN(4) == 0 {
		o.q = -o.q
	}
	switch rng.IntN(10) {
	case 0, 1:
		o.r = -o.r
	case 2:
		o.r = 0
	case 3:
		o.q = 0
	case 4:
		o.q = o.r
	case 5:
		o.q = o.r * (1 + 1e-3*rng.NormFloat64())
	}
	if o.w > 0 {
		o.r, o.q = o.q, o.r
	}
	return o
}

// near fails the test unless |got − want| ≤ tolerance.
func near(t *testing.T, name string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.12g, want %.12g within %g", name, got, want, tolerance)
	}
}

var names = [...]string{"price", "delta", "gamma", "vega", "theta", "rho", "carry_rho", "vanna", "volga", "charm", "residual", "boundary"}

func row(r *Results, i int) (x [12]float64) {
	for k, c := range r.columns() {
		x[k] = (*c)[i]
	}
	return x
}
