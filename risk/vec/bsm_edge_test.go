package vec_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/vec"
)

// With σ√T = 0 the option is worth what the certain forward makes it.
func TestCertainForward(t *testing.T) {
	const call, put = 1, -1
	qf, rf := math.Exp(-0.03*2), math.Exp(-0.05*2)
	a, k := 100*qf, 90*rf
	type out = map[string]float64
	for _, c := range []struct {
		name string
		line line
		want out // 0 where not named
	}{
		{"expired in the money, call", line{100, 90, 0, .2, .05, .03, call}, out{"price": 10, "delta": 1, "theta": .03*100 - .05*90, "charm": .03}},
		{"expired in the money, put", line{90, 100, 0, .2, .05, .03, put}, out{"price": 10, "delta": -1, "theta": .05*100 - .03*90, "charm": -.03}},
		{"expired out of the money, call", line{90, 100, 0, .2, .05, .03, call}, out{}},
		{"expired out of the money, put", line{100, 90, 0, .2, .05, .03, put}, out{}},
		{"expired, no volatility either", line{100, 90, 0, 0, .05, .03, call}, out{"price": 10, "delta": 1, "theta": .03*100 - .05*90, "charm": .03}},
		{"no volatility, call", line{100, 90, 2, 0, .05, .03, call},
			out{"price": a - k, "delta": qf, "theta": .03*a - .05*k, "rho": 2 * k, "carry_rho": -2 * a, "charm": .03 * qf}},
		{"no volatility, put", line{100, 90, 2, 0, .05, .03, put}, out{}},
		{"no volatility, put in the money", line{90, 100, 2, 0, .03, .05, put},
			out{"price": 100*qf - 90*rf, "delta": -rf, "theta": .03*100*qf - .05*90*rf, "rho": -2 * 100 * qf, "carry_rho": 2 * 90 * rf, "charm": -.05 * rf}},
		{"expired at the strike, call: the mean of both sides", line{100, 100, 0, .2, .05, .03, call}, out{"delta": .5, "theta": (.03*100 - .05*100) / 2, "charm": .015}},
		{"expired at the strike, put: the mean of both sides", line{100, 100, 0, .2, .05, .03, put}, out{"delta": -.5, "theta": (.05*100 - .03*100) / 2, "charm": -.015}},
		{"no volatility, at the forward: the mean of both sides", line{100, 100, 2, 0, .05, .05, call},
			out{"delta": rf / 2, "rho": 100 * rf, "carry_rho": -100 * rf, "charm": .05 * rf / 2}},
	} {
		got := c.line.value()
		for j, name := range outputNames[:10] {
			if want := c.want[name]; math.Abs(got[j]-want) > 1e-14*math.Abs(want) || want == 0 && math.Signbit(got[j]) {
				t.Errorf("%s: %s is %v, want %v", c.name, name, got[j], want)
			}
		}
		if !(got[10] <= 1e-10) { // of 10⁻⁴ of the spot: rounding errors
			t.Errorf("%s: residual %v", c.name, got[10])
		}
	}
}

// The limit is the limit: away from the strike, little volatility or time comes
// close to none.
func TestCertainForwardIsApproached(t *testing.T) {
	rng := rand.New(rand.NewPCG(31, 1))
	for range 1000 {
		l := ordinary(rng)
		l.s = l.k * (1.5 + rng.Float64())
		if rng.IntN(2) == 0 {
			l.s = l.k / (1.5 + rng.Float64())
		}
		for _, c := range []struct{ near, limit line }{
			{line{l.s, l.k, l.t, 1e-7, l.r, l.q, l.w}, line{l.s, l.k, l.t, 0, l.r, l.q, l.w}},
			{line{l.s, l.k, 1e-7, l.v, 0, 0, l.w}, line{l.s, l.k, 0, l.v, 0, 0, l.w}},
		} {
			near, limit := c.near.value(), c.limit.value()
			for j, name := range outputNames[:10] {
				if math.Abs(near[j]-limit[j]) > 1e-6*(1+l.s) {
					t.Fatalf("%s of %v is %v, of %v %v", name, c.near, near[j], c.limit, limit[j])
				}
			}
		}
	}
}

// The plain formula used outside the box agrees with the one used inside. It is
// written quite differently, so each checks the other.
func TestBothSidesOfTheBoxAgree(t *testing.T) {
	rng := rand.New(rand.NewPCG(32, 1))
	for range 20000 {
		l := ordinary(rng)
		inside, outside := l.value(), vec.EdgeValue(l.s, l.k, l.t, l.v, l.r, l.q, l.w)
		root := math.Sqrt(l.t)
		scale := [10]float64{l.s + l.k, 1, 1 / (l.s * l.v * root), l.s * root, l.s*l.v/root + l.s + l.k,
			l.t * l.k, l.t * l.s, 1 / l.v, l.s * root / l.v, 1/l.t + 1/(l.v*root)}
		for j := range scale {
			if e := math.Abs(inside[j] - outside[j]); !(e <= 1e-14*scale[j]) {
				t.Fatalf("%s of %v: %v by the terms, %v by the textbook", outputNames[j], l, inside[j], outside[j])
			}
		}
	}
}

