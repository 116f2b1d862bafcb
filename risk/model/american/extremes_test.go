package american

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// Whatever makes sense has a number or a status that says why not; the settings
// agree about which, and no price leaves its bounds.
func TestAnythingThatMakesSense(t *testing.T) {
	rng := rand.New(rand.NewPCG(81, 1))
	all := make([]line, 10000)
	for i := range all {
		all[i] = wild(rng)
	}
	fast, r := solveAll(Fast, all...), solveAll(Default, all...)
	count := map[Status]int{}
	for i, o := range all {
		count[r.Status[i]]++
		rate, yield := o.r, o.q
		if o.w > 0 {
			rate, yield = yield, rate
		}
		twoBoundaries := yield < rate && rate < 0
		if twoBoundaries != (r.Status[i] == OutOfReach) {
			// a boundary that does not converge: at most the odd one of tiny and nearly equal
			// rates, or with a drift of many standard deviations
			if twoBoundaries || max(o.r, o.q) > 1e-4 && max(o.r, o.q)*math.Sqrt(o.t) < 40*o.v {
				t.Errorf("%+v: status %d", o, r.Status[i])
			}
			count[OutOfReach]--
			count[Invalid]++
		}
		if fast.Status[i] != r.Status[i] && !(math.Abs(fast.Price[i]-r.Price[i]) < 1e-3*(o.s+o.k)) {
			t.Errorf("%+v: status %d fast, %d else; prices %v, %v", o, fast.Status[i], r.Status[i], fast.Price[i], r.Price[i])
		}
		x := row(r, i)
		if r.Status[i] == OutOfReach {
			for k, v := range x {
				if v == v {
					t.Errorf("%+v is out of reach, %s %v", o, names[k], v)
				}
			}
			continue
		}
		for k, v := range x[:10] {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				t.Errorf("%+v: %s %v, status %d", o, names[k], v, r.Status[i])
			}
		}
		payoff, most := max(0, o.w*(o.s-o.k)), o.s
		if o.w < 0 {
			most = o.k
		}
		if o.r >= 0 && o.q >= 0 && !(x[0] >= payoff && x[0] <= most*(1+1e-9)) {
			t.Errorf("%+v: price %v", o, x[0])
		}
		if r.Status[i] == Exercised && (x[0] != payoff || x[1] != o.w || x[2] != 0 || x[3] != 0 || x[9] != 0) {
			t.Errorf("%+v is exercised: %v", o, x)
		}
		if r.Status[i] != Never && r.Status[i] != Expired && !(o.w*(x[11]-o.s) > 0) != (r.Status[i] == Exercised) {
			t.Errorf("%+v: boundary %v, status %d", o, x[11], r.Status[i])
		}
	}
	if count[Held] < 4000 || count[Exercised] < 1000 || count[Never] < 1000 || count[OutOfReach] < 100 || count[Invalid] > 10 {
		t.Errorf("cases seen: %v", count)
	}
	t.Logf("cases seen: %v", count)
}

// As time or volatility goes to 0 the price goes to what it is without either.
func TestLimits(t *testing.T) {
	for _, o := range []line{
		{90, 100, 1, 0.3, 0.05, 0.02, -1}, {110, 100, 1, 0.3, 0.05, 0.02, -1}, {100, 100, 1, 0.3, 0.05, 0.02, -1},
		{110, 100, 1, 0.3, 0.02, 0.05, 1}, {90, 100, 1, 0.3, 0.02, 0.05, 1}, {100, 100, 1, 0.3, 0.05, 0.05, 1},
		{100, 100, 1, 0.3, 0.02, 0.06, -1}, {101, 100, 1, 0.3, 0.02, 0.06, -1}, {97, 100, 1, 0.3, 0.06, 0.02, 1},
	} {
		short, flat := o, o
		short.t, flat.v = 0, 0
		end := solveAll(Default, short, flat)
		if end.Status[0] != Expired {
			t.Errorf("%+v: status %d at expiry", o, end.Status[0])
		}
		for _, x := range []float64{1e-2, 1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-9, 1e-12} {
			short.t, flat.v = x, x
			r := solveAll(Default, short, flat)
			near(t, fmt.Sprintf("price of %+v", short), r.Price[0], end.Price[0], 0.2*o.s*math.Sqrt(x))
			if r.Status[1] != OutOfReach {
				near(t, fmt.Sprintf("price of %+v", flat), r.Price[1], end.Price[1], 0.45*o.s*x+1e-9)
			} else if x < 1e-6 || x > 1e-3 {
				t.Errorf("%+v is out of reach", flat)
			}
		}
	}
}

// Without volatility the option is worth the best of all certain values.
func TestCertain(t *testing.T) {
	rng := rand.New(rand.NewPCG(82, 1))
	for range 300 {
		o := line{80 + 40*rng.Float64(), 100, 0.1 + 5*rng.Float64(), 0, 0.2*rng.Float64() - 0.05, 0.2*rng.Float64() - 0.05, float64(1 - 2*rng.IntN(2))}
		r := solveAll(Default, o)
		if r.Status[0] == Never {
			continue
		}
		best := 0.0
		for k := range 20001 {
			u := o.t * float64(k) / 20000
			best = max(best, o.w*(o.s*math.Exp(-o.q*u)-o.k*math.Exp(-o.r*u)))
		}
		near(t, fmt.Sprintf("%+v", o), r.Price[0], best, 1e-7*o.s)
		if s := r.Status[0]; s != Exercised && best > 1e-3 {
			const h = 1e-5
			up, down := o, o
			up.s, down.s = o.s+h*o.s, o.s-h*o.s
			m := solveAll(Default, up, down)
			near(t, "delta", r.Delta[0], (m.Price[0]-m.Price[1])/(2*h*o.s), 1e-4)
			up, down = o, o
			up.r, down.r = o.r+h, o.r-h
			m = solveAll(Default, up, down)
			near(t, "rho", r.Rho[0], (m.Price[0]-m.Price[1])/(2*h), 0.02*o.s)
			near(t, "residual", math.Abs(r.Theta[0]+(o.r-o.q)*o.s*r.Delta[0]-o.r*r.Price[0]), 0, 1e-9*o.s)
		}
	}
}

