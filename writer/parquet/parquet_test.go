package parquet

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"

	"github.com/xitongsys/parquet-go/parquet"
	"github.com/xitongsys/parquet-go/reader"
	"github.com/xitongsys/parquet-go/source"

	"nightbook/schema"
	"nightbook/writer/internal/invent"
)

func write(t testing.TB, table schema.Table, opt Options, frames ...*schema.Frame) []byte {
	t.Helper()
	var buf bytes.Buffer
	w, err := New(&buf, table, opt)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range frames {
		if err := w.Write(f); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return buf.Bytes()
}

// memory lets the library's reader read a file from memory.
type memory struct {
	*bytes.Reader
	data []byte
}

func (m memory) Open(string) (source.ParquetFile, error) {
	return memory{bytes.NewReader(m.data), m.data}, nil
}
func (memory) Create(string) (source.ParquetFile, error) { return nil, io.ErrClosedPipe }
func (memory) Write([]byte) (int, error)                 { return 0, io.ErrClosedPipe }
func (memory) Close() error                              { return nil }

func open(t testing.TB, data []byte) *reader.ParquetReader {
	t.Helper()
	r, err := reader.NewParquetColumnReader(memory{bytes.NewReader(data), data}, 1)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// compare reads a file of frames of invent.Table back and compares every value.
func compare(t *testing.T, data []byte, frames ...*schema.Frame) {
	t.Helper()
	r := open(t, data)
	n := 0
	for _, f := range frames {
		n += f.N
	}
	if int(r.GetNumRows()) != n {
		t.Fatalf("%d rows, want %d", r.GetNumRows(), n)
	}
	for i, c := range invent.Table.Columns {
		values, _, _, err := r.ReadColumnByIndex(int64(i), int64(n))
		if err != nil {
			t.Fatal(err)
		}
		if len(values) != n {
			t.Fatalf("column %s: %d values, want %d", c.Name, len(values), n)
		}
		at := 0
		for _, f := range frames {
			for row := range f.N {
				if err := sameValue(&f.Cols[i], row, values[at]); err != nil {
					t.Fatalf("column %s, row %d: %v", c.Name, at, err)
				}
				at++
			}
		}
	}
}

func sameValue(v *schema.Vector, row int, got any) error {
	var want any
	switch v.Kind {
	case schema.KindFloats:
		if x := v.Floats[row]; x == x {
			y, ok := got.(float64)
			if !ok || math.Float64bits(x) != math.Float64bits(y) {
				return fmt.Errorf("%v, want %v", got, x)
			}
			return nil
		}
	case schema.KindInts:
		if x := v.Ints[row]; x != schema.NoInt {
			want = x
		}
	case schema.KindDates:
		if x := v.Dates[row]; x != schema.NoDate {
			want = int32(x)
		}
	case schema.KindBools:
		want = v.Bools[row]
	default:
		if x := v.Text(row); x != "" {
			want = x
		}
	}
	if got != want {
		return fmt.Errorf("%v, want %v", got, want)
	}
	return nil
}

func TestRoundTrip(t *testing.T) {
	for _, n := range []int{0, 1, 7, 8, 1000, pageRows - 1, pageRows, pageRows + 1} {
		f := invent.Rows(0, n, schema.NewDict())
		compare(t, write(t, invent.Table, Options{Workers: 2}, f), f)
	}
	for _, codec := range []string{"zstd", "snappy", "gzip", "none"} {
		f := invent.Rows(0, 20_000, schema.NewDict())
		data := write(t, invent.Table, Options{Compression: codec}, f)
		compare(t, data, f)
		want := map[string]parquet.CompressionCodec{
			"zstd": parquet.CompressionCodec_ZSTD, "snappy": parquet.CompressionCodec_SNAPPY,
			"gzip": parquet.CompressionCodec_GZIP, "none": parquet.CompressionCodec_UNCOMPRESSED,
		}[codec]
		group := open(t, data).Footer.RowGroups[0]
		if got := group.Columns[0].MetaData.Codec; got != want { // id: free text
			t.Errorf("%s: column id is %v", codec, got)
		}
		for i, what := range map[int]string{9: "rate: indices of four values", 7: "price: noise"} {
			if got := group.Columns[i].MetaData.Codec; got != parquet.CompressionCodec_UNCOMPRESSED {
				t.Errorf("%s: column %s is %v", codec, what, got)
			}
		}
	}
	if _, err := New(io.Discard, invent.Table, Options{Compression: "lzo"}); err == nil {
		t.Error("an unknown compression passes unnoticed")
	}
}

func TestRowGroups(t *testing.T) {
	rows := mostRows
	if testing.Short() {
		rows = 2 * pageRows
	}
	n := 2*rows + 5000
	frames := invent.Slices(invent.Rows(0, n, schema.NewDict()), 4096)
	data := write(t, invent.Table, Options{Workers: 2, Version: "1.2.3", Metadata: map[string]string{"b": "2", "a": "1"}, GroupRows: rows % mostRows}, frames...)
	compare(t, data, frames...)
	footer := open(t, data).Footer
	if len(footer.RowGroups) != 3 || footer.RowGroups[1].NumRows != int64(rows) || footer.RowGroups[2].NumRows != 5000 {
		t.Errorf("row groups: %v", footer.RowGroups)
	}
	if *footer.CreatedBy != "nightbook version 1.2.3" {
		t.Errorf("created by %s", *footer.CreatedBy)
	}
	if kv := footer.KeyValueMetadata; len(kv) != 2 || kv[0].Key != "a" || *kv[0].Value != "1" || kv[1].Key != "b" {
		t.Errorf("metadata %v", kv)
	}
}

// The bytes must not depend on how rows come in frames, on the number of
// workers, or on which code a text got.
func TestBytesDependOnRowsOnly(t *testing.T) {
	const n = 9 * pageRows / 2 // in row groups of two pages
	want := map[string][]byte{}
	for workers := 1; workers <= 3; workers++ {
		dict := schema.NewDict()
		for i := range 40 * workers { // other codes for the same texts
			dict.Code(fmt.Sprintf("Book %02d", 39-i%40))
		}
		whole := invent.Rows(0, n, dict)
		for codec, sizes := range map[string][]int{"zstd": {n, 4096, 1000}, "snappy": {n}, "gzip": {1000}} {
			for _, size := range sizes {
				got := write(t, invent.Table, Options{Workers: workers, Compression: codec, GroupRows: 2 * pageRows}, invent.Slices(whole, size)...)
				if want[codec] == nil {
					want[codec] = got
				}
				if !bytes.Equal(got, want[codec]) {
					t.Errorf("%s, frames of %d rows, %d workers: other bytes", codec, size, workers)
				}
			}
		}
	}
}

func TestRefused(t *testing.T) {
	two := schema.NewDict().Code("x")
	dict := schema.NewDict()
	dict.Code("x")
	strings2 := schema.Strings{}
	strings2.AppendString("x")
	strings2.AppendString("")
	for _, c := range []struct {
		name     string
		typ      schema.Type
		required bool
		v        schema.Vector
		want     string
	}{
		{"NaN", schema.Float, true, schema.Vector{Kind: schema.KindFloats, Floats: []float64{1, math.NaN()}}, "never null"},
		{"Inf", schema.Float, false, schema.Vector{Kind: schema.KindFloats, Floats: []float64{1, math.Inf(1)}}, "not a finite number"},
		{"NoInt", schema.Int, true, schema.Vector{Kind: schema.KindInts, Ints: []int64{1, schema.NoInt}}, "never null"},
		{"NoDate", schema.Day, true, schema.Vector{Kind: schema.KindDates, Dates: []schema.Date{1, schema.NoDate}}, "never null"},
		{"no code", schema.Text, true, schema.Vector{Kind: schema.KindCodes, Codes: []schema.Code{two, 0}, Dict: dict}, "never null"},
		{"no choice", schema.Text, true, schema.Vector{Kind: schema.KindChoices, Choices: []schema.Choice{1, 0}, Names: schema.Kinds}, "never null"},
		{"no text", schema.Text, true, schema.Vector{Kind: schema.KindStrings, Strings: strings2}, "never null"},
	} {
		table := schema.Table{Name: "t", Columns: []schema.Column{{Name: "it", Type: c.typ, Required: c.required}}}
		w, err := New(io.Discard, table, Options{Workers: 2})
		if err != nil {
			t.Fatal(err)
		}
		good := c.v
		if err := w.Write(&schema.Frame{N: 1, Cols: []schema.Vector{good}}); err != nil {
			t.Fatal(err)
		}
		err = w.Write(&schema.Frame{N: 2, Cols: []schema.Vector{c.v}})
		if err == nil || !strings.Contains(err.Error(), "column it, row 3: ") || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: error %v", c.name, err)
		}
		if again := w.Close(); again == nil {
			t.Errorf("%s: Close after a failure succeeds", c.name)
		}
	}
}
