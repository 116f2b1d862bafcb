package csv

import (
	"bytes"
	stdcsv "encoding/csv"
	"errors"
	"fmt"
	"io"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
	"testing/iotest"

	"nightbook/reader/table"
	"nightbook/schema"
)

// row is a record as the tests compare it.
type row struct {
	line   int64
	fields []string
	bad    string
	raw    string
}

// readAll reads a text in blocks of that many rows, read so many bytes at a time.
func readAll(text string, o Options) (header []string, rows []row, err error) {
	s, err := NewScanner(strings.NewReader(text), o)
	if err != nil {
		return nil, nil, err
	}
	d := s.NewDecoder()
	var b Block
	var run table.Rows
	for {
		if err := s.Next(&b); err == io.EOF {
			if s.Rows() != int64(len(rows)) {
				return nil, nil, fmt.Errorf("%d rows counted, %d read", s.Rows(), len(rows))
			}
			return s.Header(), rows, nil
		} else if err != nil {
			return nil, nil, err
		}
		d.Decode(&b, &run)
		bad := map[int]string{}
		for _, x := range run.Bad {
			bad[x.Row] = x.Reason
		}
		for i := range run.N {
			r := row{line: run.Line[i], bad: bad[i], raw: string(run.Raw.Bytes(i))}
			for c := range run.Cols {
				r.fields = append(r.fields, string(run.Cols[c].Strings.Bytes(i)))
			}
			rows = append(rows, r)
		}
	}
}

// Where every record of a text starts, what it holds, and why it is refused.
func TestRecords(t *testing.T) {
	count := FieldCount
	var limits schema.Limits
	const maxField = 64 << 10
	for _, c := range []struct {
		name, text string
		o          Options
		want       []row
	}{
		{"plain", "a,b\n1,2\n3,4\n", Options{}, []row{{2, []string{"1", "2"}, "", "1,2"}, {3, []string{"3", "4"}, "", "3,4"}}},
		{"no end of line", "a,b\n1,2", Options{}, []row{{2, []string{"1", "2"}, "", "1,2"}}},
		{"carriage returns", "a,b\r\n1,2\r\n\r\n3,4\r", Options{}, []row{{2, []string{"1", "2"}, "", "1,2"}, {4, []string{"3", "4"}, "", "3,4"}}},
		{"blank lines", "\n\na,b\n\n1,2\n\n", Options{}, []row{{5, []string{"1", "2"}, "", "1,2"}}},
		{"byte order mark", "\uFEFFa,b\n1,2", Options{}, []row{{2, []string{"1", "2"}, "", "1,2"}}},
		{"empty fields", "a,b,c\n,,\n", Options{}, []row{{2, []string{"", "", ""}, "", ",,"}}},
		{"spaces stay", "a,b\n 1 ,\t2\n", Options{}, []row{{2, []string{" 1 ", "\t2"}, "", " 1 ,\t2"}}},
		{"semicolon", "a;b\n1,5;2\n", Options{Delimiter: ';'}, []row{{2, []string{"1,5", "2"}, "", "1,5;2"}}},
		{"tab", "a\tb\n1\t2\n", Options{Delimiter: '\t'}, []row{{2, []string{"1", "2"}, "", "1\t2"}}},
		{"bar", "a|b\n1|\"2|3\"\n", Options{Delimiter: '|'}, []row{{2, []string{"1", "2|3"}, "", `1|"2|3"`}}},
		{"quoted", "a,b\n\"1,\n2\",\"say \"\"go\"\"\"\n3,4\n", Options{}, []row{
			{2, []string{"1,\n2", `say "go"`}, "", "\"1,\n2\",\"say \"\"go\"\"\""}, {4, []string{"3", "4"}, "", "3,4"}}},
		{"quoted empty", "a,b\n\"\",\"\"\"\"\n", Options{}, []row{{2, []string{"", `"`}, "", `"",""""`}}},
		{"too few", "a,b\n1\n3,4\n", Options{}, []row{{2, []string{"", ""}, count(1, 2), "1"}, {3, []string{"3", "4"}, "", "3,4"}}},
		{"too many", "a,b\n1,2,3\n3,4\n", Options{}, []row{{2, []string{"", ""}, count(3, 2), "1,2,3"}, {3, []string{"3", "4"}, "", "3,4"}}},
		{"too many, quoted", "a,b\n1,\"2\",3\n", Options{}, []row{{2, []string{"", ""}, count(3, 2), `1,"2",3`}}},
		{"stray quote", "a,b\n1,5\" pipe\n3,4\n", Options{}, []row{{2, []string{"", ""}, StrayQuote.String(), `1,5" pipe`}, {3, []string{"3", "4"}, "", "3,4"}}},
		{"text after quote", "a,b\n\"1\"x,2\n3,4\n", Options{}, []row{{2, []string{"", ""}, TextAfterQuote.String(), `"1"x,2`}, {3, []string{"3", "4"}, "", "3,4"}}},
		{"a mark that swallows lines", "a,b\n1,\"2\n3,4\n5,6\" pipe\n7,8\n", Options{}, []row{
			{2, []string{"", ""}, TextAfterQuote.String() + spanning(Record{Line: 2, Lines: 3}), "1,\"2\n3,4\n5,6\" pipe"}, {5, []string{"7", "8"}, "", "7,8"}}},
		{"and too many fields", "a,b\n1,\"2\n3\",4\n", Options{}, []row{{2, []string{"", ""}, count(3, 2) + spanning(Record{Line: 2, Lines: 2}), "1,\"2\n3\",4"}}},
		{"space after quote", "a,b\n\"1\" ,2\n3,4\n", Options{}, []row{{2, []string{"", ""}, TextAfterQuote.String(), `"1" ,2`}, {3, []string{"3", "4"}, "", "3,4"}}},
		{"long field", "a,b\n1," + strings.Repeat("x", maxField+1) + "\n3,4\n", Options{}, []row{
			{2, []string{"", ""}, limits.Exceeded(schema.FieldBytes).Error(), "1," + strings.Repeat("x", maxField+1)}, {3, []string{"3", "4"}, "", "3,4"}}},
		{"longest field", "a,b\n1," + strings.Repeat("x", maxField) + "\n", Options{}, []row{{2, []string{"1", strings.Repeat("x", maxField)}, "", "1," + strings.Repeat("x", maxField)}}},
	} {
		for _, size := range []struct{ rows, bytes int }{{0, 0}, {1, 1}, {2, 3}, {1, 1000}} {
			c.o.BlockRows, c.o.ReadSize = size.rows, size.bytes
			_, got, err := readAll(c.text, c.o)
			if err != nil {
				t.Errorf("%s: %v", c.name, err)
				continue
			}
			if !slices.EqualFunc(got, c.want, func(a, b row) bool {
				return a.line == b.line && a.bad == b.bad && a.raw == b.raw && slices.Equal(a.fields, b.fields)
			}) {
				t.Errorf("%s, blocks of %d rows, %d bytes at a time:\n%.500s\nwant\n%.500s", c.name, size.rows, size.bytes, fmt.Sprint(got), fmt.Sprint(c.want))
			}
		}
	}
}

