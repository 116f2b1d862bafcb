package interop

import (
	"bytes"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow-go/v18/parquet"
	"github.com/apache/arrow-go/v18/parquet/compress"
	"github.com/apache/arrow-go/v18/parquet/schema"
)

var update = flag.Bool("update", false, "write the files of ../testdata that are made here")

// fixtures are files for the tests of reader/parquet, which does without the
// library: 200 rows of one column, packed with LZ4.
var fixtures = []struct {
	name string
	kind
	layout
}{
	{"lz4-delta", kind{physical: parquet.Types.Int64, logical: schema.NoLogicalType{}, value: func(i int) any { return int64(i*i - 7) }},
		layout{compress.Codecs.Lz4Raw, parquet.DataPageV1, parquet.Encodings.DeltaBinaryPacked, true, false}},
	{"lz4-split", kind{physical: parquet.Types.Double, logical: schema.NoLogicalType{}, value: func(i int) any { return float64(i)/8 - 3 }},
		layout{compress.Codecs.Lz4Raw, parquet.DataPageV2, parquet.Encodings.ByteStreamSplit, true, false}},
	{"lz4-plain", kind{physical: parquet.Types.ByteArray, logical: schema.StringLogicalType{}, value: func(i int) any { return parquet.ByteArray(fmt.Sprintf("row %d of many", i/3)) }},
		layout{compress.Codecs.Lz4Raw, parquet.DataPageV1, parquet.Encodings.Plain, false, false}},
}

// TestFixtures compares the files of ../testdata with what is made here.
func TestFixtures(t *testing.T) {
	for _, f := range fixtures {
		b, err := write(f.kind, f.layout, 200)
		if err != nil {
			t.Fatal(err)
		}
		path := filepath.Join("..", "testdata", f.name+".parquet")
		if *update {
			if err := os.WriteFile(path, b, 0o644); err != nil {
				t.Fatal(err)
			}
		}
		if have, err := os.ReadFile(path); err != nil || !bytes.Equal(have, b) {
			t.Errorf("%s: not what is made here (%v): run this test with -update", path, err)
		}
	}
}

// What is not read is refused with the column, and what of it is not read.
func TestRefused(t *testing.T) {
	every := map[string]kind{}
	for _, k := range kinds() {
		every[k.name] = k
	}
	for name, c := range map[string]struct {
		k       kind
		logical schema.LogicalType
		l       layout
		want    string
	}{
		"brotli":   {every["int32"], nil, layout{codec: compress.Codecs.Brotli}, "column x, row group 1: pages packed with BROTLI are not read"},
		"interval": {every["fixed text"], schema.IntervalLogicalType{}, layout{}, "column x is of type FIXED_LEN_BYTE_ARRAY/INTERVAL, which is not read"},
		"bson":     {every["bytes"], schema.BSONLogicalType{}, layout{}, "column x is of type BYTE_ARRAY/BSON, which is not read"},
		"float16":  {every["fixed text"], schema.Float16LogicalType{}, layout{}, "column x is of type FIXED_LEN_BYTE_ARRAY with an annotation unknown to this reader, which is not read"},
	} {
		if c.logical != nil {
			c.k.logical = c.logical
			c.k.length = map[string]int{"interval": 12, "float16": 2}[name]
			length := c.k.length
			if length > 0 {
				c.k.value = func(int) any { return parquet.FixedLenByteArray(make([]byte, length)) }
			}
		}
		b, err := write(c.k, c.l, 10)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if _, err := read(b); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, want %q", name, err, c.want)
		}
	}
}
