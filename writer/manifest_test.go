package writer

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"strings"
	"testing"

	"nightbook/schema"
	"nightbook/writer/internal/invent"
)

func summary(n int) *schema.Summary {
	dicts := schema.NewDicts()
	return invent.Summary(invent.Lines(0, n, dicts), dicts)
}

func TestManifest(t *testing.T) {
	s := summary(300)
	outputs := []schema.OutputFile{{Name: "lines.parquet", SHA256: "ab", Bytes: 12, Rows: 300}}
	data, err := Manifest(s, outputs)
	if err != nil {
		t.Fatal(err)
	}
	for range 3 {
		if again, err := Manifest(summary(300), outputs); err != nil || !bytes.Equal(again, data) {
			t.Fatal("other bytes", err)
		}
	}
	var m struct {
		Program, Version, Caution string
		SchemaRevision            int    `json:"schema_revision"`
		AsOf                      string `json:"as_of"`
		Currency                  string `json:"reporting_currency"`
		Conventions               map[string]string
		Counts                    struct {
			In       int64 `json:"rows_in"`
			Priced   int64
			Expired  int64
			Rejected int64
			Market   int64 `json:"rejected_market_rows"`
			Whole    bool  `json:"rows_accounted"`
			ByCode   []struct {
				Code  string
				Count int64
			} `json:"rejected_by_code"`
			Warnings []struct {
				Code  string
				Count int64
			} `json:"warnings_by_code"`
		}
		Totals struct {
			Quantity float64
			Value    float64 `json:"value_base"`
			Rho      float64 `json:"rho_cash_1bp_base"`
			Residual float64 `json:"max_pde_residual"`
			Books    []struct {
				Book     string
				Lines    int64
				Quantity float64
				Value    float64 `json:"value_base"`
			} `json:"books_own"`
		} `json:"control_totals"`
		Inputs, Outputs []struct {
			Name, Table, SHA256 string
			Bytes, Rows         int64
		}
	}
	d := json.NewDecoder(bytes.NewReader(data))
	if err := d.Decode(&m); err != nil {
		t.Fatal(err)
	}
	if m.Program != "nightbook" || m.Version != "1.2.3" || m.SchemaRevision != schema.Revision ||
		m.AsOf != "2026-01-30" || m.Currency != "USD" || m.Caution != schema.Caution || len(m.Conventions) < 5 {
		t.Errorf("head: %+v", m)
	}
	if c := m.Counts; c.In != 303 || c.Priced != 300 || c.Expired != 0 || c.Rejected != 3 || c.Market != 1 || !c.Whole ||
		len(c.ByCode) != 2 || c.ByCode[0].Code != "bad_number" || c.ByCode[0].Count != 2 ||
		len(c.Warnings) != 2 || c.Warnings[0].Code != "vol_fallback" || c.Warnings[0].Count != 4 {
		t.Errorf("counts: %+v", c)
	}
	if m.Totals.Quantity != s.Total.Quantity || m.Totals.Value != s.Total.Measures[schema.Value] ||
		m.Totals.Rho != s.Total.Measures[schema.RhoCash1BP] || m.Totals.Residual != s.MaxResidual {
		t.Errorf("totals: %+v", m.Totals)
	}
	if len(m.Totals.Books) != len(s.Books) {
		t.Fatalf("%d books", len(m.Totals.Books))
	}
	for i, b := range m.Totals.Books {
		if own := s.Books[i].Own; b.Book != s.Books[i].Book || b.Lines != own.Lines || b.Quantity != own.Quantity || b.Value != own.Measures[schema.Value] {
			t.Errorf("book %d: %+v", i, b)
		}
	}
	if len(m.Inputs) != 2 || m.Inputs[0].Name != "positions.csv" || m.Inputs[0].SHA256 != strings.Repeat("0a", 32) || m.Inputs[0].Bytes != 12345 || m.Inputs[0].Rows != 303 {
		t.Errorf("inputs: %+v", m.Inputs)
	}
	if len(m.Outputs) != 1 || m.Outputs[0].Name != "lines.parquet" || m.Outputs[0].Rows != 300 {
		t.Errorf("outputs: %+v", m.Outputs)
	}
	last := -1
	for _, key := range []string{"program", "version", "schema_revision", "as_of", "reporting_currency", "conventions", "models", "american_setting",
		"counts", "control_totals", "quantity", "value_base", "inputs", "outputs", "caution"} {
		at := bytes.Index(data, []byte(`"`+key+`":`))
		if at <= last {
			t.Errorf("key %s stands at %d, after one at %d", key, at, last)
		}
		last = at
	}
}

