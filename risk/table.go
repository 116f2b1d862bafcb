package risk

import (
	"cmp"
	"slices"

	"nightbook/risk/instrument"
	"nightbook/schema"
)

// product is one thing the program can price: an instrument on a kind of
// underlying, and the model that prices it.
type product struct {
	instrument, kind, payoff, exercise schema.Choice
	dividends                          int // whether cash dividends are paid before it ends
	model                              schema.Choice
	price                              func(*instrument.Run)
	expired                            func(*instrument.Run) // nil: the expiry does not matter
}

const (
	withoutDividends = iota
	withDividends
)

// products is the whole list of what can be priced.
var products = slices.Concat(
	options(schema.Vanilla, 0, instrument.VanillaOnSpot, instrument.VanillaOnFuture, instrument.ExpiredVanilla),
	options(schema.CashDigital, schema.ModelCashOrNothing, instrument.CashDigitalOnSpot, instrument.CashDigitalOnFuture, instrument.ExpiredCashDigital),
	options(schema.AssetDigital, schema.ModelAssetOrNothing, instrument.AssetDigitalOnSpot, instrument.AssetDigitalOnFuture, instrument.ExpiredAssetDigital),
	options(schema.Barrier, schema.ModelReinerRubinstein, instrument.BarrierOnSpot, instrument.BarrierOnFuture, instrument.ExpiredBarrier),
	options(schema.AsianGeometric, schema.ModelKemnaVorst, instrument.GeometricAsianOnSpot, instrument.GeometricAsianOnFuture, instrument.ExpiredGeometricAsian),
	options(schema.AsianArithmetic, schema.ModelTurnbullWakeman, instrument.ArithmeticAsianOnSpot, instrument.ArithmeticAsianOnFuture, instrument.ExpiredArithmeticAsian),
	[]product{
		{schema.Option, schema.Spread, schema.Vanilla, schema.European, withoutDividends, schema.ModelBachelier, instrument.VanillaOnSpread, instrument.ExpiredVanilla},

		{schema.Option, schema.Equity, schema.Vanilla, schema.American, withoutDividends, schema.ModelBoundaryIntegral, instrument.AmericanOnSpot, instrument.ExpiredVanilla},
		{schema.Option, schema.Index, schema.Vanilla, schema.American, withoutDividends, schema.ModelBoundaryIntegral, instrument.AmericanOnSpot, instrument.ExpiredVanilla},
		{schema.Option, schema.FX, schema.Vanilla, schema.American, withoutDividends, schema.ModelBoundaryIntegral, instrument.AmericanOnSpot, instrument.ExpiredVanilla},
		{schema.Option, schema.FuturePrice, schema.Vanilla, schema.American, withoutDividends, schema.ModelBoundaryIntegral, instrument.AmericanOnFuture, instrument.ExpiredVanilla},

		{schema.Option, schema.Equity, schema.Vanilla, schema.European, withDividends, schema.ModelFiniteDifferences, instrument.EuropeanWithDividends, instrument.ExpiredVanilla},
		{schema.Option, schema.Index, schema.Vanilla, schema.European, withDividends, schema.ModelFiniteDifferences, instrument.EuropeanWithDividends, instrument.ExpiredVanilla},
		{schema.Option, schema.Equity, schema.Vanilla, schema.American, withDividends, schema.ModelFiniteDifferences, instrument.AmericanWithDividends, instrument.ExpiredVanilla},
		{schema.Option, schema.Index, schema.Vanilla, schema.American, withDividends, schema.ModelFiniteDifferences, instrument.AmericanWithDividends, instrument.ExpiredVanilla},

		{schema.Forward, schema.Equity, 0, 0, withDividends, schema.ModelDiscountedForward, instrument.ForwardWithDividends, instrument.ExpiredForward},
		{schema.Forward, schema.Index, 0, 0, withDividends, schema.ModelDiscountedForward, instrument.ForwardWithDividends, instrument.ExpiredForward},
		{schema.Forward, schema.Equity, 0, 0, withoutDividends, schema.ModelDiscountedForward, instrument.ForwardOnSpot, instrument.ExpiredForward},
		{schema.Forward, schema.Index, 0, 0, withoutDividends, schema.ModelDiscountedForward, instrument.ForwardOnSpot, instrument.ExpiredForward},
		{schema.Forward, schema.FX, 0, 0, withoutDividends, schema.ModelDiscountedForward, instrument.ForwardOnSpot, instrument.ExpiredForward},
		{schema.Forward, schema.FuturePrice, 0, 0, withoutDividends, schema.ModelDiscountedForward, instrument.ForwardOnFuture, instrument.ExpiredForward},

		{schema.Stock, schema.Equity, 0, 0, withoutDividends, schema.ModelMark, instrument.Stock, nil},
		{schema.Stock, schema.Index, 0, 0, withoutDividends, schema.ModelMark, instrument.Stock, nil},
		{schema.Stock, schema.FX, 0, 0, withoutDividends, schema.ModelMark, instrument.Stock, nil},

		{schema.Future, schema.FuturePrice, 0, 0, withoutDividends, schema.ModelMark, instrument.Future, instrument.Future},
		{schema.Future, schema.Spread, 0, 0, withoutDividends, schema.ModelMark, instrument.Future, instrument.Future},

		{schema.Cash, 0, 0, 0, withoutDividends, schema.ModelFace, instrument.Cash, nil},
	},
)

