package risk

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"nightbook/risk/market"
	"nightbook/risk/vec"
	"nightbook/schema"
)

// Imply finds the volatility of each quote against a market: one row a quote,
// in their order. The market's surfaces are not looked at.
func Imply(m *market.Market, d *schema.Dicts, quotes []schema.QuoteRow) []schema.ImpliedRow {
	out := make([]schema.ImpliedRow, len(quotes))
	n := len(quotes)
	col := func() []float64 { return make([]float64, n) }
	forward, strike, time, price, sign, vol := col(), col(), col(), col(), col(), col()
	for i := range quotes {
		out[i] = schema.ImpliedRow{QuoteRow: &quotes[i], Used: nan, Forward: nan, Time: nan, Vol: nan}
		discount := prepare(m, d, &out[i])
		forward[i], strike[i], time[i] = out[i].Forward, quotes[i].Strike, out[i].Time
		price[i], sign[i] = out[i].Used/discount, orientation(quotes[i].OptionType)
	}
	outcome := make([]vec.Implied, n)
	vec.ImpliedVol(vol, outcome, forward, strike, time, price, sign)
	for i := range out {
		if out[i].Status == 0 {
			conclude(&out[i], vol[i], outcome[i])
		}
	}
	return out
}

// prepare sets what a quote is inverted with, and returns the discount factor;
// a quote that cannot be inverted gets its status.
func prepare(m *market.Market, d *schema.Dicts, q *schema.ImpliedRow) float64 {
	no := func(status schema.Choice, reason string) float64 {
		q.Status, q.Reason = status, reason
		return nan
	}
	if r := q.Reject; r != nil {
		where := ""
		if r.Column != "" {
			where = "column " + r.Column + ", "
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
	case q.Exercise == schema.American:
		return no(schema.QuoteUnsupported, "American exercise is not inverted by this version, and is never inverted as European")
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
	for _, ex := range u.Dividends {
		if ex <= q.Day && u.Kind != schema.FuturePrice {
			return no(schema.QuoteUnsupported, u.Name+" pays a cash dividend on "+ex.String()+", before expiry: cash dividends are not priced by this version")
		}
	}
	rate, _ := u.Curve.Rate(q.Time)
	q.Forward = u.Forward(rate, q.Time)
	return vec.Exp1(0 - float64(rate*q.Time))
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
				n = &schema.Note{Code: schema.QuoteNotUsed, Subject: q.Underlying, Line: q.Line, File: file,
					Message: "quotes of " + q.Underlying + " gave no volatility and are not in its surface: nightbook implied tells why"}
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
	return orientation(q.OptionType)*(q.Strike-q.Forward) >= 0
}
