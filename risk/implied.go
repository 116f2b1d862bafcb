package risk

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"slices"

	"nightbook/risk/instrument"
	"nightbook/risk/market"
	"nightbook/risk/model/pde"
	"nightbook/risk/vec"
	"nightbook/schema"
)

// Imply finds the volatility of each quote against a market: one row a quote,
// in their order. European quotes without cash dividends, or with escrowed ones, are inverted in
// closed form, the others with the models that price lines. The market's surfaces are
// not looked at. The error is that of a context that ended before.
func Imply(ctx context.Context, m *market.Market, d *schema.Dicts, quotes []schema.QuoteRow) ([]schema.ImpliedRow, error) {
	out := make([]schema.ImpliedRow, len(quotes))
	n := len(quotes)
	col := func() []float64 { return make([]float64, n) }
	forward, strike, time, price, sign, vol := col(), col(), col(), col(), col(), col()
	byModel := make([]*instrument.Quote, n) // nil where there is a closed form
	var open []*instrument.Quote
	for i := range quotes {
		out[i] = schema.ImpliedRow{QuoteRow: &quotes[i], Used: nan, Forward: nan, Time: nan, Vol: nan}
		q := prepare(m, d, &out[i])
		if q == nil {
			continue
		}
		forward[i], strike[i], time[i], sign[i] = out[i].Forward, q.Strike, q.Time, q.Sign
		price[i] = q.Price / vec.Exp1(0-float64(q.Rate*q.Time))
		if q.American || q.Dividends != nil && m.Models.Dividends == schema.Piecewise {
			byModel[i] = q
			open = append(open, q)
		}
	}
	outcome := make([]vec.Implied, n)
	vec.ImpliedVol(vol, outcome, forward, strike, time, price, sign)
	methods := methods(m)
	methods.InterruptedBy(func() bool { return ctx.Err() != nil })
	methods.ImpliedVols(open)
	for i := range out {
		switch q := byModel[i]; {
		case q != nil:
			concludeByModel(&out[i], q)
		case out[i].Status == 0:
			conclude(&out[i], vol[i], outcome[i])
		}
	}
	return out, ctx.Err()
}

// prepare returns the option that a quote is of; a quote that cannot be inverted
// gets its status, and nil.
func prepare(m *market.Market, d *schema.Dicts, q *schema.ImpliedRow) *instrument.Quote {
	no := func(status schema.Choice, reason string) *instrument.Quote {
		q.Status, q.Reason = status, reason
		return nil
	}
	if r := q.Reject; r != nil {
		where := ""
		if r.Column != "" {
			where = "column " + r.Column + ", "
		}
		if r.Code == schema.BadRow {
			return no(schema.QuoteRejected, r.Reason)
		}
		return no(schema.QuoteRejected, fmt.Sprintf("%s%s %q: %s", where, r.Code, r.Value, r.Reason))
	}
	if q.Used = q.Price; math.IsNaN(q.Price) {
		if q.Bid > q.Ask {
			return no(schema.QuoteCrossed, "the bid is above the ask")
		}
		q.Used = 0.5 * (q.Bid + q.Ask)
	}
	u, known := lookup(m, d, q.Underlying)
	switch {
	case !known:
		return no(schema.QuoteNoMarket, "the underlying is not in underlyings: add it there, or mend the name")
	case u.Fault != "":
		return no(schema.QuoteNoMarket, u.Fault)
	case u.Kind == schema.Spread:
		return no(schema.QuoteUnsupported, "options on an underlying of kind spread are not inverted by this version")
	case !(u.Price > 0):
		return no(schema.QuoteNoMarket, "the price of "+u.Name+" is not positive")
	case !(q.Strike > 0):
		return no(schema.QuoteRejected, "the strike must be positive")
	}
	if q.Time = m.AsOf.Years(q.Day, q.Minute); q.Time <= 0 {
		return no(schema.QuoteExpired, "the expiry is not after as_of")
	}
	if u.Curve == nil {
		return no(schema.QuoteNoMarket, u.CurveFault.Reason)
	}
	rate, _ := u.Curve.Rate(q.Time)
	paid := u.DividendsUntil(q.Day)
	if q.Forward = u.Forward(rate, q.Time, q.Day); !(q.Forward > 0) {
		return no(schema.QuoteNoMarket, "the forward price to expiry is "+number(q.Forward)+" once the cash dividends of "+u.Name+" are paid: check dividends")
	}
	o := &instrument.Quote{
		Price: q.Used, Spot: u.Price, Strike: q.Strike, Time: q.Time, Rate: rate, Yield: u.Yield, Sign: orientations[q.OptionType],
		American: q.Exercise == schema.American,
	}
	if u.Kind == schema.FuturePrice {
		o.Yield = rate
	}
	for _, p := range paid {
		o.Dividends = append(o.Dividends, pde.Dividend{Time: min(p.Time, q.Time), Amount: p.Amount})
	}
	return o
}

