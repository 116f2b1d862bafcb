package vec_test

import (
	"math"
	"math/big"
	"testing"

	"nightbook/risk/internal/ref"
	"nightbook/risk/vec"
)

// The largest errors found in the table of package ref, rounded up. Errors are in
// units of the last place of the true value; below the normal numbers that unit
// is the smallest subnormal.
func TestFunctionsAgainstReference(t *testing.T) {
	bound := map[string]struct{ ulp, relative float64 }{
		"exp":      {1.1, 2.0e-16},
		"log":      {1.9, 3.2e-16},
		"logratio": {1.9, 3.2e-16},
		"normpdf":  {2.2, 3.2e-16},
		"normcdf":  {5.0, 7.0e-16},
	}
	one := map[string]func(v ref.Value) float64{
		"exp":      func(v ref.Value) float64 { return vec.Exp1(v.X) },
		"log":      func(v ref.Value) float64 { return vec.Log1(v.X) },
		"logratio": func(v ref.Value) float64 { return vec.LogRatio1(v.X, v.Y) },
		"normpdf":  func(v ref.Value) float64 { return vec.NormPDF1(v.X) },
		"normcdf":  func(v ref.Value) float64 { return vec.NormCDF1(v.X) },
	}
	type worst struct {
		points           int
		ulp, relative, x float64
	}
	found := map[string]*worst{}
	for _, v := range ref.Functions() {
		w := found[v.Func]
		if w == nil {
			w = new(worst)
			found[v.Func] = w
		}
		w.points++
		e, ulp := distance(one[v.Func](v), v.Want)
		if u := e / ulp; u > w.ulp {
			w.ulp, w.x = u, v.X
		}
		if want, _ := v.Want.Float64(); math.Abs(want) >= 0x1p-1022 {
			w.relative = max(w.relative, e/math.Abs(want))
		}
	}
	for name, b := range bound {
		w := found[name]
		if w == nil || w.points < 500 {
			t.Fatalf("too few values of %s in the table", name)
		}
		t.Logf("%-8s %4d values, %.3f ulp at %v, %.3g relative", name, w.points, w.ulp, w.x, w.relative)
		if w.ulp > b.ulp || w.relative > b.relative {
			t.Errorf("%s: %.3f ulp at %v and %.3g relative, allowed %.3g and %.3g", name, w.ulp, w.x, w.relative, b.ulp, b.relative)
		}
	}
}

// distance returns |got − want| and the unit in the last place of want.
func distance(got float64, want *big.Float) (e, ulp float64) {
	d := new(big.Float).SetPrec(2 * ref.Precision).SetFloat64(got)
	e, _ = d.Sub(d, want).Abs(d).Float64()
	near, _ := want.Float64()
	near = math.Abs(near)
	ulp = math.Nextafter(near, math.Inf(1)) - near
	return e, ulp
}

// ½·erfc(−x/√2) loses three digits in the tail; this is what the Mills ratio is for.
func TestTailOfNormCDF(t *testing.T) {
	for _, c := range []struct{ x, want float64 }{ // computed with mpmath at 50 digits
		{-1, 0.15865525393145705142},
		{-5, 2.866515718791939117e-7},
		{-10, 7.619853024160526066e-24},
		{-37, 5.725571222524576823e-300},
	} {
		if got := vec.NormCDF1(c.x); math.Abs(got-c.want) > 7e-16*c.want {
			t.Errorf("NormCDF1(%v) = %v, want %v", c.x, got, c.want)
		}
	}
}

func TestSpecialValues(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	const tiny, huge = math.SmallestNonzeroFloat64, math.MaxFloat64
	const lnTiny, lnHuge = -744.44007192138126, 709.78271289338397 // computed with mpmath at 50 digits
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"Exp1(NaN)", vec.Exp1(nan), nan}, {"Exp1(-Inf)", vec.Exp1(-inf), 0}, {"Exp1(Inf)", vec.Exp1(inf), inf},
		{"Exp1(0)", vec.Exp1(0), 1}, {"Exp1(710)", vec.Exp1(710), inf}, {"Exp1(-746)", vec.Exp1(-746), 0},
		{"Exp1(-745)", vec.Exp1(-745), tiny}, {"Exp1(huge)", vec.Exp1(huge), inf}, {"Exp1(-huge)", vec.Exp1(-huge), 0},
		{"Exp1(tiny)", vec.Exp1(tiny), 1},
		{"Log1(NaN)", vec.Log1(nan), nan}, {"Log1(0)", vec.Log1(0), -inf}, {"Log1(-0)", vec.Log1(math.Copysign(0, -1)), -inf},
		{"Log1(-tiny)", vec.Log1(-tiny), nan}, {"Log1(-Inf)", vec.Log1(-inf), nan}, {"Log1(Inf)", vec.Log1(inf), inf},
		{"Log1(1)", vec.Log1(1), 0}, {"Log1(tiny)", vec.Log1(tiny), lnTiny}, {"Log1(huge)", vec.Log1(huge), lnHuge},
		{"LogRatio1(0, 1)", vec.LogRatio1(0, 1), -inf}, {"LogRatio1(1, 0)", vec.LogRatio1(1, 0), inf}, {"LogRatio1(0, 0)", vec.LogRatio1(0, 0), nan},
		{"LogRatio1(Inf, Inf)", vec.LogRatio1(inf, inf), nan}, {"LogRatio1(1, Inf)", vec.LogRatio1(1, inf), -inf},
		{"LogRatio1(Inf, 1)", vec.LogRatio1(inf, 1), inf}, {"LogRatio1(-1, -1)", vec.LogRatio1(-1, -1), nan}, {"LogRatio1(1, NaN)", vec.LogRatio1(1, nan), nan},
		{"LogRatio1(huge, tiny)", vec.LogRatio1(huge, tiny), lnHuge - lnTiny},
		{"LogRatio1(tiny, huge)", vec.LogRatio1(tiny, huge), lnTiny - lnHuge},
		{"LogRatio1(tiny, tiny)", vec.LogRatio1(tiny, tiny), 0}, {"LogRatio1(huge, huge)", vec.LogRatio1(huge, huge), 0},
		{"NormPDF1(NaN)", vec.NormPDF1(nan), nan}, {"NormPDF1(Inf)", vec.NormPDF1(inf), 0}, {"NormPDF1(-huge)", vec.NormPDF1(-huge), 0},
		{"NormPDF1(0)", vec.NormPDF1(0), 0.3989422804014327},
		{"NormCDF1(NaN)", vec.NormCDF1(nan), nan}, {"NormCDF1(Inf)", vec.NormCDF1(inf), 1}, {"NormCDF1(-Inf)", vec.NormCDF1(-inf), 0},
		{"NormCDF1(0)", vec.NormCDF1(0), 0.5}, {"NormCDF1(huge)", vec.NormCDF1(huge), 1}, {"NormCDF1(-huge)", vec.NormCDF1(-huge), 0},
		{"NormCDF1(-tiny)", vec.NormCDF1(-tiny), 0.5},
	} {
		if !sameBits(c.got, c.want) {
			t.Errorf("%s = %v, want %v", c.name, c.got, c.want)
		}
	}
}
