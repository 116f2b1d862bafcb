package reader

import (
	"math"

	"nightbook/schema"
)

// Each function returns what reads one row of its table into the market.

func underlyingRows(m *schema.Market, cfg *schema.Config) func(*marketRow) {
	seen := map[string]int64{}
	kinds := choiceFinding("kind")
	return func(r *marketRow) {
		u := schema.UnderlyingRow{Line: r.line(), Name: r.key("underlying")}
		k := r.col("kind")
		kind, why := r.choice(r.o.at[k], r.i, schema.Kinds, kinds)
		if why == nil && kind == 0 {
			why = missing
		}
		if why != nil {
			r.refuse(k, why)
		}
		u.Kind = kind
		u.Currency = r.currency("currency")
		price := positive
		if kind == schema.Spread || kind == schema.FuturePrice {
			price = anyNumber // spreads, and now and then futures, trade at or below 0
		}
		u.Price = r.needed("price", price)
		u.CarryYield = r.optional("carry_yield", 0, rateRange)
		u.Vol = r.optional("vol", math.NaN(), volBounds(cfg, kind))
		u.Curve = r.text("curve")
		u.Lot = r.optional("lot", 1, positive)
		u.ObservedAt = r.text("observed_at")
		if first, double := seen[u.Name]; double && u.Name != "" {
			r.duplicate("underlying", u.Name, first)
		}
		claim(seen, u.Name, u.Line)
		if r.ok() {
			m.Underlyings = append(m.Underlyings, u)
		}
	}
}

// claim gives a key to the first row that bears it.
func claim[K comparable](seen map[K]int64, key K, line int64) {
	if _, taken := seen[key]; !taken {
		seen[key] = line
	}
}

var (
	tenorOrDate  = &finding{schema.MissingValue, "expected a tenor or a date"}
	notBoth      = &finding{schema.BadRow, "tenor and date are both given: leave one"}
	zeroOrFactor = &finding{schema.MissingValue, "expected a zero_rate or a discount_factor"}
	notBothRates = &finding{schema.BadRow, "zero_rate and discount_factor are both given: leave one"}
	nodeInPast   = &finding{schema.OutOfRange, "the node is not after as_of"}
	nodeTooFar   = &finding{schema.OutOfRange, "the node is after the year 9999"}
)

func rateRows(m *schema.Market, cfg *schema.Config) func(*marketRow) {
	type node struct {
		curve string
		day   schema.Date
	}
	seen := map[node]int64{}
	return func(r *marketRow) {
		row := schema.RateRow{Line: r.line(), Curve: r.key("curve")}
		column := ""
		row.Day, column = r.nodeDay(cfg.AsOf.Day)
		var zero, discount bool
		row.Zero, zero = r.given("zero_rate", rateRange)
		row.Discount, discount = r.given("discount_factor", positive)
		switch {
		case !zero && !discount:
			r.refuse(r.col("zero_rate"), zeroOrFactor)
		case zero && discount:
			r.refuse(r.col("discount_factor"), notBothRates)
		}
		if row.Curve != "" && row.Day != schema.NoDate {
			key := node{row.Curve, row.Day}
			if first, double := seen[key]; double {
				r.duplicate(column, row.Curve+" at "+row.Day.String(), first)
			}
			claim(seen, key, row.Line)
		}
		if r.ok() {
			m.Rates = append(m.Rates, row)
		}
	}
}

// nodeDay returns the date of a curve's node and the column that gave it.
func (r *marketRow) nodeDay(asOf schema.Date) (schema.Date, string) {
	hasTenor, hasDate := r.filled("tenor"), r.filled("date")
	day, column := schema.NoDate, "tenor"
	switch {
	case hasTenor && hasDate:
		r.refuse(r.col("date"), notBoth)
		return day, "date"
	case hasTenor:
		k := r.col("tenor")
		d, why := parseTenor(r.cells.text(r.o.at[k], r.i), asOf)
		if why != nil {
			r.refuse(k, why)
		}
		day = d
	case hasDate:
		column = "date"
		day, _ = r.day("date")
	default:
		r.refuse(r.col("tenor"), tenorOrDate)
	}
	if day == schema.NoDate {
		return day, column
	}
	if day <= asOf {
		r.refuse(r.col(column), nodeInPast)
	}
	if day > lastDay {
		r.refuse(r.col(column), nodeTooFar)
		return schema.NoDate, column
	}
	return day, column
}

