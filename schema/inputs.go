package schema

// Inputs is the dictionary of the snapshot folder: every file the program
// reads, with its columns. The readers are built on it.
var Inputs = []Table{PositionsTable, UnderlyingsTable, RatesTable, VolsTable, FXTable, BooksTable, DividendsTable, HolidaysTable, QuotesTable}

// PositionsTable describes positions.
var PositionsTable = Table{"positions", "one row a position line; further columns travel through to the lines", []Column{
	{"line_id", Text, "", true, "", "the line's name, unique in the file"},
	{"book", Text, "", true, "", "the book that holds the line"},
	{"underlying", Text, "", true, "", "the underlying's name in underlyings; of a cash line, its currency"},
	{"instrument", Text, "", true, "", "option, stock, future, forward or cash"},
	{"quantity", Float, "contracts", true, "", "signed number of contracts, shares or currency units"},
	{"multiplier", Float, "units a contract", false, "1", "units of the underlying in a contract"},
	{"currency", Text, "", false, "the underlying's", "ISO 4217 code; must be the underlying's price currency"},
	{"option_type", Text, "", false, "", "call or put; needed for an option"},
	{"exercise", Text, "", false, "european", "european or american"},
	{"payoff", Text, "", false, "vanilla", "vanilla, cash_digital, asset_digital, barrier, asian_geometric or asian_arithmetic"},
	{"strike", Float, "price", false, "", "strike of an option, agreed price of a forward; needed for both"},
	{"expiry", Day, "", false, "", "ISO 8601 date or date-time; needed for options and forwards"},
	{"vol", Float, "1/√year", false, "", "the line's own volatility; overrides the surface"},
	{"mark", Float, "price", false, "", "observed unit price"},
	{"payout", Float, "price currency", false, "", "amount a cash digital pays; needed for it"},
	{"barrier_type", Text, "", false, "", "down_in, down_out, up_in or up_out; needed for a barrier option"},
	{"barrier", Float, "price", false, "", "barrier level; needed for a barrier option. A price at or beyond it at as_of has touched it: book an option that was touched before as what it then became"},
	{"rebate", Float, "price currency", false, "0", "paid at the touch (out) or at expiry if never touched (in)"},
	{"monitoring", Text, "", false, "continuous", "how often the barrier is watched: continuous, daily (252 times a year), weekly (7 days) or monthly (12 times a year)"},
	{"average_start", Day, "", false, "", "first day of the average; needed for an Asian option"},
	{"average_so_far", Float, "price", false, "", "average since average_start; needed once that is past"},
	{"entry_price", Float, "price", false, "the price", "last margined price of a future"},
	{"strategy", Text, "", false, "", "the desk's own grouping; carried through"},
}}

// UnderlyingsTable describes underlyings.
var UnderlyingsTable = Table{"underlyings", "one row an underlying", []Column{
	{"underlying", Text, "", true, "", "the underlying's name"},
	{"kind", Text, "", true, "", "equity, index, fx, future or spread"},
	{"currency", Text, "", true, "", "ISO 4217 code of the price"},
	{"price", Float, "price", true, "", "spot price; of kind future the futures price"},
	{"carry_yield", Float, "1/year", false, "0", "continuous dividend yield, borrow or foreign rate"},
	{"vol", Float, "1/√year", false, "", "flat volatility, used where there is no surface"},
	{"curve", Text, "", false, "the currency", "zero curve that discounts"},
	{"lot", Float, "units", false, "1", "size in which the underlying trades"},
	{"observed_at", Text, "", false, "", "when the price was seen; carried as text"},
}}

// RatesTable describes rates.
var RatesTable = Table{"rates", "one row a node of a zero curve", []Column{
	{"curve", Text, "", true, "", "the curve's name, by default a currency code"},
	{"tenor", Text, "", false, "", "time from as_of such as 1D, 2W, 3M, 5Y; or give date"},
	{"date", Day, "", false, "", "date of the node; or give tenor"},
	{"zero_rate", Float, "1/year", false, "", "continuous zero rate, ACT/365F; or give discount_factor"},
	{"discount_factor", Float, "", false, "", "value at as_of of 1 paid at the node; or give zero_rate"},
}}

// VolsTable describes vols.
var VolsTable = Table{"vols", "one row a point of a volatility surface", []Column{
	{"underlying", Text, "", true, "", "the underlying's name"},
	{"expiry", Day, "", true, "", "expiry of the slice"},
	{"strike", Float, "price", true, "", "strike of the point"},
	{"vol", Float, "1/√year", true, "", "implied volatility"},
}}

// FXTable describes fx.
var FXTable = Table{"fx", "one row a currency", []Column{
	{"currency", Text, "", true, "", "ISO 4217 code"},
	{"rate", Float, "reporting currency", true, "", "reporting-currency units for one unit"},
}}

// BooksTable describes books.
var BooksTable = Table{"books", "one row a book: the book tree", []Column{
	{"book", Text, "", true, "", "the book's name"},
	{"parent", Text, "", true, "", "the book above; empty at the top"},
	{"owner", Text, "", false, "", "who answers for the book"},
}}

// DividendsTable describes dividends.
var DividendsTable = Table{"dividends", "one row a cash dividend of an equity or an index; those of one ex-date add up", []Column{
	{"underlying", Text, "", true, "", "the underlying's name"},
	{"ex_date", Day, "", true, "", "first day without the dividend; on or before as_of it has no effect"},
	{"amount", Float, "price currency", true, "", "cash amount for one unit"},
}}

// HolidaysTable describes holidays.
var HolidaysTable = Table{"holidays", "one row a day on which a calendar is closed", []Column{
	{"calendar", Text, "", true, "", "the calendar's name"},
	{"date", Day, "", true, "", "the day"},
}}
