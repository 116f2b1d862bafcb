package reader

import (
	"math"

	"nightbook/schema"
)

var (
	priceOrSides = &finding{schema.MissingValue, "expected a price, or a bid and an ask"}
	quoteTypes   = choiceFinding("option_type")
	quoteStyles  = choiceFinding("exercise")
)

// quoteRows returns what reads one quote into the market. A refused quote stands
// among the quotes, so that each can be answered, and is no fault of the market.
func quoteRows(m *schema.Market, _ *schema.Config) func(*marketRow) {
	kinds := kindsOf(m)
	return func(r *marketRow) {
		q := schema.QuoteRow{Line: r.line(), Underlying: r.key("underlying"), Exercise: schema.European}
		q.Day, q.Minute = r.neededDay("expiry")
		q.Strike = r.needed("strike", strikeBounds(kinds[q.Underlying]))
		q.OptionType = r.chosen("option_type", schema.OptionTypes, quoteTypes, missing)
		if e := r.chosen("exercise", schema.Exercises, quoteStyles, nil); e != 0 {
			q.Exercise = e
		}
		nan := math.NaN()
		q.Price = r.optional("price", nan, notBelow0)
		q.Bid, q.Ask = r.optional("bid", nan, notBelow0), r.optional("ask", nan, notBelow0)
		if r.ok() && math.IsNaN(q.Price) && (math.IsNaN(q.Bid) || math.IsNaN(q.Ask)) {
			r.refuse(r.col("price"), priceOrSides)
		}
		if !r.ok() {
			x := r.rejected()
			q.Reject = &x
			r.why = nil
		}
		m.Quotes = append(m.Quotes, q)
	}
}

// unreadQuote returns the quote of a row that cannot be taken apart.
func unreadQuote(r *marketRow) schema.QuoteRow {
	x, nan := r.rejected(), math.NaN()
	return schema.QuoteRow{Line: r.line(), Day: schema.NoDate, Minute: schema.NoMinute, Strike: nan, Price: nan, Bid: nan, Ask: nan, Reject: &x}
}

// chosen returns a word of a closed list, 0 for an empty cell or a column that
// is not there; empty, if not nil, is what is wrong with those.
func (r *marketRow) chosen(name string, list schema.Choices, other, empty *finding) schema.Choice {
	k := r.col(name)
	var c schema.Choice
	var why *finding
	if r.o.at[k] >= 0 {
		c, why = r.choice(r.o.at[k], r.i, list, other)
	}
	if why == nil && c == 0 {
		why = empty
	}
	if why != nil {
		r.refuse(k, why)
	}
	return c
}
