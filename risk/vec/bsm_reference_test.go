package vec_test

import (
	"math"
	"testing"

	"nightbook/risk/internal/ref"
)

// Every output against 3,000 options computed at 50 digits.
//
// The price is measured against the sum of its two terms, S·e^(−qT)·Φ(w·d₁) and
// K·e^(−rT)·Φ(w·d₂), whose difference it is, and once more against S·e^(−qT) +
// K·e^(−rT). A sensitivity is measured against itself, except that one which
// passes through 0 at ordinary options is measured against the sum of the absolute
// values of its terms: theta and charm, and vanna and volga, whose factors d₁ and
// d₂ are the sums of a logarithm, a drift and ±½σ√T.
func TestBSMAgainstReference(t *testing.T) {
	options := ref.Options()
	if len(options) != 3000 {
		t.Fatalf("%d options in the table", len(options))
	}
	b := newBatch(len(options))
	for i, o := range options {
		line{o.Spot, o.Strike, o.Time, o.Vol, o.Rate, o.Yield, o.Sign}.put(b, i)
	}
	b.All()
	// Bounds for |d₁| < 6 and for the rest of the table, to |d₁| = 30. Far out, the
	// density multiplies the error of d₁ by d₁; the price may not show it.
	bound := [11][2]float64{{1e-15, 1e-15}}
	for j := 1; j < 10; j++ {
		bound[j] = [2]float64{2.5e-14, 2.5e-13}
	}
	bound[10] = [2]float64{5e-16, 5e-16}
	names := append(outputNames[:10:10], "price in S·e^(−qT) + K·e^(−rT)")
	var found [11][2]float64
	var where [11][2]int
	var lines [2]int
	for i, o := range options {
		l := lineAt(b, i)
		root := math.Sqrt(l.t)
		sum := math.Abs(math.Log(l.s/l.k))/(l.v*root) + math.Abs(l.r-l.q)*root/l.v + 0.5*l.v*root // of the terms of d
		d1 := math.Log(l.s/l.k)/(l.v*root) + (l.r-l.q)*root/l.v + 0.5*l.v*root
		far := 0
		if math.Abs(d1) >= 6 {
			far = 1
		}
		lines[far]++
		termS, termK := l.s*math.Abs(o.Delta), math.Abs(o.Rho)/l.t
		density := o.Gamma * l.s * l.v * root // e^(−qT)·φ(d₁)
		scales := [11]float64{
			termS + termK,
			math.Abs(o.Delta),
			o.Gamma,
			o.Vega,
			o.Vega*l.v/(2*l.t) + math.Abs(l.q)*termS + math.Abs(l.r)*termK,
			math.Abs(o.Rho),
			math.Abs(o.CarryRho),
			density * sum / l.v,
			o.Vega * sum * sum / l.v,
			math.Abs(l.q*o.Delta) + density*(0.5*sum/l.t+math.Abs(l.r-l.q)/(l.v*root)),
			l.s*math.Exp(-l.q*l.t) + l.k*math.Exp(-l.r*l.t),
		}
		want := [11]float64{o.Price, o.Delta, o.Gamma, o.Vega, o.Theta, o.Rho, o.CarryRho, o.Vanna, o.Volga, o.Charm, o.Price}
		for j, s := range append(outputs(b)[:10], &b.Price) {
			if scales[j] < 1e-290 {
				continue // about to underflow
			}
			if e := math.Abs((*s)[i]-want[j]) / scales[j]; !(e <= found[j][far]) {
				found[j][far], where[j][far] = e, i
			}
		}
	}
	if lines[0] < 2000 || lines[1] < 600 {
		t.Errorf("%d lines within |d₁| < 6, %d beyond", lines[0], lines[1])
	}
	for j := range found {
		for far, e := range found[j] {
			t.Logf("%-9s %v error %.3g", names[j], [2]string{"|d₁| < 6 ", "|d₁| ≤ 30"}[far], e)
			if !(e <= bound[j][far]) {
				t.Errorf("%s: error %.3g, allowed %.3g, at line %d, %+v", names[j], e, bound[j][far], where[j][far], options[where[j][far]])
			}
		}
	}
}
