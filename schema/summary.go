package schema

// Summary is a run added up: what stands behind every sheet and table but the
// lines themselves.
type Summary struct {
	Config      *Config
	Version     string
	RowsIn      int64
	Total       Totals
	Books       []BookTotal       // the tree, depth first, children by name
	Underlyings []UnderlyingTotal // by name
	Currencies  []CurrencyTotal   // by name
	Rejects     int64             // refused position rows
	Faults      int64             // refused market rows; they are in rejects.csv, not in RowsIn
	RejectCount []CodeCount       // by code, in the order of RejectCodes
	Notes       []Note            // counted together, by code and subject
	MaxResidual float64           // largest pde_residual of an option with a closed form; NaN without one

	// MaxIntegralResidual is the largest pde_residual of an option priced by the
	// boundary integral, MaxPriceError the largest price_error of one priced by
	// finite differences, as a share of its spot. NaN without one.
	MaxIntegralResidual, MaxPriceError float64

	Inputs     []InputFile
	LinesFiles []string // the files that hold every line
}

// Totals are sums over lines. The measures are in the reporting currency.
// Each sum is exact before its one rounding, so it does not depend on the order
// of the lines or the number of workers.
type Totals struct {
	Lines, Priced, Expired, Rejected int64 // Lines = Priced + Expired
	Quantity                         float64
	Measures                         [NumMeasures]float64
}

// BookTotal is a book with all books below it.
type BookTotal struct {
	Book, Parent, Owner string
	Path                string // names from the top down, joined by " / "
	Level               int    // 0 at the top
	Listed              bool   // in the books table
	Own                 Totals // lines held by the book itself
	Totals                     // and by the books below it
}

// UnderlyingTotal is all lines on an underlying.
type UnderlyingTotal struct {
	Underlying string
	Kind       Choice // 0: cash lines
	Currency   string
	Spot, FX   float64
	DeltaUnits float64
	Local      [NumMeasures]float64 // in the price currency
	Totals
}

// CurrencyTotal is all lines in a currency.
type CurrencyTotal struct {
	Currency string
	FX       float64
	Local    [NumMeasures]float64 // in the currency
	Totals
}

// CodeCount is how often a code was met.
type CodeCount struct {
	Code  string
	Count int64
}

// InputFile is a file that was read.
type InputFile struct {
	Name   string // in the snapshot folder
	Table  string // the table it holds; "run" for run.toml
	SHA256 string
	Bytes  int64
	Rows   int64 // data rows; 0 for run.toml
}

// OutputFile is a file that was written.
type OutputFile struct {
	Name   string
	SHA256 string
	Bytes  int64
	Rows   int64
}

// RowsAccounted reports whether every row came out as priced, expired or rejected.
func (s *Summary) RowsAccounted() bool {
	return s.RowsIn == s.Total.Priced+s.Total.Expired+s.Rejects
}
