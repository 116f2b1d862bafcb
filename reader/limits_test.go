package reader

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/klauspost/compress/zstd"
	"github.com/xitongsys/parquet-go/writer"
	"github.com/xuri/excelize/v2"

	"nightbook/schema"
)

// noted is a position line with a text of its own.
type noted struct {
	LineID     string `parquet:"name=line_id, type=BYTE_ARRAY, convertedtype=UTF8"`
	Book       string `parquet:"name=book, type=BYTE_ARRAY, convertedtype=UTF8, encoding=PLAIN_DICTIONARY"`
	Underlying string `parquet:"name=underlying, type=BYTE_ARRAY, convertedtype=UTF8"`
	Instrument string `parquet:"name=instrument, type=BYTE_ARRAY, convertedtype=UTF8"`
	Quantity   int64  `parquet:"name=quantity, type=INT64"`
	Note       string `parquet:"name=note, type=BYTE_ARRAY, convertedtype=UTF8"`
}

// notes writes n lines with notes of that many bytes, in pages of up to page bytes.
func notes(t testing.TB, n, size, page int) string {
	t.Helper()
	var m memory
	w, err := writer.NewParquetWriter(&m, new(noted), 1)
	if err != nil {
		t.Fatal(err)
	}
	w.PageSize = int64(page)
	for i := range n {
		if err := w.Write(noted{fmt.Sprint(i), fmt.Sprint("Book ", i%5), "ALBA", "stock", 1, strings.Repeat("n", size)}); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.WriteStop(); err != nil {
		t.Fatal(err)
	}
	return m.String()
}

// wide is a position file with further columns.
func wide(columns int) string {
	header := "line_id,book,underlying,instrument,quantity"
	for i := range columns {
		header += fmt.Sprint(",x", i)
	}
	return header + "\n"
}

// noteBook is a workbook with sheets and a note of that many bytes on each of some lines.
func noteBook(t testing.TB, sheets, lines, size int) string {
	t.Helper()
	f := excelize.NewFile()
	defer f.Close()
	f.SetSheetRow("Sheet1", "A1", &[]any{"line_id", "book", "underlying", "instrument", "quantity", "note"})
	for i := range lines {
		f.SetSheetRow("Sheet1", fmt.Sprint("A", i+2), &[]any{i, "North", "ALBA", "stock", 1, fmt.Sprint(i) + strings.Repeat("n", size)})
	}
	for k := 1; k < sheets; k++ {
		f.NewSheet(fmt.Sprint("More ", k))
	}
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// A file beyond a limit is refused with its name, the limit, and where to move
// it; with the limit moved, it is read.
func TestLimits(t *testing.T) {
	rows := func(n int) string {
		return wide(0) + strings.Repeat("1,North,ALBA,stock,1\n", n)
	}
	long := wide(0) + "1," + strings.Repeat("n", 5000) + ",ALBA,stock,1\n"
	inline := excelize.NewFile() // texts in the rows themselves
	defer inline.Close()
	stream, err := inline.NewStreamWriter("Sheet1")
	if err != nil {
		t.Fatal(err)
	}
	stream.SetRow("A1", []any{"line_id", "book", "underlying", "instrument", "quantity", "note"})
	stream.SetRow("A2", []any{1, "North", "ALBA", "stock", 1, strings.Repeat("n", 20_000)})
	stream.Flush()
	var inlined bytes.Buffer
	if err := inline.Write(&inlined); err != nil {
		t.Fatal(err)
	}
	var window bytes.Buffer
	z, err := zstd.NewWriter(&window, zstd.WithWindowSize(8<<20))
	if err != nil {
		t.Fatal(err)
	}
	z.Write([]byte(rows(10)))
	z.Flush() // a frame in which nothing tells how long it will be
	z.Write([]byte(rows(10)))
	z.Close()
	million := notes(t, 100, 20_000, 4<<20)
	for _, c := range []struct {
		limit       schema.Limit
		value       int64
		table, name string
		file        string
	}{
		{schema.RowBytes, 4096, "positions", "positions.csv", long},
		{schema.RowBytes, 1024, "positions", "positions.xlsx", inlined.String()},
		{schema.BatchBytes, 1 << 20, "positions", "positions.parquet", million},
		{schema.Columns, 9, "positions", "positions.csv", wide(5)},
		{schema.Columns, 5, "positions", "positions.parquet", notes(t, 1, 1, 8192)},
		{schema.Columns, 5, "positions", "positions.xlsx", noteBook(t, 1, 1, 1)},
		{schema.Rows, 9, "positions", "positions.csv", rows(10)},
		{schema.MarketRows, 1, "fx", "fx.csv", "currency,rate\nEUR,1\nUSD,1\n"},
		{schema.UnpackedBytes, 1 << 20, "positions", "positions.csv.gz", gzipped(t, rows(100_000))},
		{schema.UnpackedBytes, 1 << 20, "positions", "positions.csv.zst", zstandard(t, rows(100_000))},
		{schema.UnpackedBytes, 1 << 20, "positions", "positions.xlsx", noteBook(t, 1, 8000, 20)},
		{schema.UnpackedBytes, 1 << 20, "positions", "positions.parquet", million},
		{schema.WindowBytes, 1 << 20, "positions", "positions.csv.zst", window.String()},
		{schema.Sheets, 2, "positions", "positions.xlsx", noteBook(t, 3, 1, 1)},
		{schema.HeldBytes, 1 << 20, "positions", "positions.xlsx", noteBook(t, 1, 60, 20_000)},
		{schema.MetadataBytes, 1024, "positions", "positions.parquet", million},
		{schema.PageBytes, 1 << 20, "positions", "positions.parquet", million},
		{schema.DictionaryValues, 4, "positions", "positions.parquet", million},
	} {
		doc := &schema.LimitDocs[c.limit]
		t.Run(doc.Key+" "+c.name, func(t *testing.T) {
			over := map[string]string{"positions.csv": "", c.name: c.file}
			if c.table != "positions" {
				delete(over, "positions.csv")
			}
			over["run.toml"] = smallest["run.toml"] + fmt.Sprintf("[limits]\n%s = %d\n", doc.Key, c.value)
			dir := folderOf(t, over)
			_, err := readAll(dir)
			var limit *schema.LimitError
			if !errors.As(err, &limit) || limit.Limit != c.limit {
				t.Fatalf("%v", err)
			}
			for _, part := range []string{filepath.Join(dir, c.name), fmt.Sprintf("%s = %d allows", doc.Key, c.value), "under [limits] of run.toml", fmt.Sprint(doc.Most, " at most")} {
				if !strings.Contains(err.Error(), part) {
					t.Errorf("%v does not say %q", err, part)
				}
			}
			over["run.toml"] = smallest["run.toml"]
			if _, err := readAll(folderOf(t, over)); err != nil {
				t.Errorf("with the limit at its default: %v", err)
			}
		})
	}
}

// A row with a field beyond the limit is refused, and the others are read.
func TestFieldLimit(t *testing.T) {
	long := strings.Repeat("n", 300)
	f := excelize.NewFile()
	defer f.Close()
	f.SetSheetRow("Sheet1", "A1", &[]any{"line_id", "book", "underlying", "instrument", "quantity", "note"})
	f.SetSheetRow("Sheet1", "A2", &[]any{"1", "North", "ALBA", "stock", 1, long})
	f.SetSheetRow("Sheet1", "A3", &[]any{"2", "North", "ALBA", "stock", 1, "short"})
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	for name, file := range map[string]string{
		"positions.csv":     "line_id,book,underlying,instrument,quantity,note\n1,North,ALBA,stock,1," + long + "\n2,North,ALBA,stock,1,short\n",
		"positions.xlsx":    b.String(),
		"positions.parquet": parquetFile(t, noted{"1", "North", "ALBA", "stock", 1, long}, noted{"2", "North", "ALBA", "stock", 1, "short"}),
	} {
		s := mustRead(t, map[string]string{"positions.csv": "", name: file, "run.toml": smallest["run.toml"] + "[limits]\nfield_bytes = 256\n"})
		r := s.rejects()
		if len(r) != 1 || r[0].Index != 0 || r[0].Code != schema.BadRow || !strings.Contains(r[0].Reason, "field_bytes = 256 allows") || s.batches[0].N != 2 || s.batches[0].Status[1] != 0 {
			t.Errorf("%s: %+v", name, r)
		}
	}
}

// The README lists the limits as they are.
func TestLimitsInReadme(t *testing.T) {
	readme, err := os.ReadFile("../README.md")
	if err != nil {
		t.Fatal(err)
	}
	for _, d := range schema.LimitDocs {
		n := strconv.FormatInt(d.Default, 10)
		for i := len(n) - 3; i > 0; i -= 3 {
			n = n[:i] + "," + n[i:]
		}
		if line := fmt.Sprintf("\n| `%s` | %s | %s |\n", d.Key, n, d.Bounds); !strings.Contains(string(readme), line) {
			t.Errorf("the README lacks %s", line)
		}
		if d.Key == "" || d.Least < 1 || d.Default < d.Least || d.Default > d.Most {
			t.Errorf("%+v", d)
		}
	}
}
