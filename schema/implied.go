package schema

// QuotesTable describes quotes.
var QuotesTable = Table{"quotes", "one row an option quote; nightbook implied turns them into volatilities, and a run does where run.toml says so", []Column{
	{"underlying", Text, "", true, "", "the underlying's name in underlyings"},
	{"expiry", Day, "", true, "", "ISO 8601 date or date-time"},
	{"strike", Float, "price", true, "", "strike"},
	{"option_type", Text, "", true, "", "call or put"},
	{"exercise", Text, "", false, "european", "european or american"},
	{"price", Float, "price currency", false, "the middle of bid and ask", "price of one unit; or give bid and ask"},
	{"bid", Float, "price currency", false, "", "best bid"},
	{"ask", Float, "price currency", false, "", "best offer"},
}}

// QuoteRow is a row of quotes. An absent number is NaN. Of a refused row, what
// could not be read is absent.
type QuoteRow struct {
	Line            int64
	Underlying      string
	Day             Date
	Minute          int16
	Strike          float64
	OptionType      Choice
	Exercise        Choice
	Price, Bid, Ask float64
	Reject          *Reject // not nil: the row is refused
}

// Statuses of a quote.
const (
	QuoteOK Choice = 1 + iota
	QuoteRejected
	QuoteNoMarket
	QuoteUnsupported
	QuoteExpired
	QuoteCrossed
	QuoteBelowBound
	QuoteAboveBound
)

// QuoteStatuses names the statuses of a quote, QuoteStatusDocs explains them.
var QuoteStatuses = Choices{"", "ok", "rejected", "no_market", "unsupported", "expired", "crossed", "below_bound", "above_bound"}

// QuoteStatusDocs is the closed list of what can become of a quote.
var QuoteStatusDocs = []CodeDoc{
	{"ok", "the volatility gives the price back"},
	{"rejected", "the row, or a cell of it, cannot be read"},
	{"no_market", "the underlying, its price or its zero curve is missing or in doubt"},
	{"unsupported", "this version does not invert such an option"},
	{"expired", "the option has expired at as_of"},
	{"crossed", "the bid is above the ask"},
	{"below_bound", "the price is at or below what the option is worth without any volatility"},
	{"above_bound", "the price is at or above what the option is worth at any volatility; where there is no closed form, at one of 1000 % or with σ√T of 12"},
}

// ImpliedRow is a quote and the volatility it implies. Vol is NaN where Status
// is not QuoteOK.
type ImpliedRow struct {
	*QuoteRow
	Used    float64 // the price that was inverted
	Forward float64
	Time    float64
	Vol     float64
	Status  Choice
	Reason  string
}

// ImpliedOut describes what nightbook implied writes.
var ImpliedOut = Table{"implied", "one row a quote, in the order of the quotes, with its volatility", []Column{
	{"line", Int, "", true, "", "line of a text file, row of a sheet or of a Parquet file, the first being 1"},
	{"underlying", Text, "", false, "", "the underlying"},
	{"expiry", Day, "", false, "", "expiry date"},
	{"expiry_minute", Int, "minutes after midnight", false, "", "time of day of the expiry, where one was given"},
	{"strike", Float, "price", false, "", "strike"},
	{"option_type", Text, "", false, "", "call or put"},
	{"exercise", Text, "", false, "", "european or american"},
	{"price", Float, money, false, "", "the quote's price"},
	{"bid", Float, money, false, "", "the quote's bid"},
	{"ask", Float, money, false, "", "the quote's ask"},
	{"price_used", Float, money, false, "", "the price that was inverted: price, or the middle of bid and ask"},
	{"forward", Float, "price", false, "", "forward price to expiry"},
	{"time", Float, "year", false, "", "time to expiry, ACT/365F"},
	{"vol", Float, "1/√year", false, "", "the volatility that gives price_used; null unless status is ok"},
	{"status", Text, "", true, "", "what became of the quote: one of a closed list"},
	{"reason", Text, "", false, "", "why there is no volatility"},
}}

// ImpliedFrame returns implied volatilities as rows of ImpliedOut.
func ImpliedFrame(implied []ImpliedRow) *Frame {
	r := newRows(&ImpliedOut)
	r.Cols[2].Kind = KindDates
	for i := range implied {
		q := &implied[i]
		r.int(0, q.Line)
		r.text(1, q.Underlying)
		r.Cols[2].Dates = append(r.Cols[2].Dates, q.Day)
		minute := int64(q.Minute)
		if q.Minute == NoMinute {
			minute = NoInt
		}
		r.int(3, minute)
		r.float(4, q.Strike)
		r.text(5, OptionTypes[q.OptionType])
		r.text(6, Exercises[q.Exercise])
		for k, x := range []float64{q.Price, q.Bid, q.Ask, q.Used, q.Forward, q.Time, q.Vol} {
			r.float(7+k, x)
		}
		r.text(14, QuoteStatuses[q.Status])
		r.text(15, q.Reason)
	}
	r.N = len(implied)
	return &r.Frame
}
