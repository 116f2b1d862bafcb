package reader

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"testing"

	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/zstd"
	parquetsource "github.com/xitongsys/parquet-go/source"
	"github.com/xitongsys/parquet-go/writer"
	"github.com/xuri/excelize/v2"

	"nightbook/schema"
)

func gzipped(t testing.TB, text string) string {
	t.Helper()
	var b bytes.Buffer
	w := gzip.NewWriter(&b)
	if _, err := io.WriteString(w, text); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

func zstandard(t testing.TB, text string) string {
	t.Helper()
	w, err := zstd.NewWriter(nil)
	if err != nil {
		t.Fatal(err)
	}
	return string(w.EncodeAll([]byte(text), nil))
}

// sheetOf writes a CSV text as a workbook: numbers as numbers, dates as dates,
// the rest as text.
func sheetOf(t testing.TB, text string) string {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	day, err := f.NewStyle(&excelize.Style{NumFmt: 14})
	if err != nil {
		t.Fatal(err)
	}
	for r, line := range strings.Split(strings.TrimSuffix(text, "\n"), "\n") {
		for c, field := range strings.Split(line, ",") {
			cell, _ := excelize.CoordinatesToCellName(c+1, r+1)
			var d schema.Date
			var minute int16
			var why *finding
			if d, minute, why = isoDate.parse([]byte(field)); why == nil {
				serial := float64(d) + 25569 // days from 1899-12-30 to 1970-01-01
				if minute != schema.NoMinute {
					serial += float64(minute) / 1440
				}
				f.SetCellDefault("Sheet1", cell, strconv.FormatFloat(serial, 'g', 17, 64))
				f.SetCellStyle("Sheet1", cell, cell, day)
			} else if _, ok := parseNumber([]byte(field)); ok && r > 0 {
				f.SetCellDefault("Sheet1", cell, field)
			} else if field != "" {
				f.SetCellStr("Sheet1", cell, field)
			}
		}
	}
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// memory is a Parquet file being written in memory.
type memory struct{ bytes.Buffer }

func (m *memory) Seek(int64, int) (int64, error)                   { return 0, nil }
func (m *memory) Close() error                                     { return nil }
func (m *memory) Open(string) (parquetsource.ParquetFile, error)   { return m, nil }
func (m *memory) Create(string) (parquetsource.ParquetFile, error) { return m, nil }

// parquetLine is a position line as another program might write it.
type parquetLine struct {
	LineID     *string  `parquet:"name=Line_ID, type=BYTE_ARRAY, convertedtype=UTF8"`
	Book       *string  `parquet:"name=book, type=BYTE_ARRAY, convertedtype=UTF8, encoding=PLAIN_DICTIONARY"`
	Underlying *string  `parquet:"name=underlying, type=BYTE_ARRAY, convertedtype=UTF8, encoding=PLAIN_DICTIONARY"`
	Instrument *string  `parquet:"name=instrument, type=BYTE_ARRAY, convertedtype=UTF8, encoding=PLAIN_DICTIONARY"`
	Quantity   *int32   `parquet:"name=quantity, type=INT32"`
	Multiplier *int64   `parquet:"name=multiplier, type=INT64"`
	Currency   *string  `parquet:"name=currency, type=BYTE_ARRAY, convertedtype=UTF8"`
	OptionType *string  `parquet:"name=option_type, type=BYTE_ARRAY, convertedtype=UTF8"`
	Exercise   *string  `parquet:"name=exercise, type=BYTE_ARRAY, convertedtype=UTF8"`
	Payoff     *string  `parquet:"name=payoff, type=BYTE_ARRAY, convertedtype=UTF8"`
	Strike     *float64 `parquet:"name=strike, type=DOUBLE"`
	Expiry     *int64   `parquet:"name=expiry, type=INT64, logicaltype=TIMESTAMP, logicaltype.isadjustedtoutc=false, logicaltype.unit=MILLIS"`
	Vol        *float64 `parquet:"name=vol, type=DOUBLE"`
	Mark       *int32   `parquet:"name=mark, type=INT32, convertedtype=DECIMAL, scale=4, precision=9"`
	EntryPrice *float64 `parquet:"name=entry_price, type=DOUBLE"`
	Strategy   *string  `parquet:"name=strategy, type=BYTE_ARRAY, convertedtype=UTF8"`
	Trader     *string  `parquet:"name=trader, type=BYTE_ARRAY, convertedtype=UTF8"`
}

// parquetOf writes the text of desk as a Parquet file of several row groups.
func parquetOf(t testing.TB, text string) string {
	t.Helper()
	var m memory
	w, err := writer.NewParquetWriter(&m, new(parquetLine), 1)
	if err != nil {
		t.Fatal(err)
	}
	w.RowGroupSize = 200 << 10
	text = strings.TrimSuffix(text[strings.IndexByte(text, '\n')+1:], "\n")
	for _, line := range strings.Split(text, "\n") {
		f := strings.Split(line, ",")
		str := func(k int) *string {
			if f[k] == "" {
				return nil
			}
			return &f[k]
		}
		num := func(k int) *float64 {
			if f[k] == "" {
				return nil
			}
			x, err := strconv.ParseFloat(f[k], 64)
			if err != nil {
				t.Fatal(err)
			}
			return &x
		}
		row := parquetLine{LineID: str(0), Book: str(1), Underlying: str(2), Instrument: str(3), Currency: str(6), OptionType: str(7), Exercise: str(8), Payoff: str(9), Strike: num(10), Vol: num(12), EntryPrice: num(14), Strategy: str(15), Trader: str(16)}
		if x := num(4); x != nil {
			n := int32(*x)
			row.Quantity = &n
		}
		if x := num(5); x != nil {
			n := int64(*x)
			row.Multiplier = &n
		}
		if x := num(13); x != nil {
			n := int32(math.Round(*x * 1e4))
			row.Mark = &n
		}
		if f[11] != "" {
			m := moment(t, f[11])
			ms := (int64(m.Day)*1440 + int64(max(m.Minute, 0))) * 60_000
			row.Expiry = &ms
		}
		if err := w.Write(row); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.WriteStop(); err != nil {
		t.Fatal(err)
	}
	return m.String()
}

// content is what the batches of a snapshot say, without where it stood and
// how it looked in its file.
func content(s *snapshot) string {
	var b strings.Builder
	d := s.dicts
	for _, x := range s.batches {
		for i := range x.N {
			fmt.Fprintln(&b, x.LineID.At(i), d.Books.Name(x.Book[i]), d.Underlyings.Name(x.Underlying[i]), d.Currencies.Name(x.Currency[i]), d.Strategies.Name(x.Strategy[i]),
				x.Instrument[i], x.Quantity[i], x.Multiplier[i], x.OptionType[i], x.Exercise[i], x.Payoff[i], x.Strike[i], x.Expiry[i], x.ExpiryMinute[i], x.Vol[i], x.Mark[i],
				x.Payout[i], x.BarrierType[i], x.Barrier[i], x.Rebate[i], x.AverageStart[i], x.AverageSoFar[i], x.EntryPrice[i], x.Extra[0].At(i), x.Status[i])
		}
	}
	return b.String()
}

// The same positions come out of a file whatever its format.
func TestFormatsAgree(t *testing.T) {
	text := desk(schema.BatchRows+900, 11)
	want := content(mustRead(t, map[string]string{"positions.csv": text}))
	for name, file := range map[string]string{
		"positions.csv.gz": gzipped(t, text), "positions.csv.zst": zstandard(t, text), "positions.xlsx": sheetOf(t, text), "positions.parquet": parquetOf(t, text),
	} {
		t.Run(name, func(t *testing.T) {
			s := mustRead(t, map[string]string{"positions.csv": "", name: file})
			if r := s.rejects(); len(r) > 0 {
				t.Fatalf("%d rejects, first %+v", len(r), r[0])
			}
			got := content(s)
			if got != want {
				g, w := strings.Split(got, "\n"), strings.Split(want, "\n")
				if len(g) != len(w) {
					t.Fatalf("%d rows, want %d", len(g), len(w))
				}
				for i := range w {
					if g[i] != w[i] {
						t.Fatalf("row %d:\n%s, want\n%s", i, g[i], w[i])
					}
				}
			}
			in := s.Inputs()[0]
			if in.Name != name || in.Rows != schema.BatchRows+900 || in.Bytes != int64(len(file)) || len(in.SHA256) != 64 {
				t.Errorf("input %+v", in)
			}
		})
	}
}

// Market tables, too, may come in any format.
func TestMarketFormatsAgree(t *testing.T) {
	text := "underlying,kind,currency,price,carry_yield\nALBA,equity,USD,100.5,0.02\nBORA,index,EUR,4000,\nODD,index,EUR,-1,\n"
	want := mustRead(t, map[string]string{"underlyings.csv": text})
	for name, file := range map[string]string{"underlyings.csv.gz": gzipped(t, text), "underlyings.csv.zst": zstandard(t, text), "underlyings.xlsx": sheetOf(t, text)} {
		got := mustRead(t, map[string]string{"underlyings.csv": "", name: file})
		if g, w := fmt.Sprint(got.market.Underlyings), fmt.Sprint(want.market.Underlyings); g != w {
			t.Errorf("%s: %s, want %s", name, g, w)
		}
		f := got.market.Faults
		if len(f) != 1 || f[0].File != name || f[0].Line != 4 || f[0].Name != "ODD" || f[0].Value != "-1" || f[0].Row != "ODD,index,EUR,-1,"[:len(f[0].Row)] {
			t.Errorf("%s: %+v", name, f)
		}
		if sheet := ""; strings.HasSuffix(name, ".xlsx") {
			if sheet = "Sheet1"; f[0].Sheet != sheet {
				t.Errorf("sheet %q", f[0].Sheet)
			}
		}
	}
}

// Rejects of typed files stand at their row, with the cells as text.
func TestRejectsOfWorkbook(t *testing.T) {
	f := excelize.NewFile()
	f.SetSheetName("Sheet1", "Lines")
	f.SetSheetRow("Lines", "A1", &[]any{"line_id", "book", "underlying", "instrument", "quantity", "note"})
	f.SetSheetRow("Lines", "A2", &[]any{1001, "North", "ALBA", "stock", 10, 0.1})
	f.SetSheetRow("Lines", "A4", &[]any{"A2", "North", "ALBA", "stock", nil, "a, \"b\""})
	f.SetSheetRow("Lines", "A5", &[]any{"A3", "North", "ALBA", "stock", "ten", nil, "beyond"})
	f.SetCellFormula("Lines", "E4", "1/0")
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	s := mustRead(t, map[string]string{"positions.csv": "", "positions.xlsx": b.String()})
	if got := s.batches[0].LineID.At(0) + " " + s.batches[0].Extra[0].At(0); got != "1001 0.1" {
		t.Errorf("typed cells as text: %s", got)
	}
	r := s.rejects()
	if len(r) != 2 {
		t.Fatalf("%+v", r)
	}
	for i := range r {
		r[i].Reason = r[i].Reason[:20]
	}
	for i, want := range []schema.Reject{
		{File: "positions.xlsx", Sheet: "Lines", Line: 4, Column: "quantity", Code: schema.BadNumber, Value: "=1/0", Reason: "the cell holds an er", Row: `A2,North,ALBA,stock,=1/0,"a, ""b"""`, Index: 1},
		{File: "positions.xlsx", Sheet: "Lines", Line: 5, Code: schema.BadRow, Reason: "there is a cell in c", Row: "A3,North,ALBA,stock,ten,", Index: 2},
	} {
		if r[i] != want {
			t.Errorf("%+v, want\n%+v", r[i], want)
		}
	}
}

// A volatility that a workbook shows as a percentage is a decimal already,
// whatever the unit of the files.
func TestPercentCells(t *testing.T) {
	f := excelize.NewFile()
	defer f.Close()
	f.SetSheetRow("Sheet1", "A1", &[]any{"underlying", "expiry", "strike", "vol"})
	f.SetSheetRow("Sheet1", "A2", &[]any{"ALBA", "2026-06-19", 90, 0.07})
	f.SetSheetRow("Sheet1", "A3", &[]any{"ALBA", "2026-06-19", 100, 0.07})
	f.SetSheetRow("Sheet1", "A4", &[]any{"ALBA", "2026-06-19", 110, 7})
	one := "0.0 %"
	for cell, style := range map[string]*excelize.Style{"D2": {NumFmt: 10}, "D3": {CustomNumFmt: &one}} {
		id, err := f.NewStyle(style)
		if err != nil {
			t.Fatal(err)
		}
		f.SetCellStyle("Sheet1", cell, cell, id)
	}
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	s := mustRead(t, map[string]string{"run.toml": smallest["run.toml"] + "[vols]\nunit = \"percent\"\n", "vols.xlsx": b.String()})
	if len(s.market.Vols) != 3 {
		t.Fatalf("%+v, faults %+v", s.market.Vols, s.market.Faults)
	}
	for _, v := range s.market.Vols {
		if v.Vol != 0.07 {
			t.Errorf("strike %v: %v, want 0.07", v.Strike, v.Vol)
		}
	}
}
