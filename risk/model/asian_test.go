package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestDividedDifferences(t *testing.T) {
	rows := readTable(t, "moments", []string{"e", "de", "dde", "d", "dx", "dz", "dzz"})
	if len(rows) < 140 {
		t.Errorf("%d lines", len(rows))
	}
	worst, worstFar := 0.0, 0.0
	for _, row := range rows {
		x, z := row.in["x"], row.in["z"]
		var got [7]float64
		got[0], got[1], got[2] = meanGrowth(x)
		got[3], got[4], got[5], got[6] = momentDifference(x, z)
		// rounding moves a node by so many times its own ulp
		reach := max(1, (2*math.Abs(x)+z)/10)
		for i, g := range got {
			want := row.results[i]
			e := math.Abs(g-want) / want
			if !(e <= 1e-14*reach) {
				t.Errorf("line %d, x %v, z %v: result %d = %v, not %v (error %.2g)", row.line, x, z, i, g, want, e)
			}
			if reach == 1 {
				worst = max(worst, e)
			}
			worstFar = max(worstFar, e)
		}
	}
	t.Logf("largest error %.1e for 2|x| + z < 10, %.1e overall", worst, worstFar)
}

// asians are the two kinds.
var asians = []string{"geometric asian", "arithmetic asian"}

// An average over no time at expiry is the price at expiry.
func TestAsianOverNoTime(t *testing.T) {
	rng := rand.New(rand.NewPCG(71, 72))
	g, vanilla := newGreeks(1), newGreeks(1)
	for _, name := range asians {
		f := closedFormNamed(t, name)
		for range 2000 {
			d := randomDeal(rng)
			d.start, d.average = d.t, math.NaN() // not looked at
			f.greeks(g, d)
			BSM(vanilla, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
			for i, unit := range f.units(d) {
				got, want := (*g.Slices()[i])[0], (*vanilla.Slices()[i])[0]
				if !(math.Abs(got-want) <= 1e-12*max(unit, math.Abs(want))) {
					t.Fatalf("%s %s of %+v = %v, vanilla %v", name, greekNames[i], d, got, want)
				}
			}
			if !(g.Residual[0] <= 1e-9) {
				t.Fatalf("%s of %+v: residual %v", name, d, g.Residual[0])
			}
		}
	}
}

// Call less put is the forward on the average: in closed form for the price, and
// the same for both strikes of a pair but for their distance.
func TestAsianParity(t *testing.T) {
	rng := rand.New(rand.NewPCG(73, 74))
	p := one(0)
	for range 5000 {
		d := randomDeal(rng)
		ahead, elapsed := max(d.start, 0), max(-d.start, 0)
		left := d.t - ahead
		share := left / (left + elapsed)
		b, nu := d.r-d.q, d.r-d.q-d.v*d.v/2
		growth := 1.0
		if b*left != 0 {
			growth = math.Expm1(b*left) / (b * left)
		}
		mean := map[string]float64{
			"arithmetic asian": share*d.s*math.Exp(b*ahead)*growth + (1-share)*d.average,
			"geometric asian": math.Exp(share*(math.Log(d.s)+nu*(ahead+left/2)) + (1-share)*math.Log(d.average) +
				share*share*d.v*d.v*(ahead+left/3)/2),
		}
		for _, name := range asians {
			f, parity := closedFormNamed(t, name), 0.0
			for _, d.w = range []float64{1, -1} {
				f.price(p, d)
				parity += d.w * p[0]
				if p[0] < 0 {
					t.Fatalf("%s of %+v = %v", name, d, p[0])
				}
			}
			if want := math.Exp(-d.r*d.t) * (mean[name] - d.k); !(math.Abs(parity-want) <= 1e-13*d.sum()) {
				t.Fatalf("%s of %+v: call − put %v, want %v", name, d, parity, want)
			}
		}
	}
}

// With enough behind it the average ends above the strike for certain.
func TestArithmeticAsianDecidedByThePast(t *testing.T) {
	g := newGreeks(1)
	for _, c := range []struct{ k, w, price, delta float64 }{
		{60, 1, math.Exp(-0.05) * (100.0/4*math.Expm1(0.03)/0.03 + 90*0.75 - 60), math.Exp(-0.05) / 4 * math.Expm1(0.03) / 0.03},
		{60, -1, 0, 0},
		{67.5, 1, math.Exp(-0.05) * 100.0 / 4 * math.Expm1(0.03) / 0.03, math.Exp(-0.05) / 4 * math.Expm1(0.03) / 0.03},
	} {
		ArithmeticAsian(g, one(100), one(c.k), one(-3), one(90), one(1), one(0.4), one(0.05), one(0.02), one(c.w))
		if !(math.Abs(g.Price[0]-c.price) <= 1e-13) || !(math.Abs(g.Delta[0]-c.delta) <= 1e-15) || g.Vega[0] != 0 || !(g.Residual[0] <= 1e-12) {
			t.Errorf("%+v: %v, delta %v, vega %v, residual %v", c, g.Price, g.Delta, g.Vega, g.Residual)
		}
	}
	ArithmeticAsian(g, one(100), one(68), one(-3), one(90), one(1), one(0.4), one(0.05), one(0.02), one(1))
	if !math.IsNaN(g.Residual[0]) {
		t.Errorf("residual %v where the lognormal is assumed", g.Residual[0])
	}
}

// At expiry the average is what it is.
func TestAsianAtExpiry(t *testing.T) {
	for _, name := range asians {
		f := closedFormNamed(t, name)
		for _, c := range []struct{ average, start, w, want, delta float64 }{
			{95, -1, 1, 5, 0}, {95, -1, -1, 0, 0}, {85, -1, -1, 5, 0}, {90, -1, 1, 0, 0},
			{50, 0, 1, 10, 1}, // nothing but the spot of 100
		} {
			g := newGreeks(1)
			f.greeks(g, deal{s: 100, k: 90, t: 0, v: 0.2, r: 0.03, q: 0.01, w: c.w, start: c.start, average: c.average})
			if !(math.Abs(g.Price[0]-c.want) <= 1e-13) || g.Delta[0] != c.delta {
				t.Errorf("%s %+v: %v, delta %v", name, c, g.Price[0], g.Delta[0])
			}
		}
	}
}

// A day later at an unchanged spot, with the average moved along, the price has
// changed by theta times the day.
func TestAsianThetaIsTheNextDay(t *testing.T) {
	rng := rand.New(rand.NewPCG(75, 76))
	const dt = 1e-5
	for _, name := range asians {
		f, g, p := closedFormNamed(t, name), newGreeks(1), one(0)
		after := ArithmeticAverageAfter
		if name == "geometric asian" {
			after = GeometricAverageAfter
		}
		for range 2000 {
			d := randomDeal(rng)
			d.t = 0.1 + d.t
			switch rng.IntN(3) {
			case 0:
				d.start = 0
			case 1:
				// begins before the day is over; the assumption of a lognormal
				// average is another one then, and the arithmetic theta jumps
				if name == "geometric asian" {
					d.start = dt / 3
				}
			}
			f.greeks(g, d)
			e, a := d, one(0)
			after(a, one(d.average), one(d.s), one(d.start), one(dt))
			e.t, e.start, e.average = d.t-dt, d.start-dt, a[0]
			f.price(p, e)
			if got, want := (p[0]-g.Price[0])/dt, g.Theta[0]; !(math.Abs(got-want) <= 5e-3*d.sum()*max(d.v*d.v, 0.1)) {
				t.Fatalf("%s of %+v: changes by %v a year, theta %v", name, d, got, want)
			}
		}
	}
}

func TestAverageAfter(t *testing.T) {
	for _, c := range []struct{ average, spot, start, passed, arithmetic, geometric float64 }{
		{90, 100, -3, 1, 92.5, math.Pow(90, 0.75) * math.Pow(100, 0.25)},
		{90, 100, -3, 0, 90, 90},
		{90, 100, 0, 1, 100, 100},
		{90, 100, 0.5, 1, 100, 100},
		{90, 100, 1.5, 1, 90, 90},
		{math.NaN(), 100, 0.5, 1, 100, 100},
	} {
		a, b := one(0), one(0)
		ArithmeticAverageAfter(a, one(c.average), one(c.spot), one(c.start), one(c.passed))
		GeometricAverageAfter(b, one(c.average), one(c.spot), one(c.start), one(c.passed))
		if !(math.Abs(a[0]-c.arithmetic) <= 1e-13) || !(math.Abs(b[0]-c.geometric) <= 1e-13) {
			t.Errorf("%+v: %v and %v", c, a[0], b[0])
		}
	}
}

// A window must end at expiry or before it begins, and one that has begun must
// have an average.
func TestAsianRefusals(t *testing.T) {
	for _, name := range asians {
		f, g, p := closedFormNamed(t, name), newGreeks(1), one(0)
		for _, c := range []struct{ start, average, vol float64 }{
			{1.1, 100, 0.2}, {math.NaN(), 100, 0.2}, {math.Inf(-1), 100, 0.2},
			{-1, math.NaN(), 0.2}, {-1, 0, 0.2}, {-1, -5, 0.2}, {-1, math.Inf(1), 0.2}, {0.5, 100, 101},
		} {
			d := deal{s: 100, k: 90, t: 1, v: c.vol, r: 0.03, q: 0.01, w: 1, start: c.start, average: c.average}
			f.greeks(g, d)
			f.price(p, d)
			if !math.IsNaN(g.Price[0]) || !math.IsNaN(g.Theta[0]) || !math.IsNaN(p[0]) {
				t.Errorf("%s %+v: %v, theta %v, price alone %v", name, c, g.Price[0], g.Theta[0], p[0])
			}
		}
	}
}
