package schema

import (
	"slices"
	"strings"
)

// Lines is the dictionary of the lines table: one row a priced or expired
// line, in the order of the position file, the house's own columns at the end.
var Lines = Table{"lines", "one row a priced or expired line, in the order of the position file", lineColumns()}

func lineColumns() []Column {
	cols := make([]Column, len(lineFields))
	for i, f := range lineFields {
		cols[i] = f.Column
	}
	return cols
}

// lineField is a column of the lines table and where its values stand.
type lineField struct {
	Column
	of func(*Batch, *Dicts) Vector
}

func floats(f func(*Batch) []float64) func(*Batch, *Dicts) Vector {
	return func(b *Batch, _ *Dicts) Vector { return Vector{Kind: KindFloats, Floats: f(b)} }
}

func choices(c Choices, f func(*Batch) []Choice) func(*Batch, *Dicts) Vector {
	return func(b *Batch, _ *Dicts) Vector { return Vector{Kind: KindChoices, Choices: f(b), Names: c} }
}

func codes(d func(*Dicts) *Dict, f func(*Batch) []Code) func(*Batch, *Dicts) Vector {
	return func(b *Batch, ds *Dicts) Vector { return Vector{Kind: KindCodes, Codes: f(b), Dict: d(ds)} }
}

const money, base = "price currency", "reporting currency"

