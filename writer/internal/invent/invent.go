// Package invent makes up rows for the tests of the writers: every kind of
// vector, with and without nulls, awkward texts and awkward numbers.
package invent

import (
	"fmt"
	"math"

	"nightbook/schema"
)

// Table has a column of every kind, once never null and once with nulls.
var Table = schema.Table{Name: "every", Doc: "a column of every kind", Columns: []schema.Column{
	{Name: "id", Type: schema.Text, Required: true},
	{Name: "free", Type: schema.Text},
	{Name: "tag", Type: schema.Text},
	{Name: "book", Type: schema.Text, Required: true},
	{Name: "strategy", Type: schema.Text},
	{Name: "status", Type: schema.Text, Required: true},
	{Name: "option_type", Type: schema.Text},
	{Name: "price", Type: schema.Float, Required: true},
	{Name: "mark", Type: schema.Float},
	{Name: "rate", Type: schema.Float, Required: true},
	{Name: "count", Type: schema.Int, Required: true},
	{Name: "minute", Type: schema.Int},
	{Name: "day", Type: schema.Day, Required: true},
	{Name: "expiry", Type: schema.Day},
	{Name: "flag", Type: schema.Bool, Required: true},
	{Name: "never", Type: schema.Float},
	{Name: "nothing", Type: schema.Text},
}}

var awkwardFloats = []float64{
	0, math.Copysign(0, -1), 1, -1, 0.1, 1e-7, -1e-7, 1e21, 1e22, math.MaxFloat64, -math.MaxFloat64,
	math.SmallestNonzeroFloat64, 1.0 / 3, 123456789.125, 999999999999999, 1e15, 9007199254740993, -2.5,
}

var awkwardTexts = []string{
	"plain", "with, comma", `with "quotes"`, "two\nlines", "cr\rhere", "=1+1", "+49", "-5", "@cmd", "\tTab",
	"'apostrophe", "'=quoted", "Σ − ≤ 漢字 🌙", " leading space", "trailing ", `"`, ",", "0", "1e5", "TRUE", "'", "''=x",
}

// AwkwardTexts returns the texts that column free is made of.
func AwkwardTexts() []string { return append([]string(nil), awkwardTexts...) }

// Rows returns n rows of Table beginning with row from. A row depends on its
// number alone; the codes behind the texts depend on the dictionary given.
func Rows(from, n int, dict *schema.Dict) *schema.Frame {
	f := &schema.Frame{N: n, Cols: make([]schema.Vector, len(Table.Columns))}
	c := f.Cols
	c[3].Kind, c[3].Dict = schema.KindCodes, dict
	c[4].Kind, c[4].Dict = schema.KindCodes, dict
	c[5].Kind, c[5].Names = schema.KindChoices, schema.Statuses
	c[6].Kind, c[6].Names = schema.KindChoices, schema.OptionTypes
	for i, k := range map[int]schema.Kind{
		7: schema.KindFloats, 8: schema.KindFloats, 9: schema.KindFloats, 15: schema.KindFloats,
		10: schema.KindInts, 11: schema.KindInts, 12: schema.KindDates, 13: schema.KindDates, 14: schema.KindBools,
	} {
		c[i].Kind = k
	}
	for row := from; row < from+n; row++ {
		r := func(col int, below int) int { return int(hash(uint64(row)<<8|uint64(col)) % uint64(below)) }
		c[0].Strings.AppendString(fmt.Sprintf("L%07d", row))
		c[1].Strings.AppendString(free(row, r(1, 40)))
		c[2].Strings.AppendString([]string{"", "alpha", "beta", "a longer tag that repeats"}[r(2, 4)])
		c[3].Codes = append(c[3].Codes, dict.Code(fmt.Sprintf("Book %02d", r(3, 37))))
		strategy := ""
		if r(4, 3) > 0 {
			strategy = fmt.Sprintf("strategy %d", r(44, 500))
		}
		c[4].Codes = append(c[4].Codes, dict.Code(strategy))
		c[5].Choices = append(c[5].Choices, schema.Priced+schema.Choice(r(5, 2)))
		c[6].Choices = append(c[6].Choices, schema.Choice(r(6, 3)))
		c[7].Floats = append(c[7].Floats, awkward(row, r(7, 200)))
		mark := math.NaN()
		if r(8, 4) > 0 {
			mark = awkward(row+1, r(88, 50))
		}
		c[8].Floats = append(c[8].Floats, mark)
		c[9].Floats = append(c[9].Floats, float64(r(9, 4))/100)
		c[10].Ints = append(c[10].Ints, int64(hash(uint64(row)))|1)
		minute := int64(schema.NoInt)
		if r(11, 5) == 0 {
			minute = int64(r(111, 1440))
		}
		c[11].Ints = append(c[11].Ints, minute)
		c[12].Dates = append(c[12].Dates, schema.Date(20000+r(12, 3000)))
		expiry := schema.NoDate
		if r(13, 3) > 0 {
			expiry = schema.Date(r(133, 40000) - 2000)
		}
		c[13].Dates = append(c[13].Dates, expiry)
		c[14].Bools = append(c[14].Bools, r(14, 2) == 1)
		c[15].Floats = append(c[15].Floats, math.NaN())
		c[16].Strings.AppendString("")
	}
	return f
}

func free(row, r int) string {
	switch {
	case r < len(awkwardTexts):
		return awkwardTexts[r]
	case r < 30:
		return ""
	}
	return fmt.Sprintf("row %d says %x", row, hash(uint64(row)))
}

func awkward(row, r int) float64 {
	if r < len(awkwardFloats) {
		return awkwardFloats[r]
	}
	return (float64(hash(uint64(row)*31)>>11)/(1<<53) - 0.5) * 1e6
}

// hash is the finalizer of splitmix64 (Steele, Lea and Flood, 2014).
func hash(x uint64) uint64 {
	x += 0x9e3779b97f4a7c15
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}

// Slices cuts a frame into frames of size rows that share its memory.
func Slices(f *schema.Frame, size int) []*schema.Frame {
	var list []*schema.Frame
	for from := 0; from < f.N; from += size {
		to := min(from+size, f.N)
		part := &schema.Frame{N: to - from, Cols: append([]schema.Vector(nil), f.Cols...)}
		for i := range part.Cols {
			v := &part.Cols[i]
			v.Strings.Start, v.Strings.End = cut(v.Strings.Start, from, to), cut(v.Strings.End, from, to)
			v.Codes, v.Choices = cut(v.Codes, from, to), cut(v.Choices, from, to)
			v.Floats, v.Ints = cut(v.Floats, from, to), cut(v.Ints, from, to)
			v.Dates, v.Bools = cut(v.Dates, from, to), cut(v.Bools, from, to)
		}
		list = append(list, part)
	}
	return list
}

func cut[T any](s []T, from, to int) []T {
	if s == nil {
		return nil
	}
	return s[from:to]
}