// options are the products of one European payoff on the kinds whose price is
// lognormal. Model 0 is the kind's own name for the Black–Scholes–Merton formula.
func options(payoff, model schema.Choice, onSpot, onFuture, expired func(*instrument.Run)) []product {
	return []product{
		{schema.Option, schema.Equity, payoff, schema.European, withoutDividends, cmp.Or(model, schema.ModelBSM), onSpot, expired},
		{schema.Option, schema.Index, payoff, schema.European, withoutDividends, cmp.Or(model, schema.ModelBSM), onSpot, expired},
		{schema.Option, schema.FX, payoff, schema.European, withoutDividends, cmp.Or(model, schema.ModelGarmanKohlhagen), onSpot, expired},
		{schema.Option, schema.FuturePrice, payoff, schema.European, withoutDividends, cmp.Or(model, schema.ModelBlack76), onFuture, expired},
	}
}

// productAt finds a product by its four choices and its dividends: index into products + 1, 0
// where there is none.
var productAt = func() (at [8][8][8][4][2]uint8) {
	for i, p := range products {
		at[p.instrument][p.kind][p.payoff][p.exercise][p.dividends] = uint8(i + 1)
	}
	return at
}()

// knowsExercise reports whether the product's pricing function fills in
// instrument.Exercise.
func (p *product) knowsExercise() bool {
	return p.model == schema.ModelBoundaryIntegral || p.model == schema.ModelFiniteDifferences
}

// unsupported says why no product fits an instrument on a kind of underlying.
func unsupported(instrument, kind, payoff, exercise schema.Choice) (schema.RejectCode, string, string) {
	switch {
	case instrument == schema.Stock && kind == schema.FuturePrice:
		return schema.KindMismatch, "instrument", "a stock line cannot stand on an underlying of kind future: use instrument future"
	case instrument == schema.Stock || instrument == schema.Forward && kind == schema.Spread:
		return schema.KindMismatch, "instrument", "stock and forward lines need an underlying of kind equity, index or fx, not spread"
	case instrument == schema.Future:
		return schema.KindMismatch, "instrument", "a future line needs an underlying of kind future or spread: list the contract in underlyings with its futures price"
	case exercise == schema.American:
		return schema.Unsupported, "exercise", "American exercise of payoff " + schema.Payoffs[payoff] + " on an underlying of kind " + schema.Kinds[kind] +
			" is not priced by this version, and is never priced as European: take the line out or price it elsewhere"
	}
	return schema.Unsupported, "payoff", "payoff " + schema.Payoffs[payoff] + " on an underlying of kind " + schema.Kinds[kind] + " is not priced by this version: take the line out or price it elsewhere"
}