var lineFields = append([]lineField{
	{Column{"line_id", Text, "", true, "", "the line's name"},
		func(b *Batch, _ *Dicts) Vector { return Vector{Kind: KindStrings, Strings: b.LineID} }},
	{Column{"book", Text, "", true, "", "the book that holds the line"},
		codes(func(d *Dicts) *Dict { return d.Books }, func(b *Batch) []Code { return b.Book })},
	{Column{"underlying", Text, "", true, "", "the underlying"},
		codes(func(d *Dicts) *Dict { return d.Underlyings }, func(b *Batch) []Code { return b.Underlying })},
	{Column{"instrument", Text, "", true, "", "option, stock, future, forward or cash"},
		choices(Instruments, func(b *Batch) []Choice { return b.Instrument })},
	{Column{"currency", Text, "", true, "", "price currency, ISO 4217"},
		codes(func(d *Dicts) *Dict { return d.Currencies }, func(b *Batch) []Code { return b.Currency })},
	{Column{"quantity", Float, "contracts", true, "", "signed number of contracts, shares or currency units"},
		floats(func(b *Batch) []float64 { return b.Quantity })},
	{Column{"multiplier", Float, "units a contract", true, "", "units of the underlying in a contract"},
		floats(func(b *Batch) []float64 { return b.Multiplier })},
	{Column{"option_type", Text, "", false, "", "call or put"},
		choices(OptionTypes, func(b *Batch) []Choice { return b.OptionType })},
	{Column{"exercise", Text, "", false, "", "european or american"},
		choices(Exercises, func(b *Batch) []Choice { return b.Exercise })},
	{Column{"payoff", Text, "", false, "", "payoff of an option"},
		choices(Payoffs, func(b *Batch) []Choice { return b.Payoff })},
	{Column{"strike", Float, "price", false, "", "strike, or agreed price of a forward"},
		floats(func(b *Batch) []float64 { return b.Strike })},
	{Column{"payout", Float, money, false, "", "amount a cash digital pays"},
		floats(func(b *Batch) []float64 { return b.Payout })},
	{Column{"barrier_type", Text, "", false, "", "kind of barrier"},
		choices(BarrierTypes, func(b *Batch) []Choice { return b.BarrierType })},
	{Column{"barrier", Float, "price", false, "", "barrier level"},
		floats(func(b *Batch) []float64 { return b.Barrier })},
	{Column{"rebate", Float, money, false, "", "rebate of a barrier option"},
		floats(func(b *Batch) []float64 { return b.Rebate })},
	{Column{"monitoring", Text, "", false, "", "how often the barrier is watched"},
		choices(Monitorings, func(b *Batch) []Choice { return b.Monitoring })},
	{Column{"average_start", Day, "", false, "", "first day of the average"},
		func(b *Batch, _ *Dicts) Vector { return Vector{Kind: KindDates, Dates: b.AverageStart} }},
	{Column{"average_so_far", Float, "price", false, "", "average so far"},
		floats(func(b *Batch) []float64 { return b.AverageSoFar })},
	{Column{"expiry", Day, "", false, "", "expiry date"},
		func(b *Batch, _ *Dicts) Vector { return Vector{Kind: KindDates, Dates: b.Expiry} }},
	{Column{"expiry_minute", Int, "minutes after midnight", false, "", "time of day of the expiry, where one was given"},
		func(b *Batch, _ *Dicts) Vector { return Vector{Kind: KindInts, Ints: b.expiryMinutes()} }},
	{Column{"strategy", Text, "", false, "", "the desk's own grouping"},
		codes(func(d *Dicts) *Dict { return d.Strategies }, func(b *Batch) []Code { return b.Strategy })},
	{Column{"mark", Float, "price", false, "", "observed unit price"},
		floats(func(b *Batch) []float64 { return b.Mark })},
	{Column{"entry_price", Float, "price", false, "", "last margined price of a future"},
		floats(func(b *Batch) []float64 { return b.EntryPrice })},
	{Column{"status", Text, "", true, "", "priced or expired"},
		choices(Statuses, func(b *Batch) []Choice { return b.Status })},
	{Column{"model", Text, "", true, "", "model that priced the line"},
		choices(Models, func(b *Batch) []Choice { return b.Model })},
	{Column{"setting", Text, "", false, "", "accuracy setting of an American option priced by boundary_integral: fast, standard or exact"},
		choices(Settings, func(b *Batch) []Choice { return b.Setting })},
	{Column{"dividend_model", Text, "", true, "", "convention of the run: what a cash dividend does to the price of an equity or an index, piecewise or escrowed; where none counts, dividends_pv is null"},
		choices(DividendModels, func(b *Batch) []Choice { return b.DividendModel })},
	{Column{"vol_source", Text, "", false, "", "where the volatility came from: the line, the surface, the underlying"},
		choices(VolSources, func(b *Batch) []Choice { return b.VolSource })},
	{Column{"curve", Text, "", false, "", "zero curve used"},
		codes(func(d *Dicts) *Dict { return d.Curves }, func(b *Batch) []Code { return b.Curve })},
	{Column{"spot", Float, "price", false, "", "price of the underlying used; of kind future the futures price"},
		floats(func(b *Batch) []float64 { return b.Spot })},
	{Column{"forward", Float, "price", false, "", "forward price to expiry"},
		floats(func(b *Batch) []float64 { return b.Forward })},
	{Column{"vol_used", Float, "1/√year", false, "", "volatility used"},
		floats(func(b *Batch) []float64 { return b.VolUsed })},
	{Column{"rate", Float, "1/year", false, "", "continuous zero rate to expiry used"},
		floats(func(b *Batch) []float64 { return b.Rate })},
	{Column{"carry", Float, "1/year", false, "", "continuous yield of the underlying used; of kind future the rate itself"},
		floats(func(b *Batch) []float64 { return b.Carry })},
	{Column{"time", Float, "year", false, "", "time to expiry, ACT/365F"},
		floats(func(b *Batch) []float64 { return b.Time })},
	{Column{"dividends_pv", Float, "price", false, "", "present value of the cash dividends after as_of and up to expiry"},
		floats(func(b *Batch) []float64 { return b.DividendsPV })},
	{Column{"fx_rate", Float, base, true, "", "reporting-currency units for one unit of the currency"},
		floats(func(b *Batch) []float64 { return b.FX })},
	{Column{"price", Float, money, true, "", "model value V of one unit"},
		floats(func(b *Batch) []float64 { return b.Price })},
	{Column{"delta", Float, "", true, "", "∂V/∂S"},
		floats(func(b *Batch) []float64 { return b.Delta })},
	{Column{"gamma", Float, "1/price", true, "", "∂²V/∂S²"},
		floats(func(b *Batch) []float64 { return b.Gamma })},
	{Column{"vega", Float, money + " per 1.00 of volatility", true, "", "∂V/∂σ"},
		floats(func(b *Batch) []float64 { return b.Vega })},
	{Column{"theta", Float, money + " a year", true, "", "∂V/∂t, calendar time passing"},
		floats(func(b *Batch) []float64 { return b.Theta })},
	{Column{"rho", Float, money + " per 1.00 of rate", true, "", "∂V/∂r; of kind future with the futures price held"},
		floats(func(b *Batch) []float64 { return b.Rho })},
	{Column{"carry_rho", Float, money + " per 1.00 of yield", true, "", "∂V/∂q; of kind future 0"},
		floats(func(b *Batch) []float64 { return b.CarryRho })},
	{Column{"vanna", Float, "per 1.00 of volatility", true, "", "∂²V/∂S∂σ"},
		floats(func(b *Batch) []float64 { return b.Vanna })},
	{Column{"volga", Float, money + " per 1.00² of volatility", true, "", "∂²V/∂σ²"},
		floats(func(b *Batch) []float64 { return b.Volga })},
	{Column{"charm", Float, "1/year", true, "", "∂²V/∂S∂t, calendar time passing"},
		floats(func(b *Batch) []float64 { return b.Charm })},
	{Column{"pde_residual", Float, "", false, "", "|Θ + ½σ²S²Γ + (r−q)SΔ − rV| / max(|V|, 10⁻⁴·S) of an option: the built-in control"},
		floats(func(b *Batch) []float64 { return b.Residual })},
	{Column{"price_error", Float, money, false, "", "estimated error of price, of a line priced by finite_differences"},
		floats(func(b *Batch) []float64 { return b.PriceError })},
	{Column{"exercise_boundary", Float, "price", false, "", "price of the underlying at as_of at or beyond which exercise of an American option is optimal: at or below it for a put, at or above it for a call. null where there is none, or none near the price. Where rates are negative exercise may end at a second price, which is not shown"},
		floats(func(b *Batch) []float64 { return b.Boundary })},
	{Column{"exercise_now", Bool, "", true, "", "whether exercise of an American option is optimal at as_of"},
		func(b *Batch, _ *Dicts) Vector { return Vector{Kind: KindBools, Bools: b.ExerciseNow} }},
	{Column{"delta_units", Float, "units of the underlying", true, "", "delta × quantity × multiplier"},
		floats(func(b *Batch) []float64 { return b.DeltaUnits })},
}, measureFields()...)

