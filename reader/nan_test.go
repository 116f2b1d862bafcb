package reader

import (
	"math"
	"testing"

	"github.com/xitongsys/parquet-go/writer"

	"nightbook/schema"
)

// typedLine is a position line whose numbers are all of type double.
type typedLine struct {
	LineID     string   `parquet:"name=line_id, type=BYTE_ARRAY, convertedtype=UTF8"`
	Book       string   `parquet:"name=book, type=BYTE_ARRAY, convertedtype=UTF8"`
	Underlying string   `parquet:"name=underlying, type=BYTE_ARRAY, convertedtype=UTF8"`
	Instrument string   `parquet:"name=instrument, type=BYTE_ARRAY, convertedtype=UTF8"`
	Quantity   float64  `parquet:"name=quantity, type=DOUBLE"`
	Multiplier *float64 `parquet:"name=multiplier, type=DOUBLE"`
	Strategy   *float64 `parquet:"name=strategy, type=DOUBLE"`
	Score      *float64 `parquet:"name=score, type=DOUBLE"`
}

type typedRate struct {
	Curve string   `parquet:"name=curve, type=BYTE_ARRAY, convertedtype=UTF8"`
	Tenor string   `parquet:"name=tenor, type=BYTE_ARRAY, convertedtype=UTF8"`
	Zero  *float64 `parquet:"name=zero_rate, type=DOUBLE"`
}

// parquetRows writes rows as a Parquet file.
func parquetRows[T any](t testing.TB, rows ...T) string {
	t.Helper()
	var m memory
	w, err := writer.NewParquetWriter(&m, new(T), 1)
	if err != nil {
		t.Fatal(err)
	}
	for _, row := range rows {
		if err := w.Write(row); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.WriteStop(); err != nil {
		t.Fatal(err)
	}
	return m.String()
}

// A NaN that a Parquet file holds is no empty cell.
func TestStoredNaN(t *testing.T) {
	nan, ten := new(math.NaN()), new(10.0)
	line := func(id string, quantity float64, multiplier, strategy, score *float64) typedLine {
		return typedLine{id, "North", "ALBA", "stock", quantity, multiplier, strategy, score}
	}
	s := mustRead(t, map[string]string{
		"positions.csv": "", "positions.parquet": parquetRows(t,
			line("null", 1, nil, nil, nil), line("multiplier", 1, nan, nil, nil), line("carried", 1, ten, nil, nan),
			line("quantity", math.NaN(), ten, nil, nil), line("strategy", 1, ten, nan, ten)),
		"rates.csv": "", "rates.parquet": parquetRows(t, typedRate{"USD", "1Y", new(0.1)}, typedRate{"USD", "2Y", nan}, typedRate{"USD", "3Y", nil}),
	})
	rejects := s.rejects()
	if len(rejects) != 3 {
		t.Fatalf("%+v", rejects)
	}
	for i, want := range []struct {
		line   int64
		column string
	}{{2, "multiplier"}, {4, "quantity"}, {5, "strategy"}} {
		if r := rejects[i]; r.Line != want.line || r.Column != want.column || r.Code != schema.BadNumber || r.Value != "NaN" || r.Reason != storedNaN.reason {
			t.Errorf("%+v, want %+v", r, want)
		}
	}
	b := s.batches[0]
	if b.Multiplier[0] != 1 || b.Multiplier[2] != 10 || b.Extra[0].At(0) != "" || b.Extra[0].At(2) != "NaN" {
		t.Errorf("multipliers %v, carried %q and %q", b.Multiplier, b.Extra[0].At(0), b.Extra[0].At(2))
	}
	codes := map[int64]schema.RejectCode{2: schema.BadNumber, 3: schema.MissingValue}
	for _, f := range s.market.Faults {
		if want, ok := codes[f.Line]; ok && f.Code != want {
			t.Errorf("%+v, want %s", f, want)
		}
		delete(codes, f.Line)
	}
	if len(codes) > 0 {
		t.Errorf("no fault on lines %v of %+v", codes, s.market.Faults)
	}
}