func TestScannerErrors(t *testing.T) {
	long := strings.Repeat("x", 1<<20)
	for _, c := range []struct {
		name, text, want string
		line             int64
	}{
		{"empty", "", "the file is empty", 0},
		{"blank", "\n\r\n\n", "the file is empty", 0},
		{"bad header", "a,b\"c\n", "the header cannot be read", 1},
		{"carriage returns alone", "a,b\r1,2\r", "carriage return alone", 1},
		{"record without end", "a,b\n1,2\n\n\"" + long + long, "close the quotation mark that opens on line 4", 4},
		{"record without end, and more behind it", "a,b\n1,\"" + long + "xx\n3,\"4\"\n", "more bytes than row_bytes = 1048576 allows", 2},
		{"open quote", "a,b\n1,2\n3,\"4\n5,6\n", "close the quotation mark that opens on line 3", 3},
		{"open quote at the end", "a,b\n3,\"", "close the quotation mark that opens on line 2", 2},
		{"open quote behind a closed one", "a,b\n1,2\n\"3\n\n\",\"4\n5,6\n", "close the quotation mark that opens on line 5", 3},
		{"open quote on a line of its own", "a,b\n1,\"2\n" + strings.Repeat("3,4\n", 300_000), "or close the quotation mark that opens on line 2", 2},
		{"open quote in the header", "a,\"b\n1,2\n", "close the quotation mark that opens on line 1", 1},
		{"long record", "a,b\n1,2\n" + long + "yy\n3,4\n", "more bytes than row_bytes = 1048576 allows", 3},
	} {
		_, _, err := readAll(c.text, Options{})
		var cell *schema.CellError
		if !errors.As(err, &cell) || !strings.Contains(cell.Error(), c.want) || cell.Line != c.line || cell.Code != schema.BadRow {
			t.Errorf("%s: %v, want line %d, %q", c.name, err, c.line, c.want)
		}
	}
	boom := errors.New("disk on fire")
	s, err := NewScanner(io.MultiReader(strings.NewReader("a,b\n1,2\n3,"), iotest.ErrReader(boom)), Options{BlockRows: 1, ReadSize: 4})
	if err != nil {
		t.Fatal(err)
	}
	var b Block
	for err = s.Next(&b); err == nil; err = s.Next(&b) {
	}
	if !errors.Is(err, boom) {
		t.Errorf("a reader's error came out as %v", err)
	}
	for _, head := range []string{"", "a"} {
		if _, err := NewScanner(io.MultiReader(strings.NewReader(head), iotest.ErrReader(io.ErrUnexpectedEOF)), Options{}); !errors.Is(err, io.ErrUnexpectedEOF) {
			t.Errorf("a file cut short after %q: %v", head, err)
		}
	}
}