// filled reports whether the cell holds anything.
func (r *marketRow) filled(name string) bool {
	at := r.o.at[r.col(name)]
	return at >= 0 && len(r.cells.text(at, r.i)) > 0
}

// kindsOf returns the kinds of the underlyings, which are read before all that
// names them.
func kindsOf(m *schema.Market) map[string]schema.Choice {
	kinds := map[string]schema.Choice{}
	for _, u := range m.Underlyings {
		kinds[u.Name] = u.Kind
	}
	return kinds
}

func volRows(m *schema.Market, cfg *schema.Config) func(*marketRow) {
	type point struct {
		underlying string
		day        schema.Date
		minute     int16
		strike     float64
	}
	seen := map[point]int64{}
	kinds := kindsOf(m)
	return func(r *marketRow) {
		v := schema.VolRow{Line: r.line(), Underlying: r.key("underlying")}
		v.Day, v.Minute = r.neededDay("expiry")
		kind := kinds[v.Underlying]
		v.Strike = r.needed("strike", strikeBounds(kind))
		v.Vol = r.needed("vol", volBounds(cfg, kind))
		if v.Underlying != "" && v.Day != schema.NoDate && !math.IsNaN(v.Strike) {
			key := point{v.Underlying, v.Day, v.Minute, v.Strike}
			if first, double := seen[key]; double {
				r.duplicate("strike", v.Underlying+" "+v.Day.String()+" at this strike", first)
			}
			claim(seen, key, v.Line)
		}
		if r.ok() {
			m.Vols = append(m.Vols, v)
		}
	}
}

func fxRows(m *schema.Market, _ *schema.Config) func(*marketRow) {
	seen := map[string]int64{}
	return func(r *marketRow) {
		x := schema.FXRow{Line: r.line(), Currency: r.currency("currency")}
		r.name = x.Currency
		x.Rate = r.needed("rate", positive)
		if first, double := seen[x.Currency]; double && x.Currency != "" {
			r.duplicate("currency", x.Currency, first)
		}
		claim(seen, x.Currency, x.Line)
		if r.ok() {
			m.FX = append(m.FX, x)
		}
	}
}

var ownParent = &finding{schema.OutOfRange, "the book is its own parent: name the book above it, or leave the cell empty"}

func bookRows(m *schema.Market, _ *schema.Config) func(*marketRow) {
	seen := map[string]int64{}
	return func(r *marketRow) {
		b := schema.BookRow{Line: r.line(), Book: r.key("book"), Parent: r.text("parent"), Owner: r.text("owner")}
		if b.Book != "" && b.Parent == b.Book {
			r.refuse(r.col("parent"), ownParent)
		}
		if first, double := seen[b.Book]; double && b.Book != "" {
			r.duplicate("book", b.Book, first)
		}
		claim(seen, b.Book, b.Line)
		if r.ok() {
			m.Books = append(m.Books, b)
		}
	}
}

func dividendRows(m *schema.Market, _ *schema.Config) func(*marketRow) {
	return func(r *marketRow) {
		d := schema.DividendRow{Line: r.line(), Underlying: r.key("underlying")}
		d.ExDate, _ = r.neededDay("ex_date")
		d.Amount = r.needed("amount", notBelow0)
		if r.ok() {
			m.Dividends = append(m.Dividends, d)
		}
	}
}

func holidayRows(m *schema.Market, _ *schema.Config) func(*marketRow) {
	return func(r *marketRow) {
		h := schema.HolidayRow{Line: r.line(), Calendar: r.key("calendar")}
		h.Day, _ = r.neededDay("date")
		if r.ok() {
			m.Holidays = append(m.Holidays, h)
		}
	}
}
