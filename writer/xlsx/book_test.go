package xlsx

import (
	"archive/zip"
	"bytes"
	"errors"
	"hash/crc32"
	"io"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"nightbook/schema"
	"nightbook/writer/internal/invent"
)

var properties = Properties{Title: "Title", Program: "test", Made: "2026-01-30T00:00:00Z"}

// book makes a workbook and returns its bytes.
func book(t testing.TB, names []string, fill func(*Book)) []byte {
	t.Helper()
	var buf bytes.Buffer
	b, err := NewBook(&buf, names, properties)
	if err != nil {
		t.Fatal(err)
	}
	fill(b)
	if err := b.Close(); err != nil {
		t.Fatal(err)
	}
	if err := b.Abort(); err != nil {
		t.Fatal(err)
	}
	return buf.Bytes()
}

func reopen(t testing.TB, data []byte) *excelize.File {
	t.Helper()
	f, err := excelize.OpenReader(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { f.Close() })
	return f
}

// raw returns a cell as it is stored.
func raw(t testing.TB, f *excelize.File, sheet, cell string) string {
	t.Helper()
	s, err := f.GetCellValue(sheet, cell, excelize.Options{RawCellValue: true})
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func TestTexts(t *testing.T) {
	texts := append(invent.AwkwardTexts(),
		"<tag> & \"quotes\" 'single'", "_x000D_", "_x41_", "_x0041", "a_x0041_b_x0042_", "x_", "_x",
		"\x01control\x1f", "tab\there", "  two spaces  ", "\n", strings.Repeat("é", 100), "😀")
	data := book(t, []string{"A"}, func(b *Book) {
		r := b.Sheet("A").Rows(1)
		for _, s := range texts {
			r.Begin(0, 0)
			r.Text(0, s)
			if err := r.End(); err != nil {
				t.Fatal(err)
			}
		}
	})
	f := reopen(t, data)
	for i, want := range texts {
		cell := Ref(1, i+1)
		if got := raw(t, f, "A", cell); got != want {
			t.Errorf("%q comes back as %q", want, got)
		}
		if formula, err := f.GetCellFormula("A", cell); formula != "" || err != nil {
			t.Errorf("%q became the formula %q (%v)", want, formula, err)
		}
		if kind, err := f.GetCellType("A", cell); kind != excelize.CellTypeInlineString || err != nil {
			t.Errorf("%q is a cell of type %v (%v)", want, kind, err)
		}
	}
}

// What XML and sheets cannot hold must not break the file.
func TestUnwritableTexts(t *testing.T) {
	for in, want := range map[string]string{
		"bad\xffbyte":       "bad\uFFFDbyte",
		"half\xe2\x82":      "half\uFFFD\uFFFD",
		"\uFFFE and \uFFFF": "\uFFFD and \uFFFD",
		"\uFFFD stays":      "\uFFFD stays",
	} {
		if got, _ := appendText(nil, in); string(got) != want {
			t.Errorf("%q is written %q, want %q", in, got, want)
		}
	}
}

func TestLongTexts(t *testing.T) {
	fits := strings.Repeat("a", maxText)
	wide := strings.Repeat("😀", maxText) // two units each
	texts := []string{fits, fits + "b", wide, strings.Repeat("é", maxText), strings.Repeat("&", maxText+1)}
	var s *Sheet
	data := book(t, []string{"A"}, func(b *Book) {
		s = b.Sheet("A")
		r := s.Rows(1)
		for _, x := range texts {
			r.Begin(0, 0)
			r.Text(0, x)
			if err := r.End(); err != nil {
				t.Fatal(err)
			}
		}
	})
	if s.Cut() != 3 {
		t.Errorf("%d texts cut, want 3", s.Cut())
	}
	f := reopen(t, data)
	for i, x := range texts {
		got := raw(t, f, "A", Ref(1, i+1))
		switch {
		case utf16Len(x) <= maxText:
			if got != x {
				t.Errorf("text %d, which fits, is changed", i)
			}
		case utf16Len(got) > maxText || utf16Len(got) < maxText-1:
			t.Errorf("text %d has %d units after the cut", i, utf16Len(got))
		case !strings.HasSuffix(got, "[cut: "+strconv.Itoa(utf16Len(x))+" characters in all]"):
			t.Errorf("text %d does not say that it was cut: %q", i, got[len(got)-50:])
		case !strings.HasPrefix(x, strings.SplitN(got, " …", 2)[0]):
			t.Errorf("text %d does not begin as it should", i)
		}
	}
}

func TestNumbers(t *testing.T) {
	numbers := []float64{0, 1, -1, 0.1, 1.0 / 3, 123456789.123456789, 9007199254740993, 1e15, 1e300, -1e-300,
		math.MaxFloat64, smallest, -smallest, 20.231422587880235, 1e21, 999999999999999}
	zeros := []float64{math.Copysign(0, -1), math.SmallestNonzeroFloat64, -smallest / 2}
	data := book(t, []string{"A"}, func(b *Book) {
		r := b.Sheet("A").Rows(1)
		for _, x := range append(numbers, zeros...) {
			r.Begin(0, 0)
			r.Number(0, x)
			if err := r.End(); err != nil {
				t.Fatal(err)
			}
		}
		r.Begin(0, 0)
		for _, n := range []int64{5, -5, 1 << 53, 1<<53 + 1, math.MaxInt64} {
			r.Int(0, n)
		}
		r.Bool(0, true)
		r.Bool(0, false)
		if err := r.End(); err != nil {
			t.Fatal(err)
		}
	})
	f := reopen(t, data)
	for i, want := range numbers {
		got, err := strconv.ParseFloat(raw(t, f, "A", Ref(1, i+1)), 64)
		if math.Float64bits(got) != math.Float64bits(want) {
			t.Errorf("%v comes back as %v (%v)", want, got, err)
		}
	}
	for i, x := range zeros {
		if got := raw(t, f, "A", Ref(1, len(numbers)+i+1)); got != "0" {
			t.Errorf("%v is written %s", x, got)
		}
	}
	at := len(numbers) + len(zeros)
	for i, want := range []string{"5", "-5", "9007199254740992", "9007199254740993", "9223372036854775807", "1", "0"} {
		if got := raw(t, f, "A", Ref(i+1, at+1)); got != want {
			t.Errorf("whole number or truth value %d is %s, want %s", i, got, want)
		}
	}
	if kind, _ := f.GetCellType("A", Ref(4, at+1)); kind != excelize.CellTypeInlineString {
		t.Error("a number with more digits than a cell keeps is not a text")
	}
}

func TestDates(t *testing.T) {
	for iso, want := range map[string]string{
		"1900-03-01": "61", "1970-01-01": "25569", "2026-01-30": "46052", "9999-12-31": "2958465",
		"1900-02-28": "1900-02-28", "1850-06-01": "1850-06-01",
	} {
		y, _ := strconv.Atoi(iso[:4])
		m, _ := strconv.Atoi(iso[5:7])
		d, _ := strconv.Atoi(iso[8:])
		day, ok := schema.DateOf(y, m, d)
		if !ok {
			t.Fatal(iso)
		}
		f := reopen(t, book(t, []string{"A"}, func(b *Book) {
			r := b.Sheet("A").Rows(1)
			r.Begin(0, 0)
			r.Date(0, day)
			if err := r.End(); err != nil {
				t.Fatal(err)
			}
		}))
		if got := raw(t, f, "A", "A1"); got != want {
			t.Errorf("%s is %s, want %s", iso, got, want)
		}
	}
}

func TestRefused(t *testing.T) {
	for name, fill := range map[string]func(*Rows){
		"not a finite number":        func(r *Rows) { r.Number(0, math.NaN()) },
		"cell B1: not a finite":      func(r *Rows) { r.Blank(0); r.Number(0, math.Inf(1)) },
		"a sheet cannot hold more":   func(r *Rows) { r.Jump(MaxColumns + 1); r.Int(0, 1) },
		"a sheet cannot hold more\n": func(r *Rows) { r.End(); r.Skip(MaxRows); r.Begin(0, 0) },
	} {
		var buf bytes.Buffer
		b, err := NewBook(&buf, []string{"A"}, properties)
		if err != nil {
			t.Fatal(err)
		}
		r := b.Sheet("A").Rows(1)
		r.Begin(0, 0)
		fill(r)
		err = r.End()
		if err == nil || !strings.Contains(err.Error(), strings.TrimSpace(name)) {
			t.Errorf("%q: %v", name, err)
		}
		if again := b.Close(); !errors.Is(again, err) {
			t.Errorf("%q: Close returns %v", name, again)
		}
		if buf.Len() > 0 {
			t.Errorf("%q: a broken workbook was written", name)
		}
	}
}

// Runs may be written in any order; the sheet has them in the order of rows.
func TestRuns(t *testing.T) {
	f := reopen(t, book(t, []string{"A", "B"}, func(b *Book) {
		body, foot, head := b.Sheet("B").Rows(3), b.Sheet("B").Rows(20), b.Sheet("B").Rows(1)
		for _, r := range []*Rows{body, head, foot, body, body} {
			r.Begin(0, 0)
			r.Int(0, int64(r.Next()))
			if err := r.End(); err != nil {
				t.Fatal(err)
			}
		}
	}))
	rows, err := f.GetRows("B")
	if err != nil {
		t.Fatal(err)
	}
	for i, row := range rows {
		want := ""
		if slices.Contains([]int{1, 3, 4, 5, 20}, i+1) {
			want = strconv.Itoa(i + 1)
		}
		if strings.Join(row, "") != want {
			t.Errorf("row %d is %q, want %q", i+1, row, want)
		}
	}
	if len(rows) != 20 {
		t.Errorf("%d rows, want 20", len(rows))
	}
	if d, err := f.GetSheetDimension("B"); d != "A1:A20" || err != nil {
		t.Errorf("dimension %s (%v)", d, err)
	}

	defer func() {
		if recover() == nil {
			t.Error("runs that overlap pass unnoticed")
		}
	}()
	book(t, []string{"A"}, func(b *Book) {
		for range 2 {
			r := b.Sheet("A").Rows(1)
			r.Begin(0, 0)
			r.End()
		}
	})
}

func TestTable(t *testing.T) {
	const n = 300
	rows := invent.Rows(0, n, schema.NewDict())
	f := reopen(t, book(t, []string{"T"}, func(b *Book) {
		x, err := b.NewTable(b.Sheet("T"), invent.Table, 5)
		if err != nil {
			t.Fatal(err)
		}
		if err := x.Write(rows, n); err != nil {
			t.Fatal(err)
		}
		if x.Written() != n || x.Room() != MaxRows-5-n-10 {
			t.Errorf("%d rows written, room for %d", x.Written(), x.Room())
		}
		x.Finish()
	}))
	for c, col := range invent.Table.Columns {
		if got := raw(t, f, "T", Ref(c+1, 5)); got != col.Name {
			t.Errorf("header %d is %q", c, got)
		}
		v := &rows.Cols[c]
		for i := range n {
			got := raw(t, f, "T", Ref(c+1, 6+i))
			if isNull(v, i) {
				if got != "" {
					t.Fatalf("column %s, row %d: null is %q", col.Name, i, got)
				}
				continue
			}
			same := false
			switch v.Kind {
			case schema.KindFloats:
				x, err := strconv.ParseFloat(got, 64)
				same = err == nil && (x == v.Floats[i] || x == 0 && math.Abs(v.Floats[i]) < smallest)
			case schema.KindInts:
				same = got == strconv.FormatInt(v.Ints[i], 10)
			case schema.KindDates:
				same = got == strconv.Itoa(int(v.Dates[i])+dayZero) || got == v.Dates[i].String()
			case schema.KindBools:
				same = got == map[bool]string{true: "1", false: "0"}[v.Bools[i]]
			default:
				same = got == v.Text(i)
			}
			if !same {
				t.Fatalf("column %s, row %d: %q", col.Name, i, got)
			}
		}
	}
	if got, err := f.GetCellValue("T", Ref(13, 6)); err != nil || got != rows.Cols[12].Dates[0].String() {
		t.Errorf("a date shows as %q (%v)", got, err)
	}
}

func TestTableRefusesNull(t *testing.T) {
	b, err := NewBook(io.Discard, []string{"T"}, properties)
	if err != nil {
		t.Fatal(err)
	}
	table := schema.Table{Name: "t", Columns: []schema.Column{{Name: "delta", Type: schema.Float, Required: true}}}
	x, err := b.NewTable(b.Sheet("T"), table, 2)
	if err != nil {
		t.Fatal(err)
	}
	f := &schema.Frame{N: 2, Cols: []schema.Vector{{Kind: schema.KindFloats, Floats: []float64{1, math.NaN()}}}}
	if err := x.Write(f, 2); err == nil || !strings.Contains(err.Error(), "column delta, row 2: null") {
		t.Errorf("error %v", err)
	}
}

// The same workbook is the same bytes, its parts in order and of one time, and
// a program that checks sums can unpack it.
func TestBytes(t *testing.T) {
	fill := func(b *Book) {
		for _, name := range []string{"One", "Two", "Three"} {
			x, err := b.NewTable(b.Sheet(name), invent.Table, 2)
			if err != nil {
				t.Fatal(err)
			}
			for from := 0; from < 2000; from += 500 {
				if err := x.Write(invent.Rows(from, 500, schema.NewDict()), 500); err != nil {
					t.Fatal(err)
				}
			}
			x.Finish()
			b.Sheet(name).Print(1, 2, true)
		}
	}
	want := book(t, []string{"One", "Two", "Three"}, fill)
	for range 5 {
		if got := book(t, []string{"One", "Two", "Three"}, fill); !bytes.Equal(got, want) {
			t.Fatal("other bytes")
		}
	}
	z, err := zip.NewReader(bytes.NewReader(want), int64(len(want)))
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, part := range z.File {
		names = append(names, part.Name)
		if got := part.Modified.Format("2006-01-02 15:04:05"); got != "1980-01-01 00:00:00" {
			t.Errorf("%s is of %s", part.Name, got)
		}
		r, err := part.Open()
		if err != nil {
			t.Fatal(err)
		}
		if _, err := io.Copy(io.Discard, r); err != nil { // checks the CRC
			t.Errorf("%s: %v", part.Name, err)
		}
	}
	if names[0] != "[Content_Types].xml" || !slices.IsSorted(names[1:]) {
		t.Errorf("parts in the order %q", names)
	}
}

func TestCombineCRC(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	data := make([]byte, 5000)
	for i := range data {
		data[i] = byte(random.Uint32())
	}
	want := crc32.ChecksumIEEE(data)
	for range 200 {
		cut := random.IntN(len(data) + 1)
		got := combineCRC(crc32.ChecksumIEEE(data[:cut]), crc32.ChecksumIEEE(data[cut:]), int64(len(data)-cut))
		if got != want {
			t.Fatalf("cut at %d: %08x, want %08x", cut, got, want)
		}
	}
}

// Every word of a closed list fits into its column.
func TestWidthsOfClosedLists(t *testing.T) {
	lists := 0
	for _, c := range schema.LinesTable(nil).Columns {
		choices := schema.ChoicesOf(c.Name)
		if choices != nil {
			lists++
		}
		for _, word := range choices {
			if width := WidthOf(&c); width <= float64(len(word)) {
				t.Errorf("column %s is %v wide, too narrow for %s", c.Name, width, word)
			}
		}
	}
	if lists == 0 {
		t.Error("the lines have no closed list")
	}
}

func TestColumnNames(t *testing.T) {
	for n, want := range map[int]string{1: "A", 26: "Z", 27: "AA", 52: "AZ", 702: "ZZ", 703: "AAA", 16384: "XFD"} {
		if got := columnName(n); got != want {
			t.Errorf("column %d is %s, want %s", n, got, want)
		}
	}
}

func BenchmarkTable(b *testing.B) {
	dicts := schema.NewDicts()
	var f schema.Frame
	invent.Lines(0, schema.BatchRows, dicts).Frame(dicts, &f)
	book, err := NewBook(io.Discard, []string{"T"}, properties)
	if err != nil {
		b.Fatal(err)
	}
	x, err := book.NewTable(book.Sheet("T"), schema.LinesTable(invent.Extra), 2)
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	for b.Loop() {
		x.rows.next = 3 // as if on a sheet of its own
		if err := x.Write(&f, f.N); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(f.N)*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
}

func TestChunks(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	var c chunks
	var want []byte
	for range 3000 { // more than a hundred chunks
		b := make([]byte, random.IntN(5000))
		for i := range b {
			b[i] = byte(random.Uint32())
		}
		if n, err := c.Write(b); n != len(b) || err != nil {
			t.Fatal(n, err)
		}
		want = append(want, b...)
	}
	if got := bytes.Join(c.list, nil); !bytes.Equal(got, want) || c.size != int64(len(want)) {
		t.Error("what was written does not come back")
	}
}
