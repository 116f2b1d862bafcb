package schema

// RejectCode is one of the closed list of reasons for refusing a row.
type RejectCode string

// Reasons for refusing a row. RejectCodes documents each.
const (
	BadRow            RejectCode = "bad_row"
	BadText           RejectCode = "bad_text"
	MissingValue      RejectCode = "missing_value"
	BadNumber         RejectCode = "bad_number"
	BadDate           RejectCode = "bad_date"
	BadChoice         RejectCode = "bad_choice"
	OutOfRange        RejectCode = "out_of_range"
	DuplicateKey      RejectCode = "duplicate_key"
	DuplicateLineID   RejectCode = "duplicate_line_id"
	UnknownUnderlying RejectCode = "unknown_underlying"
	CurrencyMismatch  RejectCode = "currency_mismatch"
	KindMismatch      RejectCode = "kind_mismatch"
	NoRate            RejectCode = "no_rate"
	NoVol             RejectCode = "no_vol"
	NoFX              RejectCode = "no_fx"
	BadMarketData     RejectCode = "bad_market_data"
	TermsMismatch     RejectCode = "terms_mismatch"
	Unsupported       RejectCode = "unsupported"
	NotFinite         RejectCode = "not_finite"
	Inaccurate        RejectCode = "inaccurate"
)

// CodeDoc is the meaning of a code.
type CodeDoc struct {
	Code string
	Doc  string
}

// RejectCodes is the closed list of reject codes.
var RejectCodes = []CodeDoc{
	{string(BadRow), "the row does not have the columns of its header, or cannot be read as a row"},
	{string(BadText), "a text is not valid UTF-8, holds a control character, or is too long"},
	{string(MissingValue), "a cell that this line needs is empty"},
	{string(BadNumber), "a cell is not a finite number"},
	{string(BadDate), "a cell is not a date of the declared format"},
	{string(BadChoice), "a cell is not one of the words of a closed list"},
	{string(OutOfRange), "a number or a date is outside the range that makes sense for its column"},
	{string(DuplicateKey), "a market row has the key of an earlier row"},
	{string(DuplicateLineID), "line_id stands on an earlier row; the earlier row counts"},
	{string(UnknownUnderlying), "the underlying is not in underlyings"},
	{string(CurrencyMismatch), "the line's currency is not the underlying's"},
	{string(KindMismatch), "the instrument does not exist on this kind of underlying"},
	{string(NoRate), "there is no zero curve for the line"},
	{string(NoVol), "there is no volatility for the line: not its own, no surface, no flat volatility"},
	{string(NoFX), "there is no rate into the reporting currency"},
	{string(BadMarketData), "the market data that the line needs has a refused row"},
	{string(TermsMismatch), "the line has terms that its instrument or payoff does not know"},
	{string(Unsupported), "this version does not price such a line"},
	{string(NotFinite), "the result is not a finite number"},
	{string(Inaccurate), "finite differences cannot tell the price of the line to 1 % of the price of its underlying"},
}

// NoteCode is one of the closed list of warnings.
type NoteCode string

// Warnings. NoteCodes documents each.
const (
	FileNotUsed     NoteCode = "file_not_used"
	ColumnEmptyName NoteCode = "column_without_name"
	BookNotInTree   NoteCode = "book_not_in_tree"
	CarryIgnored    NoteCode = "carry_ignored"
	VolFallback     NoteCode = "vol_fallback"
	CurveFlatEnd    NoteCode = "curve_flat_end"
	SurfaceFlatEnd  NoteCode = "surface_flat_end"
	SurfaceCalendar NoteCode = "surface_calendar"
	SliceExpired    NoteCode = "slice_expired"
	NoHolidays      NoteCode = "no_holidays"
	FormatDetected  NoteCode = "format_detected"
	NoPositions     NoteCode = "no_positions"
	QuoteNotUsed    NoteCode = "quote_not_used"
	MarketRowUnused NoteCode = "market_row_unused"
	PriceUncertain  NoteCode = "price_uncertain"
	DividendsLarge  NoteCode = "dividends_large"
	RowInField      NoteCode = "row_in_field"
)

// NoteCodes is the closed list of warnings.
var NoteCodes = []CodeDoc{
	{string(FileNotUsed), "a file of the snapshot folder is not used by this version"},
	{string(ColumnEmptyName), "a column has no name in the header and is dropped"},
	{string(BookNotInTree), "a book is not in books: it is added up as a book of its own at the top"},
	{string(CarryIgnored), "carry_yield of an underlying of kind future or spread has no meaning and is not used"},
	{string(VolFallback), "the underlying has no surface: its flat volatility was used"},
	{string(CurveFlatEnd), "an expiry lies beyond the ends of the zero curve: the end rate was used"},
	{string(SurfaceFlatEnd), "an expiry lies beyond the ends of the surface: the end slice was used"},
	{string(SurfaceCalendar), "total variance of a surface falls between two expiries at the money"},
	{string(SliceExpired), "a surface has slices that are not after as_of: they are not used"},
	{string(NoHolidays), "no holidays are given for the calendar: business days are Monday to Friday"},
	{string(FormatDetected), "the encoding of a file was detected, not declared"},
	{string(MarketRowUnused), "vols or dividends have rows that no line can use: their underlying is not in underlyings, or its kind pays no dividends"},
	{string(PriceUncertain), "finite differences did not meet the tolerance on their finest mesh: price_error of the lines says how far"},
	{string(DividendsLarge), "the cash dividends before an expiry are worth more than 40 % of the price: piecewise holds the price at 0 or above, the forward does not, and put, call and forward lose their parity"},
	{string(RowInField), "a quoted field of a text file runs over lines that look like rows of their own: a quotation mark may be out of place"},
	{string(QuoteNotUsed), "quotes gave no volatility and are not in the surface"},
	{string(NoPositions), "the position file has a header and no rows"},
}
