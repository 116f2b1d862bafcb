package csv

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	stdcsv "encoding/csv"

	"nightbook/schema"
	"nightbook/writer/csv/shortest"
	"nightbook/writer/internal/invent"
)

func write(t *testing.T, opt Options, frames ...*schema.Frame) string {
	t.Helper()
	var buf bytes.Buffer
	w, err := New(&buf, invent.Table, opt)
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
	return buf.String()
}

// The standard library's reader must find every value again.
func TestRoundTrip(t *testing.T) {
	const n = 3000
	f := invent.Rows(0, n, schema.NewDict())
	// encoding/csv turns \r\n inside quotes into \n, and nothing else: the
	// invented texts hold no \r\n.
	records, err := stdcsv.NewReader(strings.NewReader(write(t, Options{Workers: 3, BareText: true}, f))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if len(records) != n+1 {
		t.Fatalf("%d records, want %d", len(records), n+1)
	}
	for i, c := range invent.Table.Columns {
		if records[0][i] != c.Name {
			t.Errorf("header %d is %q, want %q", i, records[0][i], c.Name)
		}
	}
	for row := range n {
		for i := range f.Cols {
			if err := sameCell(&f.Cols[i], row, records[row+1][i]); err != nil {
				t.Fatalf("row %d, column %s: %v", row, invent.Table.Columns[i].Name, err)
			}
		}
	}
}

func sameCell(v *schema.Vector, row int, cell string) error {
	switch v.Kind {
	case schema.KindFloats:
		want := v.Floats[row]
		if want != want {
			if cell != "" {
				return fmt.Errorf("null is %q", cell)
			}
			return nil
		}
		got, err := strconv.ParseFloat(cell, 64)
		if math.Float64bits(got) != math.Float64bits(want) {
			return fmt.Errorf("%q is not %v: %v", cell, want, err)
		}
		return nil
	case schema.KindInts:
		want := ""
		if v.Ints[row] != schema.NoInt {
			want = fmt.Sprint(v.Ints[row])
		}
		return same(cell, want)
	case schema.KindDates:
		return same(cell, v.Dates[row].String())
	case schema.KindBools:
		return same(cell, fmt.Sprint(v.Bools[row]))
	}
	return same(cell, v.Text(row))
}

func same(got, want string) error {
	if got != want {
		return fmt.Errorf("%q, want %q", got, want)
	}
	return nil
}

// The bytes must not depend on how rows come in frames, on the number of
// workers, or on which code a text got.
func TestBytesDependOnRowsOnly(t *testing.T) {
	const n = 5000
	want := write(t, Options{}, invent.Rows(0, n, schema.NewDict()))
	for workers := 1; workers <= 4; workers++ {
		dict := schema.NewDict()
		for i := range 40 * workers { // other codes for the same texts
			dict.Code(fmt.Sprintf("Book %02d", 39-i%40))
		}
		whole := invent.Rows(0, n, dict)
		for _, size := range []int{1, 255, 256, 1000, n} {
			if got := write(t, Options{Workers: workers}, invent.Slices(whole, size)...); got != want {
				t.Errorf("frames of %d rows, %d workers: other bytes", size, workers)
			}
		}
	}
}

func TestFloats(t *testing.T) {
	for _, c := range []struct {
		x    float64
		want string
	}{
		{0, "0"},
		{math.Copysign(0, -1), "-0"},
		{1, "1"},
		{-12, "-12"},
		{0.1, "0.1"},
		{1e-6, "0.000001"},
		{9.999e-7, "9.999e-07"},
		{123456.789, "123456.789"},
		{1e15, "1000000000000000"},
		{123456789012345680000, "123456789012345680000"},
		{1e21, "1e+21"},
		{-1.5e300, "-1.5e+300"},
		{math.MaxFloat64, "1.7976931348623157e+308"},
		{math.SmallestNonzeroFloat64, "5e-324"},
		{9007199254740992, "9007199254740992"},
	} {
		if got := floatText(c.x); got != c.want {
			t.Errorf("%v is written %s, want %s", c.x, got, c.want)
		}
	}
}

func floatText(x float64) string {
	var dst [shortest.Size]byte
	return string(dst[:shortest.Float(&dst, x)])
}

func TestText(t *testing.T) {
	for _, c := range []struct{ in, guarded, bare string }{
		{"plain", "plain", "plain"},
		{"a,b", `"a,b"`, `"a,b"`},
		{`a"b"`, `"a""b"""`, `"a""b"""`},
		{"a\nb", "\"a\nb\"", "\"a\nb\""},
		{"=1+1", "'=1+1", "=1+1"},
		{"+a", "'+a", "+a"},
		{"-a", "'-a", "-a"},
		{"-5.25", "-5.25", "-5.25"},
		{"+4512", "+4512", "+4512"},
		{"-5,25", `"-5,25"`, `"-5,25"`},
		{"'-5.25", "'-5.25", "'-5.25"},
		{"-1+1", "'-1+1", "-1+1"},
		{"=-1", "'=-1", "=-1"},
		{"@x", "'@x", "@x"},
		{"\tx", "'\tx", "\tx"},
		{"\rx", "\"'\rx\"", "\"\rx\""},
		{"\nx", "\"'\nx\"", "\"\nx\""},
		{`=HYPERLINK("x","y")`, `"'=HYPERLINK(""x"",""y"")"`, `"=HYPERLINK(""x"",""y"")"`},
		{"'=1", "''=1", "'=1"},
		{"'plain", "'plain", "'plain"},
		{"'", "'", "'"},
		{"a=1", "a=1", "a=1"},
	} {
		if got := string(appendText(nil, c.in, true)); got != c.guarded {
			t.Errorf("%q guarded is %q, want %q", c.in, got, c.guarded)
		}
		if got := string(appendText(nil, c.in, false)); got != c.bare {
			t.Errorf("%q bare is %q, want %q", c.in, got, c.bare)
		}
	}
}

// Whatever bytes come in, in whatever column, UTF-8 without NUL goes out.
func TestAlwaysUTF8(t *testing.T) {
	for _, c := range []struct{ in, want string }{
		{"caf\xe9", `caf\xE9`},
		{"a\x00b", `a\x00b`},
		{"\xff\xfe,", `"\xFF\xFE,"`},
		{"=\x00", `'=\x00`},
		{"\x00=1", `\x00=1`},
		{"漢\xe6\xbc字", `漢\xE6\xBC字`},     // a character cut short
		{"\xed\xa0\x80", `\xED\xA0\x80`}, // half of a surrogate pair
		{"\ufffd 漢字", "\ufffd 漢字"},       // a replacement character that came as one
	} {
		if got := string(appendText(nil, c.in, true)); got != c.want {
			t.Errorf("%q is written %q, want %q", c.in, got, c.want)
		}
	}

	var noise [256]byte
	for i := range noise {
		noise[i] = byte(i)
	}
	table := schema.Table{Name: "t", Columns: []schema.Column{{Name: string(noise[:]), Type: schema.Text}, {Name: "row", Type: schema.Text}}}
	f := &schema.Frame{N: len(noise), Cols: make([]schema.Vector, 2)}
	for i := range noise {
		f.Cols[0].Strings.AppendString(string(noise[i:]))
		f.Cols[1].Strings.AppendString(string(noise[i : i+1]))
	}
	for _, opt := range []Options{{}, {BareText: true}, {AsCame: []string{"row"}}} {
		var buf bytes.Buffer
		w, err := New(&buf, table, opt)
		if err != nil {
			t.Fatal(err)
		}
		if err := w.Write(f); err != nil {
			t.Fatal(err)
		}
		if !utf8.Valid(buf.Bytes()) || bytes.IndexByte(buf.Bytes(), 0) >= 0 {
			t.Errorf("%+v: not UTF-8 without NUL", opt)
		}
	}
}

func TestNumbers(t *testing.T) {
	for _, s := range []string{"0", "-5", "+4512", "-5.25", "-5,25", "+1e5", "-1.5E-3", "-1,5e+300", "-007"} {
		if !isNumber(s) {
			t.Errorf("%q is no number", s)
		}
	}
	for _, s := range []string{"", "-", "+", "--1", "-.", "-5.", "-.5", "-5e", "-5e+", "-1.2.3", "-1,234,567", "-1 ", "-1+1", "-1;2", "-A1", "-0x10", "-inf", "+1e5|cmd", "-٣"} {
		if isNumber(s) {
			t.Errorf("%q is a number", s)
		}
	}
}

// Taking one apostrophe off where apostrophes are followed by what reads like a
// formula must give every text back.
func TestGuardIsReversible(t *testing.T) {
	for _, text := range append(invent.AwkwardTexts(), "'''", "'''=", "''x", "=", "'-", "-'", "-1", "'-1", "''-1", "-1-") {
		got := text
		if looksLikeFormula(text) {
			got = "'" + text
		}
		if looksLikeFormula(got) && got[0] == '\'' {
			got = got[1:]
		}
		if got != text {
			t.Errorf("%q comes back as %q", text, got)
		}
		if got := string(appendText(nil, text, true)); strings.IndexAny(got, "=+-@\t") == 0 && !isNumber(text) {
			t.Errorf("%q is written as the formula %q", text, got)
		}
	}
}

func oneFloat(required bool, x float64) (schema.Table, *schema.Frame) {
	return schema.Table{Name: "t", Columns: []schema.Column{{Name: "delta", Type: schema.Float, Required: required}}},
		&schema.Frame{N: 3, Cols: []schema.Vector{{Kind: schema.KindFloats, Floats: []float64{1, 2, x}}}}
}

func TestGuardAndExemption(t *testing.T) {
	table := schema.Table{Name: "t", Columns: []schema.Column{
		{Name: "=a", Type: schema.Text}, {Name: "row", Type: schema.Text}, {Name: "x", Type: schema.Float},
	}}
	f := &schema.Frame{N: 1, Cols: []schema.Vector{{}, {}, {Kind: schema.KindFloats, Floats: []float64{-1}}}}
	f.Cols[0].Strings.AppendString("=b")
	f.Cols[1].Strings.AppendString("=c")
	for _, c := range []struct {
		opt  Options
		want string
	}{
		{Options{}, "'=a,row,x\n'=b,'=c,-1\n"},
		{Options{AsCame: []string{"row"}}, "'=a,row,x\n'=b,=c,-1\n"},
		{Options{BareText: true}, "=a,row,x\n=b,=c,-1\n"},
	} {
		var buf bytes.Buffer
		w, err := New(&buf, table, c.opt)
		if err != nil {
			t.Fatal(err)
		}
		if err := w.Write(f); err != nil {
			t.Fatal(err)
		}
		if buf.String() != c.want {
			t.Errorf("%+v: %q, want %q", c.opt, buf.String(), c.want)
		}
	}
	if _, err := New(&bytes.Buffer{}, table, Options{AsCame: []string{"rows"}}); err == nil {
		t.Error("an exemption for a column that is not there passes unnoticed")
	}
}

func TestRefused(t *testing.T) {
	for _, c := range []struct {
		required bool
		x        float64
		want     string
	}{
		{true, math.NaN(), "column delta, row 6: null"},
		{true, math.Inf(1), "column delta, row 6: not a finite number"},
		{false, math.Inf(-1), "column delta, row 6: not a finite number"},
		{false, math.NaN(), ""},
	} {
		table, bad := oneFloat(c.required, c.x)
		_, good := oneFloat(c.required, 3)
		var buf bytes.Buffer
		w, err := New(&buf, table, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if err := w.Write(good); err != nil {
			t.Fatal(err)
		}
		err = w.Write(bad)
		if c.want == "" {
			if err != nil || !strings.HasSuffix(buf.String(), "\n2\n\"\"\n") {
				t.Errorf("optional null: %v, %q", err, buf.String())
			}
			continue
		}
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v, want %q", err, c.want)
		}
		if again := w.Close(); !errors.Is(again, err) {
			t.Errorf("Close after a failure returns %v", again)
		}
	}
}

type failing struct{ after int }

func (f *failing) Write(p []byte) (int, error) {
	if f.after--; f.after < 0 {
		return 0, errors.New("disk full")
	}
	return len(p), nil
}

func TestWriteErrors(t *testing.T) {
	table, f := oneFloat(true, 1)
	if _, err := New(&failing{0}, table, Options{}); err == nil {
		t.Error("the header's failure is not told")
	}
	w, err := New(&failing{1}, table, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if err := w.Write(f); err == nil {
		t.Error("the rows' failure is not told")
	}
	if err := w.Close(); err == nil {
		t.Error("Close does not tell of the failure")
	}
}

func TestNoAllocationsPerCell(t *testing.T) {
	f := invent.Rows(0, 4096, schema.NewDict())
	w, err := New(&discard{}, invent.Table, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if n := testing.AllocsPerRun(5, func() {
		if err := w.Write(f); err != nil {
			t.Fatal(err)
		}
	}); n > 4 { // a wait group and closures, whatever the number of cells
		t.Errorf("%v allocations for a frame of 4096 rows", n)
	}
}

type discard struct{}

func (discard) Write(p []byte) (int, error) { return len(p), nil }