// standard reads a text with the standard library: the records, and nil for
// each that it refuses. Both read on at the next line.
func standard(text string, delimiter byte) (rows []row) {
	r := stdcsv.NewReader(strings.NewReader(text))
	r.Comma = rune(delimiter)
	r.FieldsPerRecord = -1
	for {
		rec, err := r.Read()
		if err == io.EOF {
			return rows
		}
		var x *stdcsv.ParseError
		if errors.As(err, &x) {
			rows = append(rows, row{line: int64(x.StartLine), bad: "bad"})
			continue
		}
		line, _ := r.FieldPos(0)
		rows = append(rows, row{line: int64(line), fields: slices.Clone(rec)})
	}
}

// differs says how this package and the standard library read a text
// differently, or "". Of a text with a quotation mark that is not closed, it
// compares what stands before the record with that mark.
func differs(text string, o Options) string {
	want := standard(text, o.Delimiter)
	if len(want) == 0 || want[0].bad != "" {
		return ""
	}
	_, got, err := readAll(text, o)
	var open *schema.CellError
	if errors.As(err, &open) && strings.Contains(err.Error(), "close the quotation mark") {
		lines := strings.SplitAfter(text, "\n")
		return differs(strings.Join(lines[:open.Line-1], ""), o)
	}
	if err != nil {
		return err.Error()
	}
	columns := len(want[0].fields)
	want = want[1:]
	for i := range max(len(got), len(want)) {
		if i >= len(got) || i >= len(want) {
			return fmt.Sprintf("%d rows, want %d", len(got), len(want))
		}
		g, w := got[i], want[i]
		if g.line != w.line {
			return fmt.Sprintf("row %d starts on line %d, want %d", i, g.line, w.line)
		}
		if bad := w.bad != "" || len(w.fields) != columns; bad != (g.bad != "") {
			return fmt.Sprintf("row %d refused: %q, want %v", i, g.bad, w)
		} else if bad {
			continue
		}
		for k := range w.fields {
			// The standard library makes every CRLF of a quoted field an LF.
			if field := strings.ReplaceAll(g.fields[k], "\r\n", "\n"); field != w.fields[k] {
				return fmt.Sprintf("row %d, field %d: %q, want %q", i, k, field, w.fields[k])
			}
		}
	}
	return ""
}

// Random texts of the characters that matter read as the standard library
// reads them, whatever the blocks.
func TestLikeStandardLibrary(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 8))
	pieces := []string{",", ",", "\n", "\r\n", `"`, `"`, `""`, "a", "bc", " ", "\r", "long field of text", "ü"}
	for range 20_000 {
		var b strings.Builder
		b.WriteString("h1,h2,h3\n")
		for range rng.IntN(40) {
			b.WriteString(pieces[rng.IntN(len(pieces))])
		}
		o := Options{Delimiter: ',', BlockRows: 1 + rng.IntN(4), ReadSize: 1 + rng.IntN(9)}
		if d := differs(b.String(), o); d != "" {
			t.Fatalf("%q in blocks of %d rows, %d bytes at a time: %s", b.String(), o.BlockRows, o.ReadSize, d)
		}
	}
}

// Records written by the standard library come back as they were.
func TestRoundTrip(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 21))
	alphabet := []rune("ab ,;|\t\"\n€")
	for _, delimiter := range []byte{',', ';', '\t', '|'} {
		var b bytes.Buffer
		w := stdcsv.NewWriter(&b)
		w.Comma = rune(delimiter)
		w.Write([]string{"a", "b", "c"})
		var want [][]string
		for range 3000 {
			rec := make([]string, 3)
			for k := range rec {
				for range rng.IntN(12) {
					rec[k] += string(alphabet[rng.IntN(len(alphabet))])
				}
			}
			rec[0] += "x" // a record is never a blank line
			want = append(want, rec)
			w.Write(rec)
		}
		w.Flush()
		_, got, err := readAll(b.String(), Options{Delimiter: delimiter, BlockRows: 100, ReadSize: 50})
		if err != nil {
			t.Fatal(err)
		}
		if len(got) != len(want) {
			t.Fatalf("%d rows, want %d", len(got), len(want))
		}
		for i := range want {
			if got[i].bad != "" || !slices.Equal(got[i].fields, want[i]) {
				t.Fatalf("row %d: %q %s, want %q", i, got[i].fields, got[i].bad, want[i])
			}
		}
	}
}

func FuzzCSV(f *testing.F) {
	f.Add("a,b\n1,2\n\"x\ny\",3\r\n", byte(0), byte(3), byte(7))
	f.Add("a;b\n1;5\" x\n\"1\"2;\n", byte(1), byte(1), byte(1))
	f.Add("h\n\"\"\"\"\n\"open", byte(2), byte(2), byte(200))
	f.Fuzz(func(t *testing.T, text string, delimiter, rows, bytes byte) {
		o := Options{Delimiter: ",;\t|"[delimiter%4], BlockRows: 1 + int(rows), ReadSize: 1 + int(bytes)}
		if strings.HasPrefix(text, "\uFEFF") || strings.HasPrefix(text, "\xFF\xFE") || strings.HasPrefix(text, "\xFE\xFF") {
			readAll(text, o)
			return
		}
		if h, _, _ := readAll(text, o); h == nil {
			return // a header that is refused here need not be there
		}
		if d := differs(text, o); d != "" {
			t.Error(d)
		}
	})
}
