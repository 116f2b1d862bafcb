package writer

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"math"

	"nightbook/schema"
)

// Caution stands in the manifest and in the workbook.
const Caution = schema.Caution

// manifest is the shape of manifest.json. The order of the fields is that of
// the file.
type manifest struct {
	Program           string          `json:"program"`
	Version           string          `json:"version"`
	SchemaRevision    int             `json:"schema_revision"`
	AsOf              string          `json:"as_of"`
	ReportingCurrency string          `json:"reporting_currency"`
	Calendar          string          `json:"calendar"`
	Conventions       conventions     `json:"conventions"`
	Models            manifestModels  `json:"models"`
	Counts            manifestCounts  `json:"counts"`
	Totals            manifestTotals  `json:"control_totals"`
	Inputs            []manifestInput `json:"inputs"`
	Outputs           []manifestFile  `json:"outputs"`
	Caution           string          `json:"caution"`
}

type conventions struct {
	DayCount         string `json:"day_count"`
	Rates            string `json:"rates"`
	RateNodes        string `json:"rate_interpolation"`
	VolExpiries      string `json:"volatility_between_expiries"`
	Sensitivities    string `json:"sensitivities"`
	PositionMeasures string `json:"position_measures"`
	Theta            string `json:"theta"`
	Dividends        string `json:"dividends"`
	Expired          string `json:"expired_lines"`
	Sums             string `json:"sums"`
}

var theConventions = conventions{
	DayCount:         "ACT/365F; date against date is whole days, with times of day on both to the minute",
	Rates:            "continuous zero rates and yields",
	RateNodes:        "linear in rate x time; flat zero rate beyond the ends",
	VolExpiries:      "linear in total variance at fixed forward moneyness; flat beyond the ends",
	Sensitivities:    "mathematical partial derivatives for one unit of the contract; vega and rho per 1.00, theta per year",
	PositionMeasures: "unit measure x quantity x multiplier, in the line's currency and, with _base, in the reporting currency",
	Theta:            "theta_cash_1d and theta_cash_1bd by full revaluation to the next calendar day and the next business day, all else held but for cash dividends, which come off the price on their ex-date",
	Dividends:        "continuous yield, and cash amounts off the price on ex-dates after as_of and up to expiry",
	Expired:          "at as_of or before: the payoff at the current price",
	Sums:             "exact before one rounding: independent of the order of the rows",
}

// manifestModels is what run.toml says of models, or their defaults.
type manifestModels struct {
	American  string  `json:"american_setting"`
	Dividends string  `json:"dividend_model"`
	Tolerance float64 `json:"finite_difference_tolerance"`
}

func modelsOf(m schema.ModelsConfig) manifestModels {
	return manifestModels{schema.Settings[m.American], schema.DividendModels[m.Dividends], m.Tolerance}
}

type manifestCounts struct {
	RowsIn         int64       `json:"rows_in"`
	Priced         int64       `json:"priced"`
	Expired        int64       `json:"expired"`
	Rejected       int64       `json:"rejected"`
	MarketRejected int64       `json:"rejected_market_rows"` // not part of rows_in
	RowsAccounted  bool        `json:"rows_accounted"`
	RejectedByCode []codeCount `json:"rejected_by_code"`
	WarningsByCode []codeCount `json:"warnings_by_code"`
}

type codeCount struct {
	Code  string `json:"code"`
	Count int64  `json:"count"`
}

// manifestTotals are the figures to add up again from the tables.
type manifestTotals struct {
	quantity float64
	measures [schema.NumMeasures]float64 // in the reporting currency
	largest  [3]float64                  // see schema.Summary.MaxResidual and the two behind it; NaN where there is none
	books    []manifestBook
}

var largestNames = [...]string{"max_pde_residual", "max_pde_residual_boundary_integral", "max_price_error_share_of_spot"}

func largest(s *schema.Summary) [3]float64 {
	return [...]float64{s.MaxResidual, s.MaxIntegralResidual, s.MaxPriceError}
}

// MarshalJSON writes the measures under their column names, in their order.
func (t manifestTotals) MarshalJSON() ([]byte, error) {
	b := []byte{'{'}
	var failed error
	field := func(name string, value any) {
		v, err := json.Marshal(value)
		failed = errors.Join(failed, err)
		b = fmt.Appendf(b, "%q:%s,", name, v)
	}
	field("quantity", t.quantity)
	for m, x := range t.measures {
		field(schema.MeasureNames[m]+"_base", x)
	}
	for i, name := range largestNames {
		if math.IsNaN(t.largest[i]) {
			field(name, nil)
		} else {
			field(name, t.largest[i])
		}
	}
	field("books_own", t.books)
	b[len(b)-1] = '}'
	return b, failed
}