func lookup(m *market.Market, d *schema.Dicts, name string) (*market.Underlying, bool) {
	code, ok := d.Underlyings.Find(name)
	if !ok {
		return nil, false
	}
	u := m.Underlying(code)
	return u, u != nil
}

// conclude says what came out of the inversion.
func conclude(q *schema.ImpliedRow, vol float64, outcome vec.Implied) {
	switch outcome {
	case vec.ImpliedOK:
		q.Vol, q.Status = vol, schema.QuoteOK
	case vec.ImpliedBelow:
		q.Status, q.Reason = schema.QuoteBelowBound, "the price is at or below the option's value without volatility, the discounted gain on the forward "+number(q.Forward)
	case vec.ImpliedAbove:
		q.Status, q.Reason = schema.QuoteAboveBound, "the price is at or above the discounted "+map[schema.Choice]string{schema.Call: "forward", schema.Put: "strike"}[q.OptionType]+", the most the option can be worth"
	default:
		q.Status, q.Reason = schema.QuoteNoMarket, "forward "+number(q.Forward)+" or time "+number(q.Time)+" cannot be used"
	}
}

// concludeByModel says what came out of an inversion with a model.
func concludeByModel(q *schema.ImpliedRow, o *instrument.Quote) {
	switch o.Outcome {
	case vec.ImpliedOK:
		q.Vol, q.Status = o.Vol, schema.QuoteOK
	case vec.ImpliedBelow:
		q.Status, q.Reason = schema.QuoteBelowBound, "the price is at or below the option's value without volatility: of an American option that is what exercise brings, now or at the best time"
	case vec.ImpliedAbove:
		q.Status, q.Reason = schema.QuoteAboveBound, "the price is at or above the option's value at the highest volatility that is sought, "+number(o.High())
	default:
		q.Status, q.Reason = schema.QuoteUnsupported, "the option's model has no value for these terms, or none that meets the price"
	}
}

// SurfaceOf turns inverted quotes into the rows of a surface: of each expiry and
// strike the out-of-the-money option, or the one that is there, the first in
// file order. The notes count the quotes that gave none; file is the quotes' own.
func SurfaceOf(implied []schema.ImpliedRow, file string) ([]schema.VolRow, []schema.Note) {
	type point struct {
		underlying string
		day        schema.Date
		minute     int16
		strike     float64
	}
	chosen := map[point]int{}
	var order []point
	lost := map[string]*schema.Note{}
	for i := range implied {
		q := &implied[i]
		if q.Status != schema.QuoteOK {
			n := lost[q.Underlying]
			if n == nil {
				whose := "of " + q.Underlying
				if q.Underlying == "" {
					whose = "that name no underlying"
				}
				n = &schema.Note{Code: schema.QuoteNotUsed, Subject: q.Underlying, Line: q.Line, File: file,
					Message: "quotes " + whose + " gave no volatility and are not in the surface: nightbook implied tells why"}
				lost[q.Underlying] = n
			}
			n.Count++
			continue
		}
		p := point{q.Underlying, q.Day, q.Minute, q.Strike}
		at, have := chosen[p]
		if !have {
			order = append(order, p)
		}
		if !have || !outOfTheMoney(&implied[at]) && outOfTheMoney(q) {
			chosen[p] = i
		}
	}
	rows := make([]schema.VolRow, len(order))
	for k, p := range order {
		q := &implied[chosen[p]]
		rows[k] = schema.VolRow{Line: q.Line, Underlying: q.Underlying, Day: q.Day, Minute: q.Minute, Strike: q.Strike, Vol: q.Vol}
	}
	var notes []schema.Note
	for _, n := range lost {
		notes = append(notes, *n)
	}
	slices.SortFunc(notes, func(a, b schema.Note) int { return cmp.Compare(a.Subject, b.Subject) })
	return rows, notes
}

func outOfTheMoney(q *schema.ImpliedRow) bool {
	return orientations[q.OptionType]*(q.Strike-q.Forward) >= 0
}
