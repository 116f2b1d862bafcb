package csv

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"
	"sync/atomic"
	"testing"
	"time"
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

// Every day of the years of four digits, and some beyond, must be as package time
// writes it.
func TestDates(t *testing.T) {
	check := func(d schema.Date) {
		var s slot
		if got, want := string(s[:putDate(&s, d)]), string(d.AppendDate(nil)); got != want {
			t.Fatalf("day %d is written %s, want %s", d, got, want)
		}
	}
	for d := schema.Date(-720_000); d < 2_933_500; d++ {
		check(d)
	}
	for _, d := range []schema.Date{math.MinInt32 + 1, math.MaxInt32, -1e6, 1e7} {
		check(d)
	}
}

// A text must be the same by eight bytes at a time and by the rules, wherever it
// stands in the column's bytes and whatever stands around it.
func TestPlainTexts(t *testing.T) {
	var texts []string
	for length := range slotText + 6 {
		for at := range length {
			for c := range 256 {
				b := bytes.Repeat([]byte("x"), length)
				b[at] = byte(c)
				texts = append(texts, string(b))
			}
		}
	}
	for _, guard := range []bool{true, false} {
		columns := []column{{schema.Column{Name: "a", Type: schema.Text}, guard}}
		for _, around := range []string{"", ",,,,,,,,\"\"\"\"\"\"\"\"\x00\x00\x00\x00\x00\x00\x00\x00\xff\xff\xff\xff\xff\xff\xff\xff"} {
			f := &schema.Frame{N: len(texts), Cols: make([]schema.Vector, 1)}
			var want []byte
			for _, text := range texts {
				data := &f.Cols[0].Strings
				data.Data = append(data.Data, around...)
				data.AppendString(text)
				data.Data = append(data.Data, around...)
				want = append(appendText(want, text, guard), '\n')
			}
			p := newPart(columns)
			p.format(f, 0, f.N)
			if !bytes.Equal(p.out, want) {
				t.Errorf("guard %v, between %q: other texts than by the rules", guard, around)
			}
		}
	}
}

// More codes than are kept, texts longer than a slot, and a dictionary that is
// another from frame to frame.
func TestManyCodes(t *testing.T) {
	columns := []column{{schema.Column{Name: "a", Type: schema.Text}, true}, {schema.Column{Name: "b", Type: schema.Text}, true}}
	p := newPart(columns)
	for round := range 3 {
		f := &schema.Frame{N: 5 * notedCodes, Cols: []schema.Vector{
			{Kind: schema.KindCodes, Dict: schema.NewDict()},
			{Kind: schema.KindChoices, Names: []string{"", "=a", "b,c", strings.Repeat("long ", 20), strings.Repeat("l", slotText), strings.Repeat("l", slotText+1)}},
		}}
		var want []byte
		for i := range f.N {
			text := fmt.Sprintf("round %d, %s%d", round, strings.Repeat("x", i%40), i*7%(3*notedCodes))
			if i%5 == 0 {
				text = ""
			}
			f.Cols[0].Codes = append(f.Cols[0].Codes, f.Cols[0].Dict.Code(text))
			f.Cols[1].Choices = append(f.Cols[1].Choices, schema.Choice(i*11%6))
			if text != "" {
				want = appendText(want, text, true)
			}
			want = append(want, ',')
			if name := f.Cols[1].Text(i); name != "" {
				want = appendText(want, name, true)
			}
			want = append(want, '\n')
		}
		p.format(f, 0, f.N)
		if !bytes.Equal(p.out, want) {
			t.Errorf("round %d: other texts than by the rules", round)
		}
	}
}

// The cell that is told of is the first by rows, then by columns.
func TestFirstFault(t *testing.T) {
	inf := math.Inf(1)
	table := schema.Table{Name: "t", Columns: []schema.Column{{Name: "a", Type: schema.Float}, {Name: "b", Type: schema.Float}, {Name: "c", Type: schema.Float}}}
	f := &schema.Frame{N: 100, Cols: make([]schema.Vector, 3)}
	for c := range f.Cols {
		f.Cols[c] = schema.Vector{Kind: schema.KindFloats, Floats: make([]float64, f.N)}
	}
	f.Cols[0].Floats[71], f.Cols[1].Floats[70], f.Cols[2].Floats[70], f.Cols[0].Floats[99] = inf, inf, inf, inf
	for workers := 1; workers < 4; workers++ {
		w, err := New(&discard{}, table, Options{Workers: workers})
		if err != nil {
			t.Fatal(err)
		}
		if err := w.Write(f); err == nil || !strings.Contains(err.Error(), "column b, row 71:") {
			t.Errorf("error %v", err)
		}
	}
}

