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