func TestAtExpiry(t *testing.T) {
	r := solveAll(Default, line{90, 100, 0, 0.3, 0.05, 0.02, -1}, line{110, 100, 0, 0.3, 0.05, 0.02, -1}, line{100, 100, 0, 0.3, 0.05, 0.02, 1})
	for i, want := range [][4]float64{{10, -1, 0, 0.05*100 - 0.02*90}, {0, 0, 0, 0}, {0, 0.5, 0, 0.5 * (0.02*100 - 0.05*100)}} {
		if got := [4]float64{r.Price[i], r.Delta[i], r.Gamma[i], r.Theta[i]}; r.Status[i] != Expired || math.Abs(got[3]-want[3]) > 1e-15 || got[0] != want[0] || got[1] != want[1] || got[2] != want[2] {
			t.Errorf("%v, want %v, status %d", got, want, r.Status[i])
		}
	}
}

func TestInvalid(t *testing.T) {
	good := line{100, 100, 1, 0.2, 0.05, 0.02, -1}
	nan, inf := math.NaN(), math.Inf(1)
	for i, o := range []line{
		{nan, 100, 1, 0.2, 0.05, 0.02, -1}, {0, 100, 1, 0.2, 0.05, 0.02, -1}, {-1, 100, 1, 0.2, 0.05, 0.02, -1}, {inf, 100, 1, 0.2, 0.05, 0.02, -1},
		{100, nan, 1, 0.2, 0.05, 0.02, -1}, {100, 0, 1, 0.2, 0.05, 0.02, -1}, {100, 1e101, 1, 0.2, 0.05, 0.02, -1},
		{100, 100, nan, 0.2, 0.05, 0.02, -1}, {100, 100, -1e-9, 0.2, 0.05, 0.02, -1}, {100, 100, inf, 0.2, 0.05, 0.02, -1},
		{100, 100, 1, nan, 0.05, 0.02, -1}, {100, 100, 1, -0.1, 0.05, 0.02, -1}, {100, 100, 1, 101, 0.05, 0.02, -1},
		{100, 100, 1, 0.2, nan, 0.02, -1}, {100, 100, 1, 0.2, inf, 0.02, -1}, {100, 100, 1, 0.2, 101, 0.02, -1},
		{100, 100, 1, 0.2, 0.05, nan, -1}, {100, 100, 2, 0.2, 0.05, 51, -1},
		{100, 100, 1, 0.2, 0.05, 0.02, 0}, {100, 100, 1, 0.2, 0.05, 0.02, nan}, {100, 100, 1, 0.2, 0.05, 0.02, 2},
	} {
		r := solveAll(Fast, good, o, good)
		if r.Status[1] != Invalid || r.Status[0] != Held || r.Status[2] != Held {
			t.Errorf("case %d: status %v", i, r.Status)
		}
		for k, x := range row(r, 1) {
			if x == x {
				t.Errorf("case %d: %s %v", i, names[k], x)
			}
		}
	}
}

func TestLengthsMustAgree(t *testing.T) {
	refuses := func(name string, change func(l *Lines, r *Results)) {
		t.Helper()
		l, r := linesOf(line{100, 100, 1, 0.2, 0.05, 0.02, -1}, line{100, 100, 1, 0.2, 0.05, 0.02, -1}), new(Results)
		r.Resize(2)
		change(l, r)
		defer func() {
			if recover() != lengthMismatch {
				t.Errorf("%s: no complaint", name)
			}
		}()
		NewSolver(Fast).Solve(r, l)
	}
	for i := range 7 {
		refuses(fmt.Sprint("input ", i), func(l *Lines, r *Results) {
			p := []*[]float64{&l.Spot, &l.Strike, &l.Time, &l.Vol, &l.Rate, &l.Yield, &l.Sign}[i]
			*p = (*p)[:1]
		})
	}
	for i := range 12 {
		refuses(names[i], func(l *Lines, r *Results) { c := r.columns()[i]; *c = (*c)[:1] })
	}
	refuses("status", func(l *Lines, r *Results) { r.Status = r.Status[:1] })
	NewSolver(Exact).Solve(new(Results), new(Lines)) // nothing to do
}

// Once it has seen a batch a solver allocates nothing for another like it.
func TestNothingIsAllocated(t *testing.T) {
	all := slices.DeleteFunc(ordinaryLines(200, 83), func(o line) bool { return o.r < 0.001 })
	l, r, s := linesOf(all...), new(Results), NewSolver(Default)
	r.Resize(len(all))
	s.Solve(r, l)
	if n := testing.AllocsPerRun(5, func() { s.Solve(r, l) }); n != 0 {
		t.Errorf("%v allocations", n)
	}
}