func TestManifestRefusesWhatIsNotFinite(t *testing.T) {
	for name, spoil := range map[string]func(*schema.Summary){
		"quantity of all lines":    func(s *schema.Summary) { s.Total.Quantity = math.NaN() },
		"delta_cash_base of all":   func(s *schema.Summary) { s.Total.Measures[schema.DeltaCash] = math.Inf(1) },
		"value_base of book House": func(s *schema.Summary) { s.Books[0].Own.Measures[schema.Value] = math.Inf(-1) },
		"max_pde_residual":         func(s *schema.Summary) { s.MaxResidual = math.Inf(1) },
		"max_price_error":          func(s *schema.Summary) { s.MaxPriceError = math.Inf(1) },
	} {
		s := summary(10)
		spoil(s)
		if _, err := Manifest(s, nil); err == nil || !strings.Contains(err.Error(), name) || !strings.Contains(err.Error(), "not finite") {
			t.Errorf("%s: error %v", name, err)
		}
	}
	s := summary(10)
	s.MaxResidual = math.NaN() // no option was priced
	data, err := Manifest(s, nil)
	if err != nil || !bytes.Contains(data, []byte(`"max_pde_residual": null`)) {
		t.Errorf("no option priced: %v", err)
	}
}

func TestNewTable(t *testing.T) {
	f := invent.Rows(0, 1000, schema.NewDict())
	for _, format := range Formats {
		var first []byte
		for workers := range 4 {
			var buf bytes.Buffer
			w, err := NewTable(format, &buf, invent.Table, Options{Workers: workers, Version: "1", Metadata: map[string]string{"k": "v"}})
			if err != nil {
				t.Fatal(err)
			}
			if err := w.Write(f); err != nil {
				t.Fatal(err)
			}
			if err := w.Close(); err != nil {
				t.Fatal(err)
			}
			if first == nil {
				first = buf.Bytes()
			}
			if buf.Len() < 10_000 || !bytes.Equal(buf.Bytes(), first) {
				t.Errorf("%s with %d workers: %d bytes, other than with none", format, workers, buf.Len())
			}
		}
	}
	if _, err := NewTable("xls", &bytes.Buffer{}, invent.Table, Options{}); err == nil || !strings.Contains(err.Error(), "parquet, csv") {
		t.Errorf("an unknown format: %v", err)
	}
	if _, err := NewTable("parquet", &bytes.Buffer{}, invent.Table, Options{Compression: "best"}); err == nil {
		t.Error("an unknown compression passes unnoticed")
	}
}

// A refused row must be seen as it came, also where it looks like a formula.
func TestRejectsAsTheyCame(t *testing.T) {
	for bare, want := range map[bool]string{
		false: "f.csv,,2,'=c,bad_number,=1+1,'@reason,\"=a,b\"\n",
		true:  "f.csv,,2,=c,bad_number,=1+1,@reason,\"=a,b\"\n",
	} {
		var buf bytes.Buffer
		w, err := NewTable("csv", &buf, schema.RejectsOut, Options{BareText: bare})
		if err != nil {
			t.Fatal(err)
		}
		if err := w.Write(schema.RejectsFrame([]schema.Reject{
			{File: "f.csv", Line: 2, Column: "=c", Code: schema.BadNumber, Value: "=1+1", Reason: "@reason", Row: "=a,b"},
		})); err != nil {
			t.Fatal(err)
		}
		if _, row, _ := strings.Cut(buf.String(), "\n"); row != want {
			t.Errorf("bare %v: %q, want %q", bare, row, want)
		}
	}
}

func ExampleManifest() {
	s := &schema.Summary{Config: &schema.Config{ReportingCurrency: "EUR"}, Version: "1.0", MaxResidual: math.NaN()}
	s.Config.AsOf.Minute = schema.NoMinute
	data, err := Manifest(s, nil)
	if err != nil {
		fmt.Println(err)
	}
	fmt.Println(string(data[:bytes.Index(data, []byte("calendar"))-4]))
	// Output:
	// {
	//   "program": "nightbook",
	//   "version": "1.0",
	//   "schema_revision": 2,
	//   "as_of": "1970-01-01",
	//   "reporting_currency": "EUR",
}
