package invent

import (
	"fmt"
	"math"

	"nightbook/schema"
)

// Extra are house columns that lines made up here carry.
var Extra = []string{"trader", "comment"}

// Lines returns n lines beginning with line from, as a batch whose frame is one
// of schema.LinesTable(Extra). The figures look like a desk's and mean nothing.
func Lines(from, n int, dicts *schema.Dicts) *schema.Batch {
	b := &schema.Batch{Positions: schema.Positions{Extra: make([]schema.Strings, len(Extra))}}
	b.Resize(n)
	for i := range n {
		row := from + i
		u := func(col int) float64 { return float64(hash(uint64(row)<<8|uint64(col))>>11) / (1 << 53) }
		option := row%5 != 0
		b.LineID.AppendString(fmt.Sprintf("T%08d", row))
		b.Book[i] = dicts.Books.Code(fmt.Sprintf("Book %02d", row/50%40))
		name := row / 7 % 300
		b.Underlying[i] = dicts.Underlyings.Code(fmt.Sprintf("NAME%03d", name))
		currency := []string{"USD", "EUR", "GBP"}[name%3]
		b.Currency[i], b.Curve[i] = dicts.Currencies.Code(currency), dicts.Curves.Code(currency)
		b.Strategy[i] = dicts.Strategies.Code([]string{"", "carry", "hedge", "event"}[row%4])
		b.Quantity[i] = math.Round((u(1)-0.5)*200) * 10
		b.Multiplier[i] = 100
		b.Expiry[i], b.ExpiryMinute[i], b.Strike[i] = schema.NoDate, schema.NoMinute, math.NaN()
		b.OptionType[i], b.Exercise[i], b.Payoff[i], b.VolSource[i] = 0, 0, 0, 0
		b.Mark[i], b.EntryPrice[i] = math.NaN(), math.NaN()
		for _, f := range b.Results.Floats() {
			(*f)[i] = math.NaN()
		}
		spot := 50 + float64(name)
		b.Instrument[i], b.Model[i], b.Status[i] = schema.Stock, schema.ModelMark, schema.Priced
		b.DividendModel[i] = schema.Piecewise
		b.Spot[i], b.FX[i], b.Price[i] = spot, []float64{1, 1.08, 1.27}[name%3], spot
		b.Delta[i] = 1
		for _, f := range [][]float64{b.Gamma, b.Vega, b.Theta, b.Rho, b.CarryRho, b.Vanna, b.Volga, b.Charm} {
			f[i] = 0
		}
		if option {
			b.Instrument[i], b.Model[i] = schema.Option, schema.ModelBSM
			b.OptionType[i], b.Exercise[i], b.Payoff[i] = schema.Call+schema.Choice(row%2), schema.European, schema.Vanilla
			b.VolSource[i] = schema.VolFromSurface
			b.Strike[i] = math.Round(spot * (0.7 + 0.6*u(2)))
			b.Expiry[i] = schema.Date(20500 + 7*(row%60))
			b.Mark[i] = math.Round(u(3)*2000) / 100
			b.Forward[i], b.VolUsed[i], b.Rate[i], b.Carry[i] = spot*(1+0.02*u(4)), 0.1+0.3*u(5), 0.03+0.01*u(6), 0.01
			b.Time[i] = float64(7*(row%60)+3) / 365
			b.Price[i], b.Delta[i], b.Gamma[i], b.Vega[i], b.Theta[i] = 20*u(7), u(8), u(9)/50, 40*u(10), -10*u(11)
			b.Rho[i], b.CarryRho[i], b.Vanna[i], b.Volga[i], b.Charm[i] = 30*u(12), -30*u(13), u(14), 10*u(15), u(16)-0.5
			b.Residual[i] = 1e-14 * u(17)
		}
		size := b.Quantity[i] * b.Multiplier[i]
		b.DeltaUnits[i] = b.Delta[i] * size
		for m, x := range [schema.NumMeasures]float64{
			b.Price[i], b.Delta[i] * spot, b.Gamma[i] * spot * spot / 100, b.Vega[i] / 100,
			b.Theta[i] / 365, b.Theta[i] / 365 * 3, b.Rho[i] / 10000,
		} {
			b.Measures[m][i] = x * size
			b.MeasuresInBase[m][i] = x * size * b.FX[i]
		}
		b.Extra[0].AppendString([]string{"K. Ito", "M. Berg", "S. Roy", ""}[row%4])
		b.Extra[1].AppendString(free(row, int(hash(uint64(row))%40)))
	}
	return b
}
