package schema

// Outputs is the dictionary of the result tables.
var Outputs = []Table{Lines, BooksOut, UnderlyingsOut, CurrenciesOut, ExerciseOut, RejectsOut, WarningsOut, ImpliedOut}

func totalsColumns() []Column {
	cols := []Column{
		{"lines", Int, "", true, "", "lines priced or expired"},
		{"priced", Int, "", true, "", "lines priced"},
		{"expired", Int, "", true, "", "lines expired at as_of, at their payoff"},
		{"rejected", Int, "", true, "", "rows refused: they are in no total"},
	}
	for m := range NumMeasures {
		cols = append(cols, Column{MeasureNames[m] + "_base", Float, base, true, "", "sum of " + MeasureNames[m] + "_base"})
	}
	return cols
}

func localColumns() []Column {
	var cols []Column
	for m := range NumMeasures {
		cols = append(cols, Column{MeasureNames[m], Float, money, true, "", "sum of " + MeasureNames[m]})
	}
	return cols
}

// BooksOut describes the books table of a run.
var BooksOut = Table{"books", "one row a book, with all books below it: depth first along the tree, children by name", append([]Column{
	{"book", Text, "", true, "", "the book"},
	{"parent", Text, "", false, "", "the book above; null at the top"},
	{"level", Int, "", true, "", "0 at the top"},
	{"path", Text, "", true, "", "names from the top down, joined by ' / '"},
	{"owner", Text, "", false, "", "who answers for the book"},
	{"in_tree", Bool, "", true, "", "whether the book is in the books table of the snapshot"},
	{"own_lines", Int, "", true, "", "lines held by the book itself"},
}, totalsColumns()...)}

// UnderlyingsOut describes the underlyings table of a run.
var UnderlyingsOut = Table{"underlyings", "one row an underlying that has lines, by name", append(append([]Column{
	{"underlying", Text, "", true, "", "the underlying"},
	{"kind", Text, "", false, "", "kind of the underlying; null for cash"},
	{"currency", Text, "", true, "", "price currency, ISO 4217"},
	{"spot", Float, "price", true, "", "price of the underlying; 1 for cash"},
	{"fx_rate", Float, base, true, "", "reporting-currency units for one unit of the currency"},
	{"delta_units", Float, "units of the underlying", true, "", "sum of delta_units"},
}, localColumns()...), totalsColumns()...)}

// CurrenciesOut describes the currencies table of a run.
var CurrenciesOut = Table{"currencies", "one row a price currency that has lines, by name", append(append([]Column{
	{"currency", Text, "", true, "", "price currency, ISO 4217"},
	{"fx_rate", Float, base, true, "", "reporting-currency units for one unit of the currency"},
}, localColumns()...), totalsColumns()...)}

// RejectsOut describes rejects.csv.
var RejectsOut = Table{"rejects", "one row a refused row, as it came", []Column{
	{"file", Text, "", true, "", "file of the snapshot folder"},
	{"sheet", Text, "", false, "", "sheet, of a workbook"},
	{"line", Int, "", false, "", "line of a text file, row of a sheet or of a Parquet file, the first being 1"},
	{"column", Text, "", false, "", "column at fault, as the file names it"},
	{"code", Text, "", true, "", "one of the closed list of reject codes"},
	{"value", Text, "", false, "", "the cell as it came"},
	{"reason", Text, "", true, "", "what was expected and what to do"},
	{"row", Text, "", false, "", "the whole row as it came"},
}}

// WarningsOut describes warnings.csv.
var WarningsOut = Table{"warnings", "one row a warning; like ones are counted together", []Column{
	{"code", Text, "", true, "", "one of the closed list of warning codes"},
	{"subject", Text, "", false, "", "the book, underlying, curve or file it speaks of"},
	{"message", Text, "", true, "", "what was seen and what was done"},
	{"file", Text, "", false, "", "file of the snapshot folder"},
	{"line", Int, "", false, "", "first line concerned"},
	{"count", Int, "", true, "", "how many lines it concerns; 1 where it is not about lines"},
}}

// rows builds a frame row by row; it is for the small tables only.
type rows struct{ Frame }

