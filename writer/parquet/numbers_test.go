package parquet

import (
	"bytes"
	"math"
	"testing"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/schema"
)

// noise is a double without a pattern.
func noise(i int) float64 {
	x := uint64(i+1) * 0x9e3779b97f4a7c15
	x ^= x >> 29
	return float64(x * 0xbf58476d1ce4e5b9 >> 11)
}

// How a chunk of numbers is stored depends on what its first page holds; what is
// read back never does.
func TestNumbersEncoding(t *testing.T) {
	const whole = mostRows / pageRows
	zstd, none := parquet.CompressionCodec_ZSTD, parquet.CompressionCodec_UNCOMPRESSED
	for name, c := range map[string]struct {
		n                 int
		number            func(int) float64
		dictionary, plain int // pages of the first row group
		codec             parquet.CompressionCodec
	}{
		"one number":          {mostRows + 10, func(int) float64 { return 0.25 }, whole, 0, zstd},
		"a quarter different": {mostRows, func(i int) float64 { return noise(i % (pageRows / repeats)) }, whole, 0, none},
		"a pattern":           {mostRows, func(i int) float64 { return noise(i / 3 % 50) }, whole, 0, zstd},
		"more than a quarter": {mostRows, func(i int) float64 { return noise(i % (pageRows/repeats + 1)) }, 0, whole, none},
		"all different":       {mostRows + 10, noise, 0, whole, none},
		"counting":            {mostRows, func(i int) float64 { return float64(i) }, 0, whole, zstd},
		"different later":     {4 * pageRows, func(i int) float64 { return noise(max(0, i-pageRows)) }, 2, 2, zstd},
		"few rows":            {3, noise, 0, 1, none},
		"nothing":             {10, func(int) float64 { return math.NaN() }, 0, 1, none},
		"both zeros":          {pageRows, func(i int) float64 { return math.Copysign(0, float64(i%3-1)) }, 1, 0, zstd},
		"nothing at first":    {2 * pageRows, func(i int) float64 { return 1 / float64(i/pageRows) }, 1, 1, none},
	} {
		f := &schema.Frame{N: c.n, Cols: []schema.Vector{{Kind: schema.KindFloats}}}
		for i := range c.n {
			x := c.number(i)
			if math.IsInf(x, 0) {
				x = math.NaN()
			}
			f.Cols[0].Floats = append(f.Cols[0].Floats, x)
		}
		data := write(t, schema.Table{Name: "t", Columns: []schema.Column{{Name: "it", Type: schema.Float}}}, Options{}, f)
		readBack(t, data, f)
		chunk := footer(t, data).RowGroups[0].Columns[0]
		dictionary, plain := countEncodings(pages(t, data, chunk))
		if dictionary != c.dictionary || plain != c.plain || chunk.MetaData.Codec != c.codec {
			t.Errorf("%s: %d pages with a dictionary, %d plain, %v", name, dictionary, plain, chunk.MetaData.Codec)
		}
	}
}

// The zeros of a bound have the signs that the format wants, whatever those of the
// values: a reader that tells them apart may skip no page.
func TestZeros(t *testing.T) {
	minus := math.Copysign(0, -1)
	const negative, positive = 1 << 63, 0 // zero
	for _, c := range []struct {
		values    []float64
		low, high uint64
	}{
		{[]float64{0}, negative, positive},
		{[]float64{minus}, negative, positive},
		{[]float64{minus, math.NaN(), 0}, negative, positive},
		{[]float64{0, 1, 2}, negative, math.Float64bits(2)},
		{[]float64{-2, minus, -1}, math.Float64bits(-2), positive},
	} {
		f := &schema.Frame{N: len(c.values), Cols: []schema.Vector{{Kind: schema.KindFloats, Floats: c.values}}}
		data := write(t, schema.Table{Name: "t", Columns: []schema.Column{{Name: "it", Type: schema.Float}}}, Options{}, f)
		readBack(t, data, f)
		chunk := footer(t, data).RowGroups[0].Columns[0]
		for _, s := range []*parquet.Statistics{chunk.MetaData.Statistics, pages(t, data, chunk)[0].header.DataPageHeader.Statistics} {
			if !bytes.Equal(s.MinValue, encodeUint64(c.low)) || !bytes.Equal(s.MaxValue, encodeUint64(c.high)) {
				t.Errorf("%v: from % x to % x", c.values, s.MinValue, s.MaxValue)
			}
		}
	}
}
