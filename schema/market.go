package schema

// Market is a market snapshot as the files give it: rows with an address each,
// not yet curves and surfaces.
type Market struct {
	Underlyings []UnderlyingRow
	Rates       []RateRow
	Vols        []VolRow
	FX          []FXRow
	Books       []BookRow
	Dividends   []DividendRow
	Holidays    []HolidayRow
	Quotes      []QuoteRow // refused rows included

	// Faults are the refused market rows. What they belong to (a curve, a
	// surface, a currency, an underlying) must not be used as if they had not been there.
	Faults []Fault
}

// Fault is a refused market row and the name of what it belongs to.
type Fault struct {
	Table string // "rates", "vols", …
	Name  string // the curve, underlying, currency or book; "" if that is unreadable: then the whole table is in doubt
	Reject
}

// UnderlyingRow is a row of underlyings.
type UnderlyingRow struct {
	Line       int64
	Name       string
	Kind       Choice
	Currency   string
	Price      float64
	CarryYield float64 // continuous, per year
	Vol        float64 // flat; NaN where there is none
	Curve      string  // "" is the currency's
	Lot        float64
	ObservedAt string
}

// RateRow is a node of a zero curve. Either Zero or Discount is set, the other NaN.
type RateRow struct {
	Line     int64
	Curve    string
	Day      Date // the node's date: as_of plus the tenor, or the date given
	Zero     float64
	Discount float64
}

// VolRow is a point of a volatility surface.
type VolRow struct {
	Line       int64
	Underlying string
	Day        Date
	Minute     int16
	Strike     float64
	Vol        float64
}

// FXRow is the price of one unit of a currency in the reporting currency.
type FXRow struct {
	Line     int64
	Currency string
	Rate     float64
}

// BookRow is a book and its place in the tree.
type BookRow struct {
	Line                int64
	Book, Parent, Owner string
}

// DividendRow is a cash dividend.
type DividendRow struct {
	Line       int64
	Underlying string
	ExDate     Date
	Amount     float64
}

// HolidayRow is a day on which a calendar is closed.
type HolidayRow struct {
	Line     int64
	Calendar string
	Day      Date
}
