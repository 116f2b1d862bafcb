package parquet

import (
	"fmt"
	"strings"
	"testing"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/schema"
)

// Texts with codes: every page has the bounds of its own texts, also where the
// dictionary is given up in the middle of rows.
func TestCodedPages(t *testing.T) {
	// The row that overfills the dictionary, where it holds two short texts and
	// then, from the second page on, long ones.
	const size = 200
	full := pageRows + (dictionaryBytes-(4+5)-(4+1))/(4+size)
	for name, text := range map[string]func(i int) string{
		"few":                func(i int) string { return fmt.Sprint("name ", i*i%71) },
		"with nulls":         func(i int) string { return []string{"", "a", "", "c", "d"}[i*i%5] },
		"in runs":            func(i int) string { return fmt.Sprint("book ", i/1000) },
		"a large dictionary": func(i int) string { return strings.Repeat("x", 200) + fmt.Sprint(i*7919%20_011) },
		"new ones later":     func(i int) string { return fmt.Sprint(strings.Repeat("z", 100), max(0, i-30_000)*13%9_001) },
		"the last text again, behind the row that overfills the dictionary": func(i int) string {
			switch {
			case i == 0 || i == full+1:
				return "~last"
			case i < pageRows:
				return "a"
			}
			return fmt.Sprintf("%*d", size, i)
		},
	} {
		dict := schema.NewDict()
		f := &schema.Frame{N: 60_000, Cols: []schema.Vector{{Kind: schema.KindCodes, Dict: dict}}}
		for i := range f.N {
			f.Cols[0].Codes = append(f.Cols[0].Codes, dict.Code(text(i)))
		}
		data := write(t, schema.Table{Name: "t", Columns: []schema.Column{{Name: "it", Type: schema.Text}}}, Options{}, f)
		readBack(t, data, f)
		row := 0
		for _, p := range pages(t, data, footer(t, data).RowGroups[0].Columns[0]) {
			h := p.header.DataPageHeader
			if h == nil {
				continue
			}
			to := row + int(h.NumValues)
			low, high, nulls := boundsOf(&f.Cols[0], row, to)
			if s := h.Statistics; string(s.MinValue) != string(low) || string(s.MaxValue) != string(high) || *s.NullCount != nulls {
				t.Errorf("%s, rows %d to %d: from %s to %s, %d nulls; want %s to %s, %d", name, row, to, s.MinValue, s.MaxValue, *s.NullCount, low, high, nulls)
			}
			row = to
		}
	}
}

// The codec of a chunk of texts depends on whether they are free or have codes.
func TestCodecOfTexts(t *testing.T) {
	zstd, none := parquet.CompressionCodec_ZSTD, parquet.CompressionCodec_UNCOMPRESSED
	for name, c := range map[string]struct {
		n     int
		text  func(i int) string
		free  parquet.CompressionCodec // where they come as they are
		coded parquet.CompressionCodec
	}{
		"indices without a pattern": {pageRows, func(i int) string { return fmt.Sprint(int64(noise(i)) % 50) }, zstd, none},
		"indices with a pattern":    {pageRows, func(i int) string { return fmt.Sprint(i / 3 % 50) }, zstd, zstd},
		"a large dictionary":        {pageRows, func(i int) string { return fmt.Sprintf("%050d", i%2000) }, zstd, zstd},
		"one text":                  {pageRows, func(i int) string { return "x" }, zstd, zstd},
		"few rows":                  {5, func(i int) string { return fmt.Sprint(i) }, zstd, zstd},
		"all different":             {pageRows, func(i int) string { return fmt.Sprint(noise(i)) }, zstd, zstd},
		"nothing":                   {pageRows, func(i int) string { return "" }, zstd, zstd},
	} {
		table, free := texts(c.n, c.text)
		dict := schema.NewDict()
		coded := &schema.Frame{N: c.n, Cols: []schema.Vector{{Kind: schema.KindCodes, Dict: dict}}}
		for i := range c.n {
			coded.Cols[0].Codes = append(coded.Cols[0].Codes, dict.Code(c.text(i)))
		}
		for f, want := range map[*schema.Frame]parquet.CompressionCodec{free: c.free, coded: c.coded} {
			data := write(t, table, Options{}, f)
			readBack(t, data, f)
			if got := footer(t, data).RowGroups[0].Columns[0].MetaData.Codec; got != want {
				t.Errorf("%s, coded %v: %v, want %v", name, f == coded, got, want)
			}
		}
	}
}
