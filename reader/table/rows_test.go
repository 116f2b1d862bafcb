package table

import (
	"encoding/csv"
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"nightbook/schema"
)

func sample() *Rows {
	var r Rows
	r.Reset(4)
	r.N = 3
	r.Cols[0].Kind = schema.KindStrings
	for _, s := range []string{"plain", "", `a "q", b`} {
		r.Cols[0].Strings.AppendString(s)
	}
	r.Cols[1].Kind, r.Cols[1].Floats = schema.KindFloats, []float64{0.1, math.NaN(), -1e30}
	r.Cols[2].Kind, r.Cols[2].Ints = schema.KindInts, []int64{-7, schema.NoInt, math.MaxInt64}
	r.Cols[3].Kind, r.Cols[3].Dates = schema.KindDates, []schema.Date{0, schema.NoDate, 20532}
	return &r
}

func TestAppendRow(t *testing.T) {
	r := sample()
	for i, want := range []string{"plain,0.1,-7,1970-01-01", ",,,", `"a ""q"", b",-1e+30,9223372036854775807,2026-03-20`} {
		if got := string(r.AppendRow([]byte("x"), i)); got != "x"+want {
			t.Errorf("row %d: %s, want x%s", i, got, want)
		}
	}
}

// A row shown as a line of CSV reads back as its cells.
func TestAppendRowReadsBack(t *testing.T) {
	for _, texts := range [][]string{{"a", "b"}, {"", "x,y"}, {"line\nend", `"`}, {`""`, "\r"}, {"é€", " "}} {
		var r Rows
		r.Reset(len(texts))
		r.N = 1
		for i, s := range texts {
			r.Cols[i].Strings.AppendString(s)
		}
		got, err := csv.NewReader(strings.NewReader(string(r.AppendRow(nil, 0)))).Read()
		if err != nil || fmt.Sprint(got) != fmt.Sprint(texts) {
			t.Errorf("%q: %q %v", texts, got, err)
		}
	}
}

func TestAppendFloat(t *testing.T) {
	for x, want := range map[float64]string{0: "0", 1: "1", -2.5: "-2.5", 0.1: "0.1", 1e20: "100000000000000000000", 1e21: "1e+21", 1e-6: "0.000001", 1e-7: "1e-07", math.Inf(1): "+Inf"} {
		got := string(AppendFloat(nil, x))
		if back, err := strconv.ParseFloat(got, 64); got != want || err != nil || back != x {
			t.Errorf("%v: %s, want %s", x, got, want)
		}
	}
	if got := AppendFloat(nil, math.NaN()); len(got) != 0 {
		t.Errorf("an empty cell is shown as %s", got)
	}
}

// Reset leaves nothing of the run before.
func TestReset(t *testing.T) {
	r := sample()
	r.Cells[0] = []Cell{Fault, Number, Date}
	r.Line, r.Bad = append(r.Line, 1), append(r.Bad, Bad{0, "x"})
	r.Raw.AppendString("raw")
	r.Reset(2)
	if r.N != 0 || len(r.Cols) != 2 || len(r.Cells) != 2 || len(r.Line) != 0 || len(r.Bad) != 0 || r.Raw.Len() != 0 || r.Cols[0].Strings.Len() != 0 || len(r.Cols[1].Floats) != 0 {
		t.Errorf("%+v", r)
	}
	r.Cols[0].Strings.AppendString("x")
	if got := r.Cell(0, 0); got != Text {
		t.Errorf("cell of kind %d", got)
	}
	r.Reset(5)
	if len(r.Cols) != 5 || len(r.Cells) != 5 {
		t.Errorf("%d columns", len(r.Cols))
	}
}

// A coded column shows the same before and after it is spelled out, and so do
// the rows behind.
func TestCoded(t *testing.T) {
	var texts schema.Strings
	for _, x := range []string{"north", "so,uth", "never", ""} {
		texts.AppendString(x)
	}
	var r Rows
	r.Reset(1)
	r.N = 3
	r.Coded[0] = Coded{NewWords(texts), []uint32{1, 3, 0}}
	r.AppendColumn("2026", Number)
	for _, state := range []string{"coded", "spelled out"} {
		for i, want := range []string{`"so,uth",2026`, ",2026", "north,2026"} {
			if got := string(r.AppendRow(nil, i)); got != want {
				t.Errorf("%s, row %d: %s, want %s", state, i, got, want)
			}
		}
		if got := r.Cell(0, 1)*10 + r.Cell(1, 1); got != 10*Text+Number {
			t.Errorf("%s: cells of kinds %d", state, got)
		}
		r.SpellOut(0)
	}
	r.Cols[0].Strings.AppendString("more")
	if got := string(r.Text(0, 2)) + string(r.Text(0, 3)); r.Coded[0].Words != nil || got != "northmore" || string(texts.Data) != "northso,uthnever" {
		t.Errorf("%s; the words are %s", got, texts.Data)
	}
	r.Reset(2)
	if r.Coded[0].Words != nil || r.Coded[1].Words != nil || len(r.Coded) != 2 {
		t.Errorf("%+v", r.Coded)
	}
}
