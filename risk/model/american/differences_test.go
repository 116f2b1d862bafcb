package american

import (
	"math"
	"testing"
)

// Every sensitivity is the derivative it claims to be, by differences of the
// exact setting's prices, deltas and vegas at four points around the line.
func TestSensitivitiesAreDerivatives(t *testing.T) {
	const step = 1e-3 // of a typical move: a standard deviation of the spot, a fifth of the others
	var all []line
	for _, o := range ordinaryLines(120, 61) {
		// Differences must not reach into the exercise region, nor across r = q.
		if r := solveAll(Default, o); r.Status[0] == Held && math.Abs(o.r-o.q) > 0.01 && o.r > 0.01 && o.q > 0.01 && o.w*(r.Boundary[0]/o.s-1) > 0.02 {
			all = append(all, o)
		}
	}
	if len(all) < 50 {
		t.Fatalf("%d lines are fit for it", len(all))
	}
	base := solveAll(Exact, all...)
	unit := func(o line, by byte) float64 {
		return map[byte]float64{'s': o.s * o.v * math.Sqrt(o.t), 't': 0.2 * o.t, 'v': 0.2 * o.v, 'r': 0.01, 'q': 0.01}[by]
	}
	moved := func(by byte, h float64) *Results {
		var shifted []line
		for _, o := range all {
			d := h * unit(o, by)
			switch by {
			case 's':
				o.s += d
			case 't':
				o.t -= d // calendar time passing shortens the option
			case 'v':
				o.v += d
			case 'r':
				o.r += d
			case 'q':
				o.q += d
			}
			shifted = append(shifted, o)
		}
		return solveAll(Exact, shifted...)
	}
	for by, derivatives := range map[byte][][2]int{ // what, of what: columns
		's': {{1, 0}, {2, 1}}, 'v': {{3, 0}, {7, 1}, {8, 3}}, 't': {{4, 0}, {9, 1}}, 'r': {{5, 0}}, 'q': {{6, 0}},
	} {
		at := [4]*Results{moved(by, -2*step), moved(by, -step), moved(by, step), moved(by, 2*step)}
		for _, d := range derivatives {
			worst := 0.0
			for i, o := range all {
				f := func(k int) float64 { return row(at[k], i)[d[1]] }
				difference := (8*(f(2)-f(1)) - (f(3) - f(0))) / (12 * step) // fourth order
				got := row(base, i)[d[0]] * unit(o, by)
				scale := [4]float64{o.s, 1, 0, o.s * math.Sqrt(o.t)}[d[1]] // of the column differenced
				e := math.Abs(difference-got) / scale
				if worst = max(worst, e); !(e < 1e-9) {
					t.Errorf("%s of %+v is %v, differences give %v", names[d[0]], o, got/unit(o, by), difference/unit(o, by))
				}
			}
			t.Logf("%-9s times a typical move within %.1e of differences", names[d[0]], worst)
		}
	}
}

// Of theta and the scaling of time nothing is left but the error of the setting.
func TestResidual(t *testing.T) {
	all := ordinaryLines(200, 62)
	for _, c := range []struct {
		setting Setting
		most    float64
	}{{Fast, 2e-3}, {Default, 1e-4}, {Exact, 1e-6}} {
		r, seen := solveAll(c.setting, all...), 0
		for i, x := range r.Residual {
			if r.Status[i] == Exercised {
				if x == x {
					t.Errorf("%+v is exercised and has the residual %v", all[i], x)
				}
				continue
			}
			seen++
			if !(x <= c.most) {
				t.Errorf("setting %d: residual of %+v is %v", c.setting, all[i], x)
			}
		}
		if seen < 120 {
			t.Errorf("%d residuals", seen)
		}
	}
}
