package model

import (
	"math"
	"testing"
)

// Values from E. G. Haug, The Complete Guide to Option Pricing Formulas, 2nd
// ed., 2007: from memory, reproduced.
func TestPublishedDigitals(t *testing.T) {
	g := newGreeks(1)
	CashDigital(g, one(100), one(80), one(10), one(0.75), one(0.35), one(0.06), one(0.06), one(-1))
	printed(t, "cash-or-nothing put", g.Price[0], 2.6710)
	AssetDigital(g, one(70), one(65), one(0.5), one(0.27), one(0.07), one(0.05), one(-1))
	printed(t, "asset-or-nothing put", g.Price[0], 20.2069)
}

// printed compares with a value of four decimals.
func printed(t *testing.T, what string, got, want float64) {
	t.Helper()
	if !(math.Abs(got-want) <= 0.5e-4) {
		t.Errorf("%s = %.6f, printed %.4f", what, got, want)
	}
}

// Reiner & Rubinstein 1991, in the table of Haug's book: from memory, reproduced.
func TestPublishedBarriers(t *testing.T) {
	const up, down, in, out, call, put = 1, -1, 1, -1, 1, -1
	for _, c := range []struct {
		what                           string
		sign, side, knock, barrier     float64
		strike90, strike100, strike110 float64
	}{
		{"call down-out", call, down, out, 95, 9.0246, 6.7924, 4.8759},
		{"call up-out", call, up, out, 105, 2.6789, 2.3580, 2.3453},
		{"call down-in", call, down, in, 95, 7.7627, 4.0109, 2.0576},
		{"call up-in", call, up, in, 105, 14.1112, 8.4482, 4.5910},
		{"put down-out", put, down, out, 95, 2.2798, 2.2947, 2.6252},
		{"put up-out", put, up, out, 105, 3.7760, 5.4932, 7.5187},
		{"put down-in", put, down, in, 95, 2.9586, 6.5677, 11.9752},
		{"put up-in", put, up, in, 105, 1.4653, 3.3721, 7.0846},
	} {
		for i, want := range []float64{c.strike90, c.strike100, c.strike110} {
			p, terms := one(0), deal{barrier: c.barrier, rebate: 3, side: c.side, knock: c.knock}.terms()
			BarrierPrice(p, terms, one(100), one(90+10*float64(i)), one(0.5), one(0.25), one(0.08), one(0.04), one(c.sign))
			printed(t, c.what, p[0], want)
		}
	}
}

// Broadie, Glasserman & Kou 1997, table of down-and-out calls watched daily, the
// columns of the continuous and of the corrected barrier: from memory, reproduced.
func TestPublishedMonitoring(t *testing.T) {
	for _, c := range []struct{ barrier, continuous, corrected float64 }{
		{85, 6.308, 6.322}, {87, 6.244, 6.281}, {89, 6.099, 6.184}, {91, 5.808, 5.977}, {93, 5.277, 5.585}, {95, 4.398, 4.907},
	} {
		for i, want := range []float64{c.continuous, c.corrected} {
			p, terms := one(0), deal{barrier: c.barrier, side: -1, knock: -1, gap: float64(i) * 0.2 / 50}.terms()
			BarrierPrice(p, terms, one(100), one(100), one(0.2), one(0.3), one(0.1), one(0), one(1))
			if !(math.Abs(p[0]-want) <= 0.5e-3) {
				t.Errorf("barrier %v: %.5f, printed %.3f", c.barrier, p[0], want)
			}
		}
	}
}

// Haug's book: from memory, reproduced. The arithmetic ones are his example for
// E. Levy 1992.
func TestPublishedAsians(t *testing.T) {
	p := one(0)
	GeometricAsianPrice(p, one(80), one(85), one(0), one(0), one(0.25), one(0.2), one(0.05), one(-0.03), one(-1))
	printed(t, "geometric put", p[0], 4.6922)
	ArithmeticAsianPrice(p, one(6.8), one(6.9), one(0), one(0), one(0.5), one(0.14), one(0.07), one(0.09), one(1))
	printed(t, "arithmetic call", p[0], 0.0944)
	ArithmeticAsianPrice(p, one(6.8), one(6.9), one(0), one(0), one(0.5), one(0.14), one(0.07), one(0.09), one(-1))
	printed(t, "arithmetic put", p[0], 0.2237)
}