// Crossing a side of the box by one float changes nothing that can be seen.
func TestCrossingTheBox(t *testing.T) {
	for _, c := range []struct {
		name            string
		inside, outside line
	}{
		{"time, below", line{100, 100, 0x1p-24, .3, .05, .02, 1}, line{100, 100, math.Nextafter(0x1p-24, 0), .3, .05, .02, 1}},
		{"time, above", line{100, 90, math.Nextafter(256, 0), .3, .05, .02, 1}, line{100, 90, 256, .3, .05, .02, 1}},
		{"volatility, below", line{100, 100, 1, 0x1p-24, 0, 0, -1}, line{100, 100, 1, math.Nextafter(0x1p-24, 0), 0, 0, -1}},
		{"volatility, above", line{100, 90, .01, math.Nextafter(256, 0), .05, .02, -1}, line{100, 90, .01, 256, .05, .02, -1}},
		{"rate", line{100, 90, .5, .3, math.Nextafter(2, 0), .02, 1}, line{100, 90, .5, .3, 2, .02, 1}},
		{"negative rate", line{100, 90, .5, .3, math.Nextafter(-2, 0), .02, -1}, line{100, 90, .5, .3, -2, .02, -1}},
		{"yield", line{100, 90, .5, .3, .02, math.Nextafter(2, 0), 1}, line{100, 90, .5, .3, .02, 2, 1}},
		{"spot, above", line{math.Nextafter(0x1p128, 0), 0x1p127, 1, .5, .05, .02, 1}, line{0x1p128, 0x1p127, 1, .5, .05, .02, 1}},
		{"spot, below", line{0x1p-128, 0x1p-127, 1, .5, .05, .02, 1}, line{math.Nextafter(0x1p-128, 0), 0x1p-127, 1, .5, .05, .02, 1}},
		{"strike, above", line{0x1p127, math.Nextafter(0x1p128, 0), 1, .5, .05, .02, -1}, line{0x1p127, 0x1p128, 1, .5, .05, .02, -1}},
	} {
		in, out := c.inside, c.outside
		if !vec.InBox(in.s, in.k, in.t, in.v, in.r, in.q, in.w) || vec.InBox(out.s, out.k, out.t, out.v, out.r, out.q, out.w) {
			t.Fatalf("%s: the lines do not lie on both sides", c.name)
		}
		x, y := in.value(), out.value()
		for j, name := range outputNames[:10] {
			allowed := 1e-12 * math.Abs(x[j])
			if name == "price" {
				allowed += 1e-15 * (in.s + in.k) // of the terms whose difference it is
			}
			if math.Abs(x[j]-y[j]) > allowed {
				t.Errorf("%s: %s is %v inside and %v outside", c.name, name, x[j], y[j])
			}
		}
	}
}

// Whatever is finite and positive has a value; whatever is not has none.
func TestHostileInputs(t *testing.T) {
	rng := rand.New(rand.NewPCG(33, 1))
	valid, invalid := 0, 0
	for range 200_000 {
		l := hostile(rng)
		finite := true
		for _, x := range []float64{l.s, l.k, l.t, l.v, l.r, l.q} {
			finite = finite && !math.IsNaN(x) && !math.IsInf(x, 0)
		}
		want := finite && l.s > 0 && l.k > 0 && l.t >= 0 && l.v >= 0 && math.Abs(l.w) == 1
		if want {
			valid++
		} else {
			invalid++
		}
		for j, x := range l.value() {
			if math.IsNaN(x) == want || math.IsInf(x, 0) {
				t.Fatalf("%s of %v is %v", outputNames[j], l, x)
			}
		}
	}
	if valid < 10000 || invalid < 10000 {
		t.Errorf("%d valid lines, %d invalid ones", valid, invalid)
	}
}

// At the ends of the number range the value is still the right one.
func TestExtremeButMeaningful(t *testing.T) {
	const call, put = 1, -1
	for _, c := range []struct {
		name   string
		line   line
		output string
		want   float64
	}{
		{"strike out of sight", line{math.MaxFloat64, 100, 1, .2, 0, 0, call}, "price", math.MaxFloat64},
		{"strike out of sight", line{math.MaxFloat64, 100, 1, .2, 0, 0, call}, "delta", 1},
		{"spot almost nothing", line{math.SmallestNonzeroFloat64, 100, 1, .2, 0, 0, put}, "price", 100},
		{"spot almost nothing", line{math.SmallestNonzeroFloat64, 100, 1, .2, 0, 0, put}, "delta", -1},
		{"both subnormal, no rates", line{3e-310, 3e-310, 1, 1e9, 0, 0, call}, "price", 3e-310},
		{"both huge, at the money", line{1e300, 1e300, 1, .2, 0, 0, call}, "price", 1e300 * 0.07965567455405798}, // 2Φ(0.1) − 1, computed with mpmath at 50 digits
		{"for ever", line{100, 100, 1e300, .2, .05, 0, call}, "price", 100},
		{"for ever", line{100, 100, 1e300, .2, .05, 0, put}, "price", 0},
		{"all volatility", line{100, 90, 1, 1e300, 0, 0, put}, "price", 90},
		{"a rate beyond reason", line{100, 90, 1, .2, 1e300, 0, call}, "price", 100},
		{"a rate beyond reason, downwards", line{100, 90, 1, .2, -1e300, 0, put}, "price", math.MaxFloat64},
	} {
		if got := c.line.value()[outputIndex(t, c.output)]; math.Abs(got-c.want) > 1e-15*math.Abs(c.want) {
			t.Errorf("%s: %s of %v is %v, want %v", c.name, c.output, c.line, got, c.want)
		}
	}
}
