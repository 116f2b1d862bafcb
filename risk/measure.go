package risk

import (
	"math"
	"strconv"

	"nightbook/schema"
)

// measure turns the sensitivities of one unit into measures of the position, in
// the line's currency and in the reporting currency, for a block of rows, and
// refuses rows whose results are not finite. What it makes of rows refused before
// means nothing.
func measure(b *schema.Batch, from, to int) {
	var units [blockRows]float64
	if outOfRange(b, from, to, units[:to-from]) {
		for i := from; i < to; i++ {
			refuseNotFinite(b, i)
		}
	}
}

// outOfRange sets the measures of rows and reports whether any result of theirs,
// or of a row refused before, is not finite. units is scratch.
func outOfRange(b *schema.Batch, from, to int, units []float64) bool {
	n := len(units)
	rows := func(column []float64) []float64 { return column[from:to][:n] }
	quantity, multiplier := rows(b.Quantity), rows(b.Multiplier)
	for i := range units {
		units[i] = quantity[i] * multiplier[i]
	}
	spot, price, fx := rows(b.Spot), rows(b.Price), rows(b.FX)

	own := rows(b.Measures[schema.Value])
	for i, u := range units {
		own[i] = price[i] * u
	}
	own, deltaUnits, delta := rows(b.Measures[schema.DeltaCash]), rows(b.DeltaUnits), rows(b.Delta)
	for i, u := range units {
		x := float64(delta[i] * u)
		deltaUnits[i] = x
		own[i] = x * spot[i]
	}
	own, gamma := rows(b.Measures[schema.GammaCash1Pct]), rows(b.Gamma)
	for i, u := range units {
		own[i] = gamma[i] * spot[i] * spot[i] / 100 * u
	}
	own, vega := rows(b.Measures[schema.VegaCash1Pt]), rows(b.Vega)
	for i, u := range units {
		own[i] = vega[i] / 100 * u
	}
	for _, step := range [...]schema.Measure{schema.ThetaCash1D, schema.ThetaCash1BD} { // the revaluations wait there
		own = rows(b.Measures[step])
		for i, u := range units {
			own[i] = (own[i] - price[i]) * u
		}
	}
	own, rho := rows(b.Measures[schema.RhoCash1BP]), rows(b.Rho)
	for i, u := range units {
		own[i] = rho[i] / 10_000 * u
	}

	largest := max(
		magnitude(deltaUnits), magnitude(price), magnitude(delta), magnitude(gamma), magnitude(vega), magnitude(rho),
		magnitude(rows(b.Theta)), magnitude(rows(b.CarryRho)), magnitude(rows(b.Vanna)), magnitude(rows(b.Volga)), magnitude(rows(b.Charm)))
	for m := range b.Measures {
		own, base := rows(b.Measures[m]), rows(b.MeasuresInBase[m])
		for i, x := range own {
			y := float64(x * fx[i])
			base[i] = y
			largest = max(largest, math.Float64bits(y)<<1)
		}
	}
	return largest >= notFinite
}

// notFinite is where what is not finite begins, as magnitude counts: at half the
// largest double, for a kernel gives the largest double itself for a result that is
// beyond it.
const notFinite = 0x7fe << 53

// magnitude returns the largest magnitude in a column, by the bits of the double
// without its sign: those of infinities and NaNs are larger than all others.
func magnitude(column []float64) (largest uint64) {
	for _, x := range column {
		largest = max(largest, math.Float64bits(x)<<1)
	}
	return largest
}

// refuseNotFinite refuses row i if any of its results is not finite.
func refuseNotFinite(b *schema.Batch, i int) {
	largest := uint64(0)
	look := func(column []float64) { largest = max(largest, magnitude(column[i:i+1])) }
	for _, s := range [...][]float64{b.DeltaUnits, b.Price, b.Delta, b.Gamma, b.Vega, b.Rho, b.CarryRho, b.Vanna, b.Volga, b.Charm, b.Theta} {
		look(s)
	}
	for _, s := range b.MeasuresInBase {
		look(s)
	}
	if largest < notFinite || b.Status[i] == schema.Rejected {
		return
	}
	reason := "a result is beyond the range of a double: check quantity " + number(b.Quantity[i]) +
		", multiplier " + number(b.Multiplier[i]) + ", strike " + number(b.Strike[i]) + ", vol " + number(b.VolUsed[i]) + " and the price of the underlying"
	if math.IsNaN(b.Price[i]) {
		reason = "model " + schema.Models[b.Model[i]] + " has no value for such terms: vol " + number(b.VolUsed[i]) + " over " + number(b.Time[i]) +
			" years, strike " + number(b.Strike[i]) + ", spot " + number(b.Spot[i]) + "; check them, and the rates"
	}
	refuse(b, i, schema.NotFinite, "", "", reason)
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
