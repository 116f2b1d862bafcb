package csv

import (
	"bytes"
	"fmt"
	"math"
	"strings"
	"testing"

	"nightbook/schema"
)

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

// Behind a fault there are no rows any more: what stands in the slots from the
// block before, long texts above all, is left alone.
func TestFaultBehindLongTexts(t *testing.T) {
	for column := range 3 {
		table := schema.Table{Name: "t", Columns: []schema.Column{{Name: "a", Type: schema.Text}, {Name: "b", Type: schema.Text}, {Name: "c", Type: schema.Text}}}
		table.Columns[column].Required = true
		f := &schema.Frame{N: 3 * blockRows, Cols: make([]schema.Vector, 3)}
		dict := schema.NewDict()
		f.Cols[2] = schema.Vector{Kind: schema.KindCodes, Dict: dict}
		long := strings.Repeat("long", 1000)
		for i := range f.N {
			texts := [3]string{"x", "y", "z"}
			if texts[column] = ""; i < 2*blockRows {
				texts[column] = long
			}
			f.Cols[0].Strings.AppendString(texts[0])
			f.Cols[1].Strings.AppendString(texts[1])
			f.Cols[2].Codes = append(f.Cols[2].Codes, dict.Code(texts[2]))
		}
		w, err := New(&discard{}, table, Options{})
		if err != nil {
			t.Fatal(err)
		}
		want := fmt.Sprintf("column %s, row %d: null", table.Columns[column].Name, 2*blockRows+1)
		if err := w.Write(f); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("error %v, want %q", err, want)
		}
	}
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
