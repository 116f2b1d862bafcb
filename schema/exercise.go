package schema

// Reasons for which a line is listed for early exercise.
const (
	PastBoundary Choice = 1 + iota
	BeforeDividend
)

// ExerciseReasons names the reasons, ExerciseReasonDocs explains them.
var ExerciseReasons = Choices{"", "past_boundary", "before_dividend"}

// ExerciseReasonDocs is the closed list of what lists a line for early exercise.
var ExerciseReasonDocs = []CodeDoc{
	{"past_boundary", "exercise is optimal at as_of: the price of the underlying is at or past exercise_boundary"},
	{"before_dividend", "a call in the money whose time value is below the next cash dividend: what exercise before the ex-date would bring is worth more than what is given up"},
}

// ExerciseRow is an American option to be exercised, or looked at before an
// ex-date.
type ExerciseRow struct {
	Index    int // row of the batch
	Reason   Choice
	ExDate   Date    // of the next cash dividend before expiry; NoDate where there is none
	Dividend float64 // NaN where there is none
}

// ExerciseOut describes the exercise table of a run.
var ExerciseOut = Table{"exercise", "one row an American option that should be exercised, or looked at before an ex-date, in the order of the position file", []Column{
	{"line_id", Text, "", true, "", "the line's name"},
	{"book", Text, "", true, "", "the book that holds the line"},
	{"underlying", Text, "", true, "", "the underlying"},
	{"currency", Text, "", true, "", "price currency, ISO 4217"},
	{"option_type", Text, "", true, "", "call or put"},
	{"strike", Float, "price", true, "", "strike"},
	{"expiry", Day, "", true, "", "expiry date"},
	{"quantity", Float, "contracts", true, "", "signed number of contracts: of one below 0 the holder of the other side decides"},
	{"reason", Text, "", true, "", "past_boundary or before_dividend"},
	{"spot", Float, "price", true, "", "price of the underlying"},
	{"price", Float, money, true, "", "model value V of one unit"},
	{"intrinsic", Float, money, true, "", "what exercise brings for one unit"},
	{"time_value", Float, money, true, "", "price − intrinsic"},
	{"exercise_boundary", Float, "price", false, "", "price of the underlying at or beyond which exercise is optimal at as_of"},
	{"ex_date", Day, "", false, "", "ex-date of the next cash dividend up to expiry"},
	{"dividend", Float, "price", false, "", "its amount for one unit"},
}}

// ExerciseFrame returns rows of a batch as rows of ExerciseOut.
func ExerciseFrame(b *Batch, d *Dicts, list []ExerciseRow) *Frame {
	r := newRows(&ExerciseOut)
	r.Cols[6].Kind, r.Cols[14].Kind = KindDates, KindDates
	for _, x := range list {
		i := x.Index
		intrinsic := b.Spot[i] - b.Strike[i]
		if b.OptionType[i] == Put {
			intrinsic = -intrinsic
		}
		intrinsic = max(intrinsic, 0)
		r.text(0, b.LineID.At(i))
		r.text(1, d.Books.Name(b.Book[i]))
		r.text(2, d.Underlyings.Name(b.Underlying[i]))
		r.text(3, d.Currencies.Name(b.Currency[i]))
		r.text(4, OptionTypes[b.OptionType[i]])
		r.float(5, b.Strike[i])
		r.Cols[6].Dates = append(r.Cols[6].Dates, b.Expiry[i])
		r.float(7, b.Quantity[i])
		r.text(8, ExerciseReasons[x.Reason])
		for k, v := range []float64{b.Spot[i], b.Price[i], intrinsic, b.Price[i] - intrinsic, b.Boundary[i]} {
			r.float(9+k, v)
		}
		r.Cols[14].Dates = append(r.Cols[14].Dates, x.ExDate)
		r.float(15, x.Dividend)
	}
	r.N = len(list)
	return &r.Frame
}