// slow writes late, and notices if two write at a time or after the end.
type slow struct {
	t    *testing.T
	busy atomic.Bool
	over atomic.Bool
	buf  bytes.Buffer
	fail int // bytes to take
}

func (s *slow) Write(p []byte) (int, error) {
	if s.busy.Swap(true) {
		s.t.Error("two at a time")
	}
	defer s.busy.Store(false)
	time.Sleep(time.Millisecond)
	if s.over.Load() {
		s.t.Error("written after the end")
	}
	if s.buf.Len() > s.fail {
		return 0, errors.New("disk full")
	}
	return s.buf.Write(p)
}

// The frame is the caller's again when Write returns, and rows come in order.
func TestWritesBeside(t *testing.T) {
	whole := invent.Rows(0, 4000, schema.NewDict())
	want := write(t, Options{}, whole)
	frames := invent.Slices(whole, 1000)
	s := &slow{t: t, fail: len(want)}
	w, err := New(s, invent.Table, Options{Workers: 2})
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range frames {
		if err := w.Write(f); err != nil {
			t.Fatal(err)
		}
		for i := range f.Cols {
			v := &f.Cols[i]
			clear(v.Codes)
			clear(v.Choices)
			clear(v.Floats)
			clear(v.Ints)
			clear(v.Dates)
			clear(v.Bools)
			clear(v.Strings.End)
			clear(v.Strings.Start)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	s.over.Store(true)
	if s.buf.String() != want {
		t.Error("other bytes")
	}
}

func TestWriteErrorsBeside(t *testing.T) {
	whole := invent.Rows(0, 4000, schema.NewDict())
	for _, fail := range []int{1000, 100_000, 300_000} {
		s := &slow{t: t, fail: fail}
		w, err := New(s, invent.Table, Options{Workers: 2})
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range invent.Slices(whole, 1000) {
			if err = w.Write(f); err != nil {
				break
			}
		}
		closed := w.Close()
		s.over.Store(true)
		if closed == nil || !strings.Contains(closed.Error(), "disk full") || err != nil && !errors.Is(closed, err) {
			t.Errorf("%d bytes: Write returns %v, Close %v", fail, err, closed)
		}
	}
}

func TestAbort(t *testing.T) {
	s := &slow{t: t, fail: 1 << 30}
	w, err := New(s, invent.Table, Options{Workers: 2})
	if err != nil {
		t.Fatal(err)
	}
	w.Abort()
	if err := w.Write(invent.Rows(0, 4000, schema.NewDict())); err != nil {
		t.Fatal(err)
	}
	w.Abort()
	s.over.Store(true)
	w.Abort()
	time.Sleep(5 * time.Millisecond)
}

// Numbers that repeat must be written as those that do not, whether notes are
// kept or not, and when the column changes.
func TestNotedNumbers(t *testing.T) {
	p := newPart([]column{{schema.Column{Name: "a", Type: schema.Float}, true}})
	kept := 0
	for round := range 5 * trialFrames {
		distinct := []int{3, 100, 2000, 1e6}[round/11%4]
		f := &schema.Frame{N: 1000, Cols: []schema.Vector{{Kind: schema.KindFloats}}}
		var want []byte
		for i := range f.N {
			x := float64((round*f.N+i)*7919%distinct) / 64 * float64(1-i%2*2) // zeros of both signs among them
			f.Cols[0].Floats = append(f.Cols[0].Floats, x)
			want = append(append(want, floatText(x)...), '\n')
		}
		p.format(f, 0, f.N)
		if !bytes.Equal(p.out, want) {
			t.Fatalf("round %d: other numbers", round)
		}
		if p.notes[0].numbers.on {
			kept++
		}
	}
	if kept == 0 || kept == 5*trialFrames {
		t.Errorf("notes were kept in %d of %d frames", kept, 5*trialFrames)
	}
}
