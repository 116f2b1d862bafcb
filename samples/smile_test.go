package samples

import (
	"math"
	"testing"

	"nightbook/schema"
)

// black is the undiscounted Black call at log forward moneyness k and standard
// deviation s, for a forward of 1.
func black(k, s float64) float64 {
	normal := func(x float64) float64 { return math.Erfc(-x/math.Sqrt2) / 2 }
	return normal(-k/s+s/2) - math.Exp(k)*normal(-k/s-s/2)
}

// checkSurface fails where quoted volatilities offer an arbitrage: calls that
// are not convex and falling in the strike, or total variance that falls with
// expiry at the same moneyness. slices[i] is by strike.
func checkSurface(t *testing.T, name string, forward, times []float64, slices [][][2]float64) {
	t.Helper()
	var last func(k float64) float64
	for i, s := range slices {
		T := times[i]
		price := func(j int) float64 { return black(math.Log(s[j][0]/forward[i]), s[j][1]*math.Sqrt(T)) }
		slope := -1.0
		for j := 1; j < len(s); j++ {
			if s[j][0] <= s[j-1][0] {
				t.Errorf("%s slice %d: strikes %v and %v", name, i, s[j-1][0], s[j][0])
			}
			next := (price(j) - price(j-1)) / (s[j][0] - s[j-1][0]) * forward[i]
			if next < slope || next > 0 {
				t.Errorf("%s slice %d strike %v: call slope %v after %v", name, i, s[j][0], next, slope)
			}
			slope = next
		}
		variance := func(k float64) float64 { // linear between the points is enough to compare slices
			at := func(j int) (float64, float64) {
				return math.Log(s[j][0] / forward[i]), s[j][1] * s[j][1] * T
			}
			k0, w0 := at(0)
			if k <= k0 {
				return w0
			}
			for j := 1; j < len(s); j++ {
				k1, w1 := at(j)
				if k <= k1 {
					return w0 + (w1-w0)*(k-k0)/(k1-k0)
				}
				k0, w0 = k1, w1
			}
			return w0
		}
		if last != nil {
			for k := -1.0; k <= 1; k += .01 {
				if variance(k) < last(k) {
					t.Errorf("%s slice %d: total variance falls at moneyness %.2f", name, i, k)
					break
				}
			}
		}
		last = variance
	}
}

func TestDemoSurfacesHoldNoArbitrage(t *testing.T) {
	for seed := range uint64(40) {
		d := newDesk(seed)
		for _, u := range d.underlyings {
			rate, yield := u.ccy.rates[oneYear], u.yield
			if u.kind == schema.FuturePrice {
				rate, yield = 0, 0
			}
			var forward, times []float64
			var slices [][][2]float64
			for _, x := range u.expiries {
				days := int64(x - d.asOf)
				f := forwardPrice(u.price, rate, yield, days)
				var s [][2]float64
				for _, n := range smileNodes {
					v := u.smile.vol(days, n)
					if v < 700 || v > 7000 {
						t.Errorf("seed %d %s: volatility %d", seed, u.name, v)
					}
					s = append(s, [2]float64{float64(u.smile.strike(f, days, n)), float64(v) / 10_000})
				}
				forward, times, slices = append(forward, float64(f)), append(times, float64(days)/365), append(slices, s)
			}
			checkSurface(t, u.name, forward, times, slices)
		}
		if t.Failed() {
			t.Fatalf("seed %d", seed)
		}
	}
}

// The check itself must be able to fail.
func TestSurfaceCheckSeesArbitrage(t *testing.T) {
	cases := map[string][][][2]float64{
		"calendar":  {{{90, .2}, {100, .2}, {110, .2}}, {{90, .1}, {100, .1}, {110, .1}}},
		"butterfly": {{{90, .2}, {100, .8}, {110, .2}}},
	}
	for name, slices := range cases {
		var inner testing.T
		checkSurface(&inner, name, []float64{100, 100}, []float64{.25, .5}, slices)
		if !inner.Failed() {
			t.Errorf("%s arbitrage was not seen", name)
		}
	}
}

func TestIsqrt(t *testing.T) {
	for _, n := range []int64{0, 1, 2, 3, 4, 8, 9, 99, 100, 101, 1 << 40, 1<<62 - 1} {
		r := isqrt(n)
		if r*r > n || (r+1)*(r+1) <= n {
			t.Errorf("isqrt(%d) = %d", n, r)
		}
	}
}

func TestDecimal(t *testing.T) {
	for _, c := range []struct {
		d    decimal
		want string
	}{
		{decimal{0, 0}, "0"}, {decimal{0, 4}, "0"}, {decimal{5, 2}, "0.05"}, {decimal{50, 2}, "0.5"},
		{decimal{425000, 2}, "4250"}, {decimal{-425050, 2}, "-4250.5"}, {decimal{-5, 4}, "-0.0005"}, {decimal{10, 1}, "1"},
	} {
		if got := string(c.d.append(nil, '.')); got != c.want {
			t.Errorf("%v is written %q, want %q", c.d, got, c.want)
		}
	}
	if got := string((decimal{12345, 2}).append(nil, ',')); got != "123,45" {
		t.Errorf("decimal comma: %q", got)
	}
}

func TestExpiries(t *testing.T) {
	var got []string
	for _, x := range expiriesAfter(day(2026, 9, 30), 12) {
		got = append(got, x.String())
	}
	// third Fridays: six months, then March, June, September, December
	want := []string{"2026-10-16", "2026-11-20", "2026-12-18", "2027-01-15", "2027-02-19", "2027-03-19",
		"2027-06-18", "2027-09-17", "2027-12-17", "2028-03-17", "2028-06-16", "2028-09-15"}
	for i := range want {
		if got[i] != want[i] {
			t.Errorf("expiry %d is %s, want %s", i, got[i], want[i])
		}
	}
	if x := lastExpiry(day(2026, 9, 30)).String(); x != "2026-09-18" {
		t.Errorf("last expiry %s", x)
	}
	if x := lastExpiry(day(2027, 1, 15)).String(); x != "2026-12-18" {
		t.Errorf("an expiry on as_of is not before it: %s", x)
	}
}