func (r *rows) text(col int, s string) { v := r.at(col, KindStrings); v.Strings.AppendString(s) }
func (r *rows) float(col int, x float64) {
	v := r.at(col, KindFloats)
	v.Floats = append(v.Floats, x)
}
func (r *rows) int(col int, n int64) { v := r.at(col, KindInts); v.Ints = append(v.Ints, n) }
func (r *rows) bool(col int, b bool) { v := r.at(col, KindBools); v.Bools = append(v.Bools, b) }

func (r *rows) at(col int, k Kind) *Vector {
	r.Cols[col].Kind = k
	return &r.Cols[col]
}

func newRows(t *Table) *rows {
	r := &rows{Frame{Cols: make([]Vector, len(t.Columns))}}
	for i, c := range t.Columns {
		switch c.Type {
		case Float:
			r.Cols[i].Kind = KindFloats
		case Int:
			r.Cols[i].Kind = KindInts
		case Bool:
			r.Cols[i].Kind = KindBools
		}
	}
	return r
}

func (r *rows) totals(col int, t *Totals) {
	for i, n := range []int64{t.Lines, t.Priced, t.Expired, t.Rejected} {
		r.int(col+i, n)
	}
	r.measures(col+4, t.Measures)
}

func (r *rows) measures(col int, sums [NumMeasures]float64) {
	for m, x := range sums {
		r.float(col+m, x)
	}
}

// BooksFrame returns the rows of BooksOut.
func (s *Summary) BooksFrame() *Frame {
	r := newRows(&BooksOut)
	for i := range s.Books {
		b := &s.Books[i]
		r.text(0, b.Book)
		r.text(1, b.Parent)
		r.int(2, int64(b.Level))
		r.text(3, b.Path)
		r.text(4, b.Owner)
		r.bool(5, b.Listed)
		r.int(6, b.Own.Lines)
		r.totals(7, &b.Totals)
	}
	r.N = len(s.Books)
	return &r.Frame
}

// UnderlyingsFrame returns the rows of UnderlyingsOut.
func (s *Summary) UnderlyingsFrame() *Frame {
	r := newRows(&UnderlyingsOut)
	for i := range s.Underlyings {
		u := &s.Underlyings[i]
		r.text(0, u.Underlying)
		r.text(1, Kinds[u.Kind])
		r.text(2, u.Currency)
		r.float(3, u.Spot)
		r.float(4, u.FX)
		r.float(5, u.DeltaUnits)
		r.measures(6, u.Local)
		r.totals(6+int(NumMeasures), &u.Totals)
	}
	r.N = len(s.Underlyings)
	return &r.Frame
}

// CurrenciesFrame returns the rows of CurrenciesOut.
func (s *Summary) CurrenciesFrame() *Frame {
	r := newRows(&CurrenciesOut)
	for i := range s.Currencies {
		c := &s.Currencies[i]
		r.text(0, c.Currency)
		r.float(1, c.FX)
		r.measures(2, c.Local)
		r.totals(2+int(NumMeasures), &c.Totals)
	}
	r.N = len(s.Currencies)
	return &r.Frame
}

// RejectsFrame returns rejects as rows of RejectsOut.
func RejectsFrame(rejects []Reject) *Frame {
	r := newRows(&RejectsOut)
	for i := range rejects {
		x := &rejects[i]
		r.text(0, x.File)
		r.text(1, x.Sheet)
		r.int(2, lineOrNull(x.Line))
		r.text(3, x.Column)
		r.text(4, string(x.Code))
		r.text(5, x.Value)
		r.text(6, x.Reason)
		r.text(7, x.Row)
	}
	r.N = len(rejects)
	return &r.Frame
}

// NotesFrame returns warnings as rows of WarningsOut.
func NotesFrame(notes []Note) *Frame {
	r := newRows(&WarningsOut)
	for i := range notes {
		n := &notes[i]
		r.text(0, string(n.Code))
		r.text(1, n.Subject)
		r.text(2, n.Message)
		r.text(3, n.File)
		r.int(4, lineOrNull(n.Line))
		r.int(5, n.Count)
	}
	r.N = len(notes)
	return &r.Frame
}

func lineOrNull(n int64) int64 {
	if n == 0 {
		return NoInt
	}
	return n
}
