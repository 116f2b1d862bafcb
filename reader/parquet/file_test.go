package parquet

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"nightbook/reader/table"
	"nightbook/schema"
)

// rendered reads a file whole and returns it as texts, "∅" for an empty cell.
func rendered(r io.ReaderAt, size int64) (header []string, rows [][]string, err error) {
	f, err := Open(r, size, schema.Limits{})
	if err != nil {
		return nil, nil, err
	}
	var run table.Rows
	for {
		err := f.Next(&run)
		if err == io.EOF {
			return f.Header(), rows, nil
		}
		if err != nil {
			return nil, nil, err
		}
		for i := range run.N {
			if got, want := run.Line[i], int64(len(rows)+1); got != want {
				return nil, nil, fmt.Errorf("line %d, want %d", got, want)
			}
			var row []string
			for c := range run.Cols {
				text := string(run.AppendText(nil, c, i))
				if text == "" {
					text = "∅"
				}
				row = append(row, text)
			}
			rows = append(rows, row)
		}
	}
}

func readFile(t testing.TB, name string) []byte {
	t.Helper()
	b, err := os.ReadFile(filepath.Join("testdata", name))
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// every are the files of testdata with every column; packed has one at least of
// each codec.
var (
	every  = []string{"plain", "dictionary-snappy", "v2-zstd", "delta-gzip", "int96"}
	packed = []string{"plain", "dictionary-snappy", "v2-zstd", "delta-gzip", "int96", "lz4-delta", "lz4-split", "lz4-plain"}
)

var wantedHeader = strings.Fields("id text f64 f64n f32 i8 i32 i64 u32 u64 flag day ms us ns dec9 dec18 dec38 fixed void")

// wanted is row i of the files of testdata.
func wanted(i int) []string {
	n := int64(i)
	float := func(x float64) string { return strconv.FormatFloat(x, 'f', -1, 64) }
	decimal := func(scale int) string {
		x := (n - 150) * 1237
		sign := ""
		if x < 0 {
			sign, x = "-", -x
		}
		ten := int64(math.Pow10(scale))
		return fmt.Sprintf("%s%d.%0*d", sign, x/ten, scale, x%ten)
	}
	clock := func(utc string) string {
		minute := (n-100)*100_003 + 24*60
		if i%4 == 0 {
			minute = (n - 100) * 24 * 60
		}
		day := schema.Date(math.Floor(float64(minute) / 1440))
		return day.String() + "T" + schema.Clock(int16(minute-int64(day)*1440)) + ":59" + utc
	}
	row := []string{
		fmt.Sprintf("L%05d", i), []string{"north", "south", "ä€𝄞", `a "q", b`, "x\ny"}[i%5], float(float64(i)/8 - 3), float(float64(i)/8 - 3),
		float(float64(float32(i) / 10)), fmt.Sprint(i%200 - 100), fmt.Sprint(int32(i*i*7919) - 1<<30), fmt.Sprint((n - 150) * 1_000_000_007_000),
		fmt.Sprint(4_000_000_000 + n), fmt.Sprint(uint64(18_000_000_000_000_000_000) + uint64(n)), fmt.Sprint(i%3 == 0), schema.Date(20000 + 3*i - 450).String(),
		clock("Z"), clock(""), clock("Z"), decimal(2), decimal(4), decimal(10), fmt.Sprintf("%04d", i), "∅",
	}
	for k := range row {
		if k != 0 && k != 2 && (i+k)%7 == 0 {
			row[k] = "∅"
		}
	}
	return row
}

// The same rows come out of every layout, encoding and compression.
func TestFiles(t *testing.T) {
	for _, name := range every {
		t.Run(name, func(t *testing.T) {
			b := readFile(t, name+".parquet")
			header, rows, err := rendered(bytes.NewReader(b), int64(len(b)))
			if err != nil {
				t.Fatal(err)
			}
			if got := strings.Join(header, " "); got != strings.Join(wantedHeader, " ") {
				t.Fatalf("header %s", got)
			}
			if len(rows) != 300 {
				t.Fatalf("%d rows", len(rows))
			}
			for i, row := range rows {
				for k, want := range wanted(i) {
					if row[k] != want {
						t.Errorf("row %d, %s: %q, want %q", i, header[k], row[k], want)
					}
				}
				if t.Failed() {
					t.FailNow()
				}
			}
		})
	}
}

// LZ4 pages of an independent implementation, in three encodings.
func TestLZ4Files(t *testing.T) {
	for name, want := range map[string]func(i int) string{
		"lz4-delta": func(i int) string { return fmt.Sprint(i*i - 7) },
		"lz4-split": func(i int) string { return strconv.FormatFloat(float64(i)/8-3, 'f', -1, 64) },
		"lz4-plain": func(i int) string { return fmt.Sprintf("row %d of many", i/3) },
	} {
		b := readFile(t, name+".parquet")
		_, rows, err := rendered(bytes.NewReader(b), int64(len(b)))
		if err != nil || len(rows) != 200 {
			t.Errorf("%s: %d rows, %v", name, len(rows), err)
		}
		for i, row := range rows {
			w := want(i)
			if name != "lz4-plain" && i%7 == 3 {
				w = "∅"
			}
			if row[0] != w {
				t.Errorf("%s, row %d: %s, want %s", name, i, row[0], w)
			}
		}
	}
}

func TestKinds(t *testing.T) {
	b := readFile(t, "plain.parquet")
	f, err := Open(bytes.NewReader(b), int64(len(b)), schema.Limits{})
	if err != nil {
		t.Fatal(err)
	}
	var run table.Rows
	if err := f.Next(&run); err != nil {
		t.Fatal(err)
	}
	for name, want := range map[string]struct {
		kind schema.Kind
		cell table.Cell
	}{
		"id": {schema.KindStrings, table.Text}, "f64": {schema.KindFloats, 0}, "f32": {schema.KindFloats, 0}, "i64": {schema.KindInts, 0},
		"u32": {schema.KindStrings, table.Number}, "flag": {schema.KindStrings, table.Text}, "day": {schema.KindDates, 0},
		"ns": {schema.KindStrings, table.UTC}, "us": {schema.KindStrings, table.Date}, "dec9": {schema.KindStrings, table.Number},
	} {
		for c, h := range f.Header() {
			if h != name {
				continue
			}
			if got := run.Cols[c].Kind; got != want.kind {
				t.Errorf("%s: kind %d, want %d", name, got, want.kind)
			}
			if got := run.Cell(c, 0); got != want.cell {
				t.Errorf("%s: cell %d, want %d", name, got, want.cell)
			}
		}
	}
}

func TestEmpty(t *testing.T) {
	b := readFile(t, "empty.parquet")
	header, rows, err := rendered(bytes.NewReader(b), int64(len(b)))
	if err != nil || len(rows) != 0 || len(header) != 1 {
		t.Errorf("%v %v %v", header, rows, err)
	}
}

// What is not read is refused by name.
func TestRefused(t *testing.T) {
	for name, want := range map[string]string{
		"list":   "column odd is nested (group/LIST)",
		"struct": "column odd is nested",
		"brotli": "packed with BROTLI",
	} {
		b := readFile(t, name+".parquet")
		_, _, err := rendered(bytes.NewReader(b), int64(len(b)))
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v, want %q", name, err, want)
		}
	}
}

// A file cut short at any byte never reads well, whatever it is packed with.
func TestTruncated(t *testing.T) {
	for _, name := range packed {
		whole := readFile(t, name+".parquet")
		for n := range whole {
			if _, _, err := rendered(bytes.NewReader(whole[:n]), int64(n)); err == nil {
				t.Errorf("%s cut to %d bytes reads well", name, n)
			}
		}
	}
}

// A file with bytes changed anywhere is an error or reads on: it never panics.
func TestDamaged(t *testing.T) {
	for _, name := range packed {
		whole := readFile(t, name+".parquet")
		for at := 4; at < len(whole); at += 1 + len(whole)/80 {
			b := bytes.Clone(whole)
			b[at] ^= 0x5a
			rendered(bytes.NewReader(b), int64(len(b)))
		}
	}
}

// A page that ends early while the footer still promises rows is an error.
func TestTruncatedPage(t *testing.T) {
	whole := readFile(t, "plain.parquet")
	b := bytes.Clone(whole)
	clear(b[len(b)/3 : len(b)/2])
	if _, _, err := rendered(bytes.NewReader(b), int64(len(b))); err == nil {
		t.Error("pages of zeros read well")
	}
}