type manifestBook struct {
	Book      string  `json:"book"`
	Lines     int64   `json:"lines"`
	Quantity  float64 `json:"quantity"`
	ValueBase float64 `json:"value_base"`
}

type manifestInput struct {
	Name   string `json:"name"`
	Table  string `json:"table"`
	SHA256 string `json:"sha256"`
	Bytes  int64  `json:"bytes"`
	Rows   int64  `json:"rows"`
}

type manifestFile struct {
	Name   string `json:"name"`
	SHA256 string `json:"sha256"`
	Bytes  int64  `json:"bytes"`
	Rows   int64  `json:"rows"`
}

// Manifest returns manifest.json: what was read, what was written, and the
// figures to hold a later reading of the files against. Nothing in it tells of the
// machine. A total that is not finite is refused.
func Manifest(s *schema.Summary, outputs []schema.OutputFile) ([]byte, error) {
	if err := finiteTotals(s); err != nil {
		return nil, err
	}
	m := manifest{
		Program:           program,
		Version:           s.Version,
		SchemaRevision:    schema.Revision,
		AsOf:              s.Config.AsOf.String(),
		ReportingCurrency: s.Config.ReportingCurrency,
		Calendar:          s.Config.Calendar,
		Conventions:       theConventions,
		Models:            modelsOf(s.Config.Models.OrDefault()),
		Counts: manifestCounts{
			RowsIn: s.RowsIn, Priced: s.Total.Priced, Expired: s.Total.Expired, Rejected: s.Rejects,
			MarketRejected: s.Faults,
			RowsAccounted:  s.RowsAccounted(),
			RejectedByCode: []codeCount{},
			WarningsByCode: noteCounts(s.Notes),
		},
		Totals: manifestTotals{
			quantity: s.Total.Quantity,
			measures: s.Total.Measures,
			largest:  largest(s),
			books:    []manifestBook{},
		},
		Inputs:  []manifestInput{},
		Outputs: []manifestFile{},
		Caution: Caution,
	}
	for _, c := range s.RejectCount {
		m.Counts.RejectedByCode = append(m.Counts.RejectedByCode, codeCount(c))
	}
	for i := range s.Books {
		b := &s.Books[i]
		m.Totals.books = append(m.Totals.books,
			manifestBook{b.Book, b.Own.Lines, b.Own.Quantity, b.Own.Measures[schema.Value]})
	}
	for _, f := range s.Inputs {
		m.Inputs = append(m.Inputs, manifestInput(f))
	}
	for _, f := range outputs {
		m.Outputs = append(m.Outputs, manifestFile(f))
	}
	var buf bytes.Buffer
	e := json.NewEncoder(&buf)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	err := e.Encode(&m)
	return buf.Bytes(), err
}

// noteCounts adds warnings up by code, in the order of schema.NoteCodes.
func noteCounts(notes []schema.Note) []codeCount {
	counts := []codeCount{}
	for _, c := range schema.NoteCodes {
		var n int64
		for i := range notes {
			if string(notes[i].Code) == c.Code {
				n += notes[i].Count
			}
		}
		if n > 0 {
			counts = append(counts, codeCount{c.Code, n})
		}
	}
	return counts
}

// finiteTotals refuses a summary with a total that is no number.
func finiteTotals(s *schema.Summary) error {
	bad := func(what string, t *schema.Totals) error {
		if !finite(t.Quantity) {
			return fmt.Errorf("manifest: quantity of %s is not finite", what)
		}
		for m, x := range t.Measures {
			if !finite(x) {
				return fmt.Errorf("manifest: %s_base of %s is not finite", schema.MeasureNames[m], what)
			}
		}
		return nil
	}
	if err := bad("all lines", &s.Total); err != nil {
		return err
	}
	for i := range s.Books {
		if err := bad("book "+s.Books[i].Book, &s.Books[i].Own); err != nil {
			return err
		}
	}
	for i, x := range largest(s) {
		if math.IsInf(x, 0) {
			return fmt.Errorf("manifest: %s is not finite", largestNames[i])
		}
	}
	return nil
}

func finite(x float64) bool { return x-x == 0 }
