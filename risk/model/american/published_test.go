package american

import (
	"fmt"
	"math"
	"testing"

	"nightbook/risk/vec"
)

// L. Andersen, M. Lake & D. Offengenden, J. Computational Finance 20 (2016): the
// premium of their benchmark option (from memory, reproduced).
func TestBenchmarkPremium(t *testing.T) {
	o := line{100, 100, 1, 0.25, 0.05, 0.05, -1}
	european := make([]float64, 1)
	l := linesOf(o)
	b := vec.BSM{Spot: l.Spot, Strike: l.Strike, Time: l.Time, Vol: l.Vol, Rate: l.Rate, Yield: l.Yield, Sign: l.Sign, Price: european}
	b.Prices()
	for _, c := range []struct {
		setting   Setting
		tolerance float64
	}{{Fast, 1e-5}, {Default, 5e-7}, {Exact, 1e-11}} {
		near(t, fmt.Sprint("premium, setting ", c.setting), solveAll(c.setting, o).Price[0]-european[0], 0.106952702747, c.tolerance)
	}
}

// Greeks of American puts, computed independently in high precision, no publication.
func TestPutGreeks(t *testing.T) {
	for _, c := range []struct {
		line
		price, delta, gamma, vega, rho, theta, boundary float64
	}{
		{line{100, 100, 1, 0.2, 0.05, 0, -1}, 6.09037059, -0.411060, 0.022989, 37.4878, -30.2173, -2.2379, 80.87506},
		{line{100, 100, 1, 0.25, 0.05, 0.05, -1}, 9.56944530, -0.436296, 0.015650, 38.0820, -43.2740, -4.4120, 64.79227},
		{line{36, 40, 1, 0.2, 0.06, 0, -1}, 4.48667436, -0.696807, 0.086725, 10.9357, -10.3327, -0.47361, 32.91466},
	} {
		r := solveAll(Exact, c.line)
		near(t, "price", r.Price[0], c.price, 6e-9)
		near(t, "delta", r.Delta[0], c.delta, 2e-6)
		near(t, "gamma", r.Gamma[0], c.gamma, 1e-6)
		near(t, "vega", r.Vega[0], c.vega, 1e-4)
		near(t, "rho", r.Rho[0], c.rho, 1e-4)
		near(t, "theta", r.Theta[0], c.theta, 1e-4)
		near(t, "boundary", r.Boundary[0], c.boundary, 1e-5)
	}
}

// R. Geske & H. E. Johnson, J. Finance 39 (1984): their set of puts, S 40, r .0488;
// values from memory, reproduced, 4.35271 being the converged value of the last of
// σ .4 and K 40.
func TestGeskeJohnson(t *testing.T) {
	times := [3]float64{0.0833, 0.3333, 0.5833}
	for _, c := range []struct {
		vol, strike float64
		want        [3]float64
	}{
		{0.2, 35, [3]float64{0.0062, 0.2004, 0.4328}},
		{0.2, 40, [3]float64{0.8522, 1.5798, 1.9904}},
		{0.2, 45, [3]float64{5.0000, 5.0883, 5.2670}},
		{0.3, 35, [3]float64{0.0774, 0.6975, 1.2198}},
		{0.3, 40, [3]float64{1.3099, 2.4825, 3.1696}},
		{0.3, 45, [3]float64{5.0597, 5.7056, 6.2436}},
		{0.4, 35, [3]float64{0.2466, 1.3460, 2.1549}},
		{0.4, 40, [3]float64{1.7681, 3.3874, 4.35271}},
		{0.4, 45, [3]float64{5.2868, 6.5099, 7.3830}},
	} {
		for i, want := range c.want {
			r := solveAll(Default, line{40, c.strike, times[i], c.vol, 0.0488, 0, -1})
			near(t, fmt.Sprintf("put σ %v K %v T %v", c.vol, c.strike, times[i]), r.Price[0], want, 1.1e-4)
			if exercised := c.vol == 0.2 && c.strike == 45 && i == 0; (r.Status[0] == Exercised) != exercised {
				t.Errorf("σ %v K %v T %v: status %d", c.vol, c.strike, times[i], r.Status[0])
			}
		}
	}
}

// M. Broadie & J. Detemple, Review of Financial Studies 9 (1996): calls, K 100, T .5
// (from memory, reproduced; the printed values are from a deep binomial tree).
func TestBroadieDetemple(t *testing.T) {
	for _, c := range []struct {
		r, q, vol float64
		want      [5]float64
	}{
		{0.03, 0.07, 0.2, [5]float64{0.219, 1.386, 4.783, 11.098, 20.000}},
		{0.07, 0.03, 0.3, [5]float64{1.664, 4.495, 9.251, 15.798, 23.706}},
	} {
		for i, want := range c.want {
			s := 80 + 10*float64(i)
			near(t, fmt.Sprintf("call S %v r %v", s, c.r), solveAll(Default, line{s, 100, 0.5, c.vol, c.r, c.q, 1}).Price[0], want, 1e-3)
		}
	}
}

// F. A. Longstaff & E. S. Schwartz, Review of Financial Studies 14 (2001), table 1:
// puts, K 40, r .06. The printed values are for 50 dates of exercise a year; these
// are for exercise at any time, computed independently.
func TestLongstaffSchwartz(t *testing.T) {
	for _, c := range []struct{ s, vol, time, want float64 }{
		{36, 0.2, 1, 4.4867}, {36, 0.2, 2, 4.8483}, {36, 0.4, 1, 7.1090}, {36, 0.4, 2, 8.5142},
		{40, 0.2, 1, 2.3196}, {40, 0.2, 2, 2.8900}, {40, 0.4, 1, 5.3183}, {40, 0.4, 2, 6.9235},
		{44, 0.2, 1, 1.1130}, {44, 0.2, 2, 1.6933}, {44, 0.4, 1, 3.9528}, {44, 0.4, 2, 5.6467},
	} {
		near(t, fmt.Sprintf("put %+v", c), solveAll(Default, line{c.s, 40, c.time, c.vol, 0.06, 0, -1}).Price[0], c.want, 6e-5)
	}
}

// Options of a long life come to the perpetual ones: R. C. Merton, Bell J. Economics
// 4 (1973): the put is (K−B)(S/B)^(−β) with B = βK/(1+β).
func TestPerpetual(t *testing.T) {
	for _, c := range []struct{ r, q, vol, time float64 }{{0.1, 0.02, 0.4, 300}, {0.08, 0.1, 0.3, 150}, {0.3, 0, 0.2, 300}} {
		m := (c.r-c.q)/(c.vol*c.vol) - 0.5
		beta := m + math.Sqrt(m*m+2*c.r/(c.vol*c.vol))
		b := 100 * beta / (1 + beta)
		r := solveAll(Exact, line{110, 100, c.time, c.vol, c.r, c.q, -1})
		near(t, "perpetual put", r.Price[0], (100-b)*math.Pow(110/b, -beta), 2e-6)
		near(t, "perpetual boundary", r.Boundary[0], b, 2e-6)
	}
}
