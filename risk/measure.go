package risk

import (
	"math"
	"strconv"

	"nightbook/schema"
)

// measure turns the sensitivities of one unit into measures of the position, in
// the line's currency and in the reporting currency, and refuses rows whose
// results are not finite.
func measure(b *schema.Batch) {
	v, d, g := b.Measures[schema.Value], b.Measures[schema.DeltaCash], b.Measures[schema.GammaCash1Pct]
	ve, t1, tb, rh := b.Measures[schema.VegaCash1Pt], b.Measures[schema.ThetaCash1D], b.Measures[schema.ThetaCash1BD], b.Measures[schema.RhoCash1BP]
	for i := range b.N {
		if b.Status[i] == schema.Rejected {
			continue
		}
		units, s, price := b.Quantity[i]*b.Multiplier[i], b.Spot[i], b.Price[i]
		v[i] = price * units
		b.DeltaUnits[i] = float64(b.Delta[i] * units)
		d[i] = b.DeltaUnits[i] * s
		g[i] = b.Gamma[i] * s * s / 100 * units
		ve[i] = b.Vega[i] / 100 * units
		t1[i] = (t1[i] - price) * units
		tb[i] = (tb[i] - price) * units
		rh[i] = b.Rho[i] / 10_000 * units
		fx := b.FX[i]
		check := notFinite(b.DeltaUnits[i])
		for m := range b.Measures {
			x := float64(b.Measures[m][i] * fx)
			b.MeasuresInBase[m][i] = x
			check += notFinite(x)
		}
		for _, s := range [...][]float64{b.Price, b.Delta, b.Gamma, b.Vega, b.Rho, b.CarryRho, b.Vanna, b.Volga, b.Charm, b.Theta} {
			check += notFinite(s[i])
		}
		if check != 0 {
			reason := "a result is beyond the range of a double: check quantity " + number(b.Quantity[i]) +
				", multiplier " + number(b.Multiplier[i]) + ", strike " + number(b.Strike[i]) + ", vol " + number(b.VolUsed[i]) + " and the price of the underlying"
			if math.IsNaN(b.Price[i]) {
				reason = "model " + schema.Models[b.Model[i]] + " has no value for such terms: vol " + number(b.VolUsed[i]) + " over " + number(b.Time[i]) +
					" years, strike " + number(b.Strike[i]) + ", spot " + number(b.Spot[i]) + "; check them, and the rates"
			}
			refuse(b, i, schema.NotFinite, "", "", reason)
		}
	}
}

// notFinite is 0 for an x below half the largest double, else NaN: a kernel
// gives the largest double itself for a result that is beyond it.
func notFinite(x float64) float64 {
	x = float64(x * 2) // no fused product may stand for x here
	return x - x
}

// refuse marks row i as rejected. The caller of the engine adds where the row
// stands; see schema.Reject.
func refuse(b *schema.Batch, i int, code schema.RejectCode, column, value, reason string) uint8 {
	b.Status[i] = schema.Rejected
	b.Rejects = append(b.Rejects, schema.Reject{
		Line: b.Line[i], Column: column, Code: code, Value: value, Reason: reason, Row: b.Row(i), Index: i,
	})
	return noRoute
}

func number(x float64) string {
	if x != x {
		return "(none)"
	}
	return strconv.FormatFloat(x, 'g', -1, 64)
}
