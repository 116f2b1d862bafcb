package risk

import (
	"nightbook/risk/instrument"
	"nightbook/schema"
)

// product is one thing the program can price: an instrument on a kind of
// underlying, and the model that prices it.
type product struct {
	instrument, kind, payoff, exercise schema.Choice
	model                              schema.Choice
	price                              func(*instrument.Run)
	expired                            func(*instrument.Run) // nil: the expiry does not matter
}

// products is the whole list of what can be priced.
var products = []product{
	{schema.Option, schema.Equity, schema.Vanilla, schema.European, schema.ModelBSM, instrument.VanillaOnSpot, instrument.ExpiredVanilla},
	{schema.Option, schema.Index, schema.Vanilla, schema.European, schema.ModelBSM, instrument.VanillaOnSpot, instrument.ExpiredVanilla},
	{schema.Option, schema.FX, schema.Vanilla, schema.European, schema.ModelGarmanKohlhagen, instrument.VanillaOnSpot, instrument.ExpiredVanilla},
	{schema.Option, schema.FuturePrice, schema.Vanilla, schema.European, schema.ModelBlack76, instrument.VanillaOnFuture, instrument.ExpiredVanilla},

	{schema.Forward, schema.Equity, 0, 0, schema.ModelDiscountedForward, instrument.ForwardOnSpot, instrument.ExpiredForward},
	{schema.Forward, schema.Index, 0, 0, schema.ModelDiscountedForward, instrument.ForwardOnSpot, instrument.ExpiredForward},
	{schema.Forward, schema.FX, 0, 0, schema.ModelDiscountedForward, instrument.ForwardOnSpot, instrument.ExpiredForward},
	{schema.Forward, schema.FuturePrice, 0, 0, schema.ModelDiscountedForward, instrument.ForwardOnFuture, instrument.ExpiredForward},

	{schema.Stock, schema.Equity, 0, 0, schema.ModelMark, instrument.Stock, nil},
	{schema.Stock, schema.Index, 0, 0, schema.ModelMark, instrument.Stock, nil},
	{schema.Stock, schema.FX, 0, 0, schema.ModelMark, instrument.Stock, nil},

	{schema.Future, schema.FuturePrice, 0, 0, schema.ModelMark, instrument.Future, instrument.Future},
	{schema.Future, schema.Spread, 0, 0, schema.ModelMark, instrument.Future, instrument.Future},

	{schema.Cash, 0, 0, 0, schema.ModelFace, instrument.Cash, nil},
}

// productAt finds a product by its four choices: index into products + 1, 0
// where there is none.
var productAt = func() (at [8][8][8][4]uint8) {
	for i, p := range products {
		at[p.instrument][p.kind][p.payoff][p.exercise] = uint8(i + 1)
	}
	return at
}()

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
		return schema.Unsupported, "exercise", "American exercise is not priced by this version, and is never priced as European: take the line out or price it elsewhere"
	case payoff != schema.Vanilla:
		return schema.Unsupported, "payoff", "payoff " + schema.Payoffs[payoff] + " is not priced by this version: take the line out or price it elsewhere"
	}
	return schema.Unsupported, "underlying", "options on an underlying of kind " + schema.Kinds[kind] + " are not priced by this version: take the line out or price it elsewhere"
}
