package reader

import (
	"bytes"
	"context"
	"encoding/binary"
	"math"
	"math/bits"
	"slices"
	"strconv"
	"testing"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/xitongsys/parquet-go/parquet"
)

// null is a cell without a value; "" is one with the empty text.
const null = "∅"

// chunk is how the cells of a column are laid out in a row group.
type chunk struct {
	words []string // the dictionary; nil: there is none
	coded int      // how many rows are indices into it: the rest are plain
	page  int      // rows of a page
}

// laidColumn is an optional column: of texts, of doubles, of int64 or of dates.
type laidColumn struct {
	name string
	kind parquet.Type // INT32 is a date
}

// laid writes a Parquet file page by page, so that a test can say what stands in
// them. how says it of each column of each row group.
//
// Source of the layout: "Apache Parquet: file format" and "encodings", in the
// specification of Parquet.
func laid(t testing.TB, columns []laidColumn, groups [][][]string, how func(group, column int, cells []string) chunk) string {
	t.Helper()
	out := bytes.NewBufferString("PAR1")
	count := int32(len(columns))
	meta := &parquet.FileMetaData{Version: 1, Schema: []*parquet.SchemaElement{{Name: "root", NumChildren: &count}}}
	for _, c := range columns {
		optional, kind := parquet.FieldRepetitionType_OPTIONAL, c.kind
		e := &parquet.SchemaElement{Name: c.name, Type: &kind, RepetitionType: &optional}
		converted := parquet.ConvertedType_UTF8
		if kind == parquet.Type_INT32 {
			converted = parquet.ConvertedType_DATE
		}
		if kind == parquet.Type_INT32 || kind == parquet.Type_BYTE_ARRAY {
			e.ConvertedType = &converted
		}
		meta.Schema = append(meta.Schema, e)
	}
	for g, rows := range groups {
		group := &parquet.RowGroup{NumRows: int64(len(rows))}
		meta.NumRows += group.NumRows
		for k, c := range columns {
			var cells []string
			for _, row := range rows {
				cells = append(cells, row[k])
			}
			group.Columns = append(group.Columns, &parquet.ColumnChunk{MetaData: c.write(t, out, cells, how(g, k, cells))})
		}
		meta.RowGroups = append(meta.RowGroups, group)
	}
	footer := compact(t, meta)
	out.Write(footer)
	out.Write(binary.LittleEndian.AppendUint32(nil, uint32(len(footer))))
	out.WriteString("PAR1")
	return out.String()
}

func compact(t testing.TB, s thrift.TStruct) []byte {
	t.Helper()
	w := thrift.NewTSerializer()
	w.Protocol = thrift.NewTCompactProtocolFactoryConf(nil).GetProtocol(w.Transport)
	b, err := w.Write(context.Background(), s)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func (c laidColumn) write(t testing.TB, out *bytes.Buffer, cells []string, l chunk) *parquet.ColumnMetaData {
	m := &parquet.ColumnMetaData{Type: c.kind, PathInSchema: []string{c.name}, NumValues: int64(len(cells))}
	page := func(h *parquet.PageHeader, data []byte) {
		h.CompressedPageSize, h.UncompressedPageSize = int32(len(data)), int32(len(data))
		out.Write(compact(t, h))
		out.Write(data)
	}
	if l.words != nil {
		at := int64(out.Len())
		m.DictionaryPageOffset = &at
		page(&parquet.PageHeader{Type: parquet.PageType_DICTIONARY_PAGE, DictionaryPageHeader: &parquet.DictionaryPageHeader{
			NumValues: int32(len(l.words)), Encoding: parquet.Encoding_PLAIN}}, c.plain(t, l.words))
	}
	places := map[string]uint32{}
	for i, x := range l.words {
		places[x] = uint32(i)
	}
	m.DataPageOffset = int64(out.Len())
	for from := 0; from < len(cells); {
		to := min(from+l.page, len(cells))
		if from < l.coded {
			to = min(to, l.coded)
		}
		var levels []uint32
		var stored []string
		for _, x := range cells[from:to] {
			if x == null {
				levels = append(levels, 0)
				continue
			}
			levels, stored = append(levels, 1), append(stored, x)
		}
		packed := packed(levels, 1)
		data := append(binary.LittleEndian.AppendUint32(nil, uint32(len(packed))), packed...)
		h := &parquet.DataPageHeader{NumValues: int32(to - from), Encoding: parquet.Encoding_PLAIN, DefinitionLevelEncoding: parquet.Encoding_RLE, RepetitionLevelEncoding: parquet.Encoding_RLE}
		if from < l.coded {
			h.Encoding = parquet.Encoding_RLE_DICTIONARY
			width := bits.Len(uint(len(l.words) - 1))
			var indices []uint32
			for _, x := range stored {
				indices = append(indices, places[x])
			}
			data = append(append(data, byte(width)), packedRun(indices, width)...)
		} else {
			data = append(data, c.plain(t, stored)...)
		}
		page(&parquet.PageHeader{Type: parquet.PageType_DATA_PAGE, DataPageHeader: h}, data)
		from = to
	}
	return m
}

// packedRun is packed, but that values which are all the same are a run.
func packedRun(values []uint32, width int) []byte {
	if len(values) == 0 || slices.Max(values) != slices.Min(values) {
		return packed(values, width)
	}
	b := binary.AppendUvarint(nil, uint64(len(values))<<1)
	return append(b, binary.LittleEndian.AppendUint32(nil, values[0])[:(width+7)/8]...)
}

// packed lays small integers out in groups of eight.
func packed(values []uint32, width int) []byte {
	groups := (len(values) + 7) / 8
	if groups == 0 {
		return nil
	}
	b := make([]byte, groups*width)
	for i, x := range values {
		for k := range width {
			if bit := i*width + k; x>>k&1 != 0 {
				b[bit>>3] |= 1 << (bit & 7)
			}
		}
	}
	return append(binary.AppendUvarint(nil, uint64(groups)<<1|1), b...)
}

// plain lays out values as they are.
func (c laidColumn) plain(t testing.TB, values []string) (b []byte) {
	for _, x := range values {
		switch c.kind {
		case parquet.Type_BYTE_ARRAY:
			b = append(binary.LittleEndian.AppendUint32(b, uint32(len(x))), x...)
		case parquet.Type_DOUBLE:
			v, err := strconv.ParseFloat(x, 64)
			if err != nil {
				t.Fatal(err)
			}
			b = binary.LittleEndian.AppendUint64(b, math.Float64bits(v))
		case parquet.Type_INT64:
			v, err := strconv.ParseInt(x, 10, 64)
			if err != nil {
				t.Fatal(err)
			}
			b = binary.LittleEndian.AppendUint64(b, uint64(v))
		default:
			day, _, why := isoDate.parse([]byte(x))
			if why != nil {
				t.Fatal(why.reason)
			}
			b = binary.LittleEndian.AppendUint32(b, uint32(day))
		}
	}
	return b
}

// different returns the different cells that have a value, from the one at turn
// on: dictionaries of other row groups are in another order.
func different(cells []string, turn int) []string {
	words, seen := []string{}, map[string]bool{null: true}
	for i := range cells {
		if x := cells[(i+turn)%len(cells)]; !seen[x] {
			words, seen[x] = append(words, x), true
		}
	}
	return words
}