var measureDocs = [NumMeasures]string{
	"price × quantity × multiplier; of a future the change since the last margined price",
	"delta × spot × quantity × multiplier",
	"change of delta_cash for a move of 1 %: gamma × spot² / 100 × quantity × multiplier",
	"change of value for one volatility point: vega / 100 × quantity × multiplier",
	"change of value to the next calendar day, by full revaluation, all else held but for cash dividends, which come off the price on their ex-date",
	"change of value to the next business day, by full revaluation, all else held but for cash dividends, which come off the price on their ex-date",
	"change of value for one basis point of rate: rho / 10,000 × quantity × multiplier",
}

func measureFields() []lineField {
	var fields []lineField
	for m := range NumMeasures {
		fields = append(fields, lineField{Column{MeasureNames[m], Float, money, true, "", measureDocs[m]},
			floats(func(b *Batch) []float64 { return b.Measures[m] })})
	}
	for m := range NumMeasures {
		fields = append(fields, lineField{Column{MeasureNames[m] + "_base", Float, base, true, "", MeasureNames[m] + " in the reporting currency"},
			floats(func(b *Batch) []float64 { return b.MeasuresInBase[m] })})
	}
	return fields
}

// expiryMinutes are the minutes as integers of the table.
func (b *Batch) expiryMinutes() []int64 {
	b.minutes = resized(b.minutes, len(b.ExpiryMinute))
	for i, v := range b.ExpiryMinute {
		if b.minutes[i] = int64(v); v == NoMinute {
			b.minutes[i] = NoInt
		}
	}
	return b.minutes
}

// hasColumn reports whether a name is taken, in large or small letters:
// warehouses do not tell them apart.
func (t *Table) hasColumn(name string) bool {
	return slices.ContainsFunc(t.Columns, func(c Column) bool { return strings.EqualFold(c.Name, name) })
}

// LinesTable is Lines with the house's own columns behind it, as text. A house
// column that bears the name of one of ours is renamed with "input_" before it.
func LinesTable(extra []string) Table {
	t := Lines
	t.Columns = append([]Column(nil), Lines.Columns...)
	for _, name := range extra {
		for t.hasColumn(name) {
			name = "input_" + name
		}
		t.Columns = append(t.Columns, Column{Name: name, Type: Text, Doc: "column of the position file, carried through as it came"})
	}
	return t
}

// Frame returns the batch as rows of LinesTable, sharing its memory.
func (b *Batch) Frame(d *Dicts, into *Frame) {
	into.N, into.Cols = b.N, into.Cols[:0]
	for _, f := range lineFields {
		into.Cols = append(into.Cols, f.of(b, d))
	}
	for _, s := range b.Extra {
		into.Cols = append(into.Cols, Vector{Kind: KindStrings, Strings: s})
	}
}
