package model

import (
	"math"
	"testing"
)

// The table is the pair of tails at complex arguments, at 50 digits.
func TestTouchSeriesReference(t *testing.T) {
	worst := 0.0
	rows := readTable(t, "touch", []string{"f", "fa", "fc", "faa", "fac", "fcc"})
	if len(rows) < 140 {
		t.Errorf("%d lines", len(rows))
	}
	for _, row := range rows {
		a, c := row.in["a"], row.in["c"]
		f, fa, fc, faa, fac, fcc := touchSeries(a, c)
		for i, got := range []float64{f, fa, fc, faa, fac, fcc} {
			want := row.results[i]
			// f″ and f′ by a are differences of terms a²·f and a·f
			unit := []float64{f, max(1, a) * f, math.Abs(fc), max(1, a*a) * f, max(1, a) * math.Abs(fc), fcc}[i]
			e := math.Abs(got-want) / max(math.Abs(want), unit)
			if !(e <= 1e-12) {
				t.Errorf("line %d, a %v, c %v: result %d = %v, not %v (error %.2g)", row.line, a, c, i, got, want, e)
			}
			worst = max(worst, e)
		}
	}
	t.Logf("largest error %.1e", worst)
}

// Both forms of the value hold around c = 1, where the one takes over from the other.
func TestTouchFormsAgree(t *testing.T) {
	for _, a := range []float64{0.001, 0.3, 1, 2.5, 3.4, 3.5, 5, 7} {
		for _, c := range []float64{0.25, 0.7, 0.999, 1} {
			f, fa, fc, faa, fac, fcc := touchSeries(a, c)
			x, y := jet{v: a, s: 1, t: 0.5}, jet{v: c, s: 0.25, vol: 1}
			got := x.of2(y, f, fa, fc, faa, fac, fcc)
			g := sqrtOf(y)
			half := x.times(x).scaled(0.5)
			n := y.scaled(-0.5)
			want := leg(half.plus(x.times(g)), n, x.plus(g).scaled(-1)).
				plus(leg(half.minus(x.times(g)), n, g.minus(x)))
			near(t, "touch", got, want, 4000*(1+a*a))
		}
	}
}

// Without a rate it is the chance of touching: that of ending beyond the level and
// its reflection.
func TestFirstTouchWithoutRate(t *testing.T) {
	for _, m := range []float64{-9, -1, -0.3, 0, 0.3, 1, 9} {
		for _, a := range []float64{0.01, 0.5, 3, 12} {
			n := -0.5 * (a + m) * (a + m)
			got := float64(firstTouch(plain(a), plain(m), plain(0), plain(n)))
			tail := func(x float64) float64 { return 0.5 * math.Erfc(x/math.Sqrt2) }
			want := tail(a+m) + math.Exp(-2*a*m)*tail(a-m)
			if !(math.Abs(got-want) <= 1e-13*want) {
				t.Errorf("a %v, m %v: %v, want %v", a, m, got, want)
			}
		}
	}
}
