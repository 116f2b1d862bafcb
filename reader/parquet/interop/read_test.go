package interop

import (
	"bytes"
	"fmt"
	"io"
	"testing"

	"github.com/apache/arrow-go/v18/parquet"
	"github.com/apache/arrow-go/v18/parquet/compress"
	"github.com/apache/arrow-go/v18/parquet/file"
	"github.com/apache/arrow-go/v18/parquet/schema"

	ours "nightbook/reader/parquet"
	"nightbook/reader/table"
	names "nightbook/schema"
)

// layout is how a file is laid out.
type layout struct {
	codec    compress.Compression
	page     parquet.DataPageVersion
	encoding parquet.Encoding
	optional bool
	outgrown bool // the dictionary, by the values: the pages behind are plain
}

func (l layout) String() string {
	return fmt.Sprintf("%s, pages v%d, %s, nulls %v, dictionary outgrown %v", l.encoding, l.page+1, l.codec, l.optional, l.outgrown)
}

// isNull says which rows of a column with nulls have none: now and then many in a row.
func isNull(i int) bool { return i%7 == 3 || i/300%4 == 2 }

// write lays n rows of one column out, a third to a row group, in small pages.
func write(k kind, l layout, n int) ([]byte, error) {
	repetition := parquet.Repetitions.Required
	if l.optional {
		repetition = parquet.Repetitions.Optional
	}
	node, err := schema.NewPrimitiveNodeLogical("x", repetition, k.logical, k.physical, k.length, -1)
	if err != nil {
		return nil, err
	}
	root, err := schema.NewGroupNode("root", parquet.Repetitions.Required, schema.FieldList{node}, -1)
	if err != nil {
		return nil, err
	}
	options := []parquet.WriterProperty{parquet.WithCompression(l.codec), parquet.WithDataPageVersion(l.page), parquet.WithDataPageSize(3000), parquet.WithBatchSize(100),
		parquet.WithVersion(parquet.V2_LATEST)}
	if l.encoding == parquet.Encodings.RLEDict {
		options = append(options, parquet.WithDictionaryDefault(true))
		if l.outgrown {
			options = append(options, parquet.WithDictionaryPageSizeLimit(1500))
		}
	} else {
		options = append(options, parquet.WithDictionaryDefault(false), parquet.WithEncoding(l.encoding))
	}
	var b bytes.Buffer
	w := file.NewParquetWriter(&b, root, file.WithWriterProps(parquet.NewWriterProperties(options...)))
	for from := 0; from < n; from += (n + 2) / 3 {
		group, err := w.AppendRowGroupChecked()
		if err != nil {
			return nil, err
		}
		column, err := group.NextColumn()
		if err != nil {
			return nil, err
		}
		if err := fill(column, k, l.optional, from, min(n, from+(n+2)/3)); err != nil {
			return nil, err
		}
		if err := column.Close(); err != nil {
			return nil, err
		}
		if err := group.Close(); err != nil {
			return nil, err
		}
	}
	err = w.Close()
	return b.Bytes(), err
}

// fill writes rows [from, to) of a column.
func fill(column file.ColumnChunkWriter, k kind, optional bool, from, to int) (err error) {
	var levels []int16
	var values []any
	for i := from; i < to; i++ {
		if optional && isNull(i) {
			levels = append(levels, 0)
			continue
		}
		levels = append(levels, 1)
		values = append(values, k.value(i))
	}
	if !optional {
		levels = nil
	}
	switch w := column.(type) {
	case *file.BooleanColumnChunkWriter:
		_, err = w.WriteBatch(of[bool](values), levels, nil)
	case *file.Int32ColumnChunkWriter:
		_, err = w.WriteBatch(of[int32](values), levels, nil)
	case *file.Int64ColumnChunkWriter:
		_, err = w.WriteBatch(of[int64](values), levels, nil)
	case *file.Int96ColumnChunkWriter:
		_, err = w.WriteBatch(of[parquet.Int96](values), levels, nil)
	case *file.Float32ColumnChunkWriter:
		_, err = w.WriteBatch(of[float32](values), levels, nil)
	case *file.Float64ColumnChunkWriter:
		_, err = w.WriteBatch(of[float64](values), levels, nil)
	case *file.ByteArrayColumnChunkWriter:
		_, err = w.WriteBatch(of[parquet.ByteArray](values), levels, nil)
	case *file.FixedLenByteArrayColumnChunkWriter:
		_, err = w.WriteBatch(of[parquet.FixedLenByteArray](values), levels, nil)
	default:
		err = fmt.Errorf("a column writer of type %T", column)
	}
	return err
}

func of[T any](values []any) []T {
	out := make([]T, len(values))
	for i, v := range values {
		out[i] = v.(T)
	}
	return out
}

// read reads the only column of a file: its cells as texts, doubles as bits.
func read(b []byte) ([]string, error) {
	f, err := ours.Open(bytes.NewReader(b), int64(len(b)), names.Limits{})
	if err != nil {
		return nil, err
	}
	var cells []string
	var rows table.Rows
	for {
		err := f.Next(&rows)
		if err == io.EOF {
			return cells, nil
		}
		if err != nil {
			return nil, err
		}
		if len(rows.Bad) > 0 {
			return nil, fmt.Errorf("bad rows: %+v", rows.Bad)
		}
		for i := range rows.N {
			if v := &rows.Cols[0]; v.Kind == names.KindFloats && v.Floats[i] == v.Floats[i] {
				cells = append(cells, bits(v.Floats[i]))
			} else {
				cells = append(cells, string(rows.AppendText(nil, 0, i)))
			}
		}
	}
}

var codecs = []compress.Compression{
	compress.Codecs.Uncompressed, compress.Codecs.Snappy, compress.Codecs.Gzip, compress.Codecs.Zstd, compress.Codecs.Lz4Raw,
}

// Every type, in every encoding it can have, in both page layouts, with every
// codec, with nulls and without, reads as the values that were written.
func TestReadTheirs(t *testing.T) {
	const n = 3000
	for _, k := range kinds() {
		for _, encoding := range encodings(k.physical) {
			for at := range 2 * 2 * 2 * len(codecs) {
				l := layout{codecs[at/8], parquet.DataPageVersion(at & 1), encoding, at&2 != 0, at&4 != 0}
				if l.outgrown && encoding != parquet.Encodings.RLEDict {
					continue
				}
				b, err := write(k, l, n)
				if err != nil {
					t.Fatalf("%s, %s: written: %v", k.name, l, err)
				}
				cells, err := read(b)
				if err != nil || len(cells) != n {
					t.Errorf("%s, %s: %d rows, %v", k.name, l, len(cells), err)
					continue
				}
				for i, got := range cells {
					want := ""
					if !l.optional || !isNull(i) {
						want = k.text(i)
					}
					if got != want {
						t.Errorf("%s, %s: row %d is %q, want %q", k.name, l, i, got, want)
						break
					}
				}
			}
		}
	}
}
