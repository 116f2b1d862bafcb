package parquet

import (
	"bytes"
	"context"
	"encoding/binary"
	"hash/crc32"
	"slices"
	"strings"
	"testing"

	"github.com/apache/thrift/lib/go/thrift"
	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/schema"
	"nightbook/writer/internal/invent"
)

// decode reads a structure of the format at the start of data and returns how
// many bytes it takes.
func decode(t *testing.T, data []byte, into interface {
	Read(context.Context, thrift.TProtocol) error
}) int {
	t.Helper()
	m := thrift.NewTMemoryBuffer()
	m.Write(data)
	if err := into.Read(context.Background(), thrift.NewTCompactProtocolFactoryConf(nil).GetProtocol(m)); err != nil {
		t.Fatal(err)
	}
	return len(data) - m.Len()
}

func footer(t *testing.T, data []byte) *parquet.FileMetaData {
	t.Helper()
	if !bytes.HasPrefix(data, magic) || !bytes.HasSuffix(data, magic) {
		t.Fatal("the file does not begin and end as it should")
	}
	size := int(binary.LittleEndian.Uint32(data[len(data)-8:]))
	f := parquet.NewFileMetaData()
	if n := decode(t, data[len(data)-8-size:len(data)-8], f); n != size {
		t.Errorf("the footer takes %d bytes, not %d", n, size)
	}
	return f
}

// seenPage is a page as found in the file.
type seenPage struct {
	at     int64
	size   int32 // with the header
	header *parquet.PageHeader
}

// pages walks the pages of a column chunk and checks what each says of itself.
func pages(t *testing.T, data []byte, c *parquet.ColumnChunk) (list []seenPage) {
	t.Helper()
	m := c.MetaData
	at := m.DataPageOffset
	if m.DictionaryPageOffset != nil {
		at = *m.DictionaryPageOffset
	}
	end := at + m.TotalCompressedSize
	var uncompressed, values int64
	for at < end {
		h := parquet.NewPageHeader()
		n := decode(t, data[at:], h)
		body := data[at+int64(n) : at+int64(n)+int64(h.CompressedPageSize)]
		if h.Crc == nil || uint32(*h.Crc) != crc32.ChecksumIEEE(body) {
			t.Errorf("%v: the page at %d has another CRC", m.PathInSchema, at)
		}
		list = append(list, seenPage{at, int32(n) + h.CompressedPageSize, h})
		uncompressed += int64(n) + int64(h.UncompressedPageSize)
		if h.DataPageHeader != nil {
			values += int64(h.DataPageHeader.NumValues)
		}
		at += int64(n) + int64(h.CompressedPageSize)
	}
	if at != end || uncompressed != m.TotalUncompressedSize || values != m.NumValues {
		t.Errorf("%v: pages end at %d, not %d; %d bytes before compression, not %d; %d values, not %d",
			m.PathInSchema, at, end, uncompressed, m.TotalUncompressedSize, values, m.NumValues)
	}
	return list
}

// boundsOf finds the smallest and largest value, encoded, and the nulls of rows
// [from, to) of a column, without any code of the writer.
func boundsOf(v *schema.Vector, from, to int) (low, high []byte, nulls int64) {
	first := true
	take := func(b []byte, less func(a, b []byte) bool) {
		if first || less(b, low) {
			low = b
		}
		if first || less(high, b) {
			high = b
		}
		first = false
	}
	for i := from; i < to; i++ {
		switch v.Kind {
		case schema.KindFloats:
			if x := v.Floats[i]; x == x {
				take(encodeFloat(x), func(a, b []byte) bool { return decodeFloat(a) < decodeFloat(b) })
				continue
			}
		case schema.KindInts:
			if x := v.Ints[i]; x != schema.NoInt {
				take(encodeUint64(uint64(x)), func(a, b []byte) bool {
					return int64(binary.LittleEndian.Uint64(a)) < int64(binary.LittleEndian.Uint64(b))
				})
				continue
			}
		case schema.KindDates:
			if x := v.Dates[i]; x != schema.NoDate {
				take(binary.LittleEndian.AppendUint32(nil, uint32(x)), func(a, b []byte) bool {
					return int32(binary.LittleEndian.Uint32(a)) < int32(binary.LittleEndian.Uint32(b))
				})
				continue
			}
		case schema.KindBools:
			b := []byte{0}
			if v.Bools[i] {
				b[0] = 1
			}
			take(b, func(a, b []byte) bool { return a[0] < b[0] })
			continue
		default:
			if x := v.Text(i); x != "" {
				take([]byte(x), func(a, b []byte) bool { return bytes.Compare(a, b) < 0 })
				continue
			}
		}
		nulls++
	}
	// The format: a smallest zero is written as -0, a largest one as +0.
	if v.Kind == schema.KindFloats && low != nil {
		if decodeFloat(low) == 0 {
			low = []byte{0, 0, 0, 0, 0, 0, 0, 0x80}
		}
		if decodeFloat(high) == 0 {
			high = make([]byte, 8)
		}
	}
	return low, high, nulls
}

func encodeFloat(x float64) []byte {
	var b bytes.Buffer
	binary.Write(&b, binary.LittleEndian, x)
	return b.Bytes()
}

// Every page, every chunk and the page index must tell the truth.
func TestStructure(t *testing.T) {
	const n = mostRows + pageRows + 100
	f := invent.Rows(0, n, schema.NewDict())
	data := write(t, invent.Table, Options{Workers: 2}, f)
	meta := footer(t, data)
	if meta.NumRows != n || len(meta.RowGroups) != 2 || len(meta.ColumnOrders) != len(invent.Table.Columns) {
		t.Fatalf("%d rows in %d groups", meta.NumRows, len(meta.RowGroups))
	}
	start := 0
	for g, group := range meta.RowGroups {
		var compressed, uncompressed int64
		for i, chunk := range group.Columns {
			m, v := chunk.MetaData, &f.Cols[i]
			compressed += m.TotalCompressedSize
			uncompressed += m.TotalUncompressedSize
			low, high, nulls := boundsOf(v, start, start+int(group.NumRows))
			if s := m.Statistics; !bytes.Equal(s.MinValue, low) || !bytes.Equal(s.MaxValue, high) || *s.NullCount != nulls {
				t.Errorf("group %d, %v: statistics %v", g, m.PathInSchema, s)
			}
			list := pages(t, data, chunk)
			var encodings []parquet.Encoding
			if m.DictionaryPageOffset != nil {
				if list[0].header.DictionaryPageHeader == nil {
					t.Errorf("group %d, %v: no dictionary page where it should be", g, m.PathInSchema)
				}
				encodings = append(encodings, parquet.Encoding_PLAIN)
				list = list[1:]
			}
			offsets, columns := parquet.NewOffsetIndex(), parquet.NewColumnIndex()
			decode(t, data[*chunk.OffsetIndexOffset:*chunk.OffsetIndexOffset+int64(*chunk.OffsetIndexLength)], offsets)
			decode(t, data[*chunk.ColumnIndexOffset:*chunk.ColumnIndexOffset+int64(*chunk.ColumnIndexLength)], columns)
			if len(offsets.PageLocations) != len(list) || len(columns.MinValues) != len(list) {
				t.Fatalf("group %d, %v: %d pages, %d in the index", g, m.PathInSchema, len(list), len(offsets.PageLocations))
			}
			row := int64(0)
			for k, p := range list {
				h := p.header.DataPageHeader
				if l := offsets.PageLocations[k]; l.Offset != p.at || l.CompressedPageSize != p.size || l.FirstRowIndex != row {
					t.Errorf("group %d, %v, page %d at %d of %d bytes, row %d: %v", g, m.PathInSchema, k, p.at, p.size, row, l)
				}
				from := start + int(row)
				low, high, nulls := boundsOf(v, from, from+int(h.NumValues))
				if s := h.Statistics; !bytes.Equal(s.MinValue, low) || !bytes.Equal(s.MaxValue, high) || *s.NullCount != nulls {
					t.Errorf("group %d, %v, page %d: statistics %v", g, m.PathInSchema, k, s)
				}
				if !bytes.Equal(columns.MinValues[k], low) || !bytes.Equal(columns.MaxValues[k], high) ||
					columns.NullCounts[k] != nulls || columns.NullPages[k] != (low == nil) {
					t.Errorf("group %d, %v, page %d: the index is wrong", g, m.PathInSchema, k)
				}
				encodings = append(encodings, h.Encoding)
				row += int64(h.NumValues)
			}
			for _, e := range encodings {
				if !slices.Contains(m.Encodings, e) {
					t.Errorf("group %d, %v: encoding %v is not listed", g, m.PathInSchema, e)
				}
			}
		}
		if compressed != *group.TotalCompressedSize || uncompressed != group.TotalByteSize {
			t.Errorf("group %d: sizes %d and %d", g, compressed, uncompressed)
		}
		start += int(group.NumRows)
	}
}

func TestSchema(t *testing.T) {
	meta := footer(t, write(t, invent.Table, Options{}))
	if meta.Schema[0].Name != "every" || *meta.Schema[0].NumChildren != int32(len(invent.Table.Columns)) {
		t.Errorf("root %v", meta.Schema[0])
	}
	for i, c := range invent.Table.Columns {
		e := meta.Schema[i+1]
		if e.Name != c.Name || (*e.RepetitionType == parquet.FieldRepetitionType_REQUIRED) != c.Required {
			t.Errorf("column %s: %v", c.Name, e)
		}
		want := map[schema.Type]parquet.Type{
			schema.Text: parquet.Type_BYTE_ARRAY, schema.Float: parquet.Type_DOUBLE, schema.Int: parquet.Type_INT64,
			schema.Day: parquet.Type_INT32, schema.Bool: parquet.Type_BOOLEAN,
		}[c.Type]
		if *e.Type != want {
			t.Errorf("column %s is %v", c.Name, *e.Type)
		}
		if c.Type == schema.Text && (e.LogicalType == nil || !e.LogicalType.IsSetSTRING()) ||
			c.Type == schema.Day && (e.LogicalType == nil || !e.LogicalType.IsSetDATE()) {
			t.Errorf("column %s has the logical type %v", c.Name, e.LogicalType)
		}
	}
}

// texts makes a table of one optional text column.
func texts(n int, text func(int) string) (schema.Table, *schema.Frame) {
	f := &schema.Frame{N: n, Cols: make([]schema.Vector, 1)}
	for i := range n {
		f.Cols[0].Strings.AppendString(text(i))
	}
	return schema.Table{Name: "t", Columns: []schema.Column{{Name: "it", Type: schema.Text}}}, f
}

func countEncodings(list []seenPage) (dictionary, plain int) {
	for _, p := range list {
		switch h := p.header.DataPageHeader; {
		case h == nil:
		case h.Encoding == parquet.Encoding_RLE_DICTIONARY:
			dictionary++
		case h.Encoding == parquet.Encoding_PLAIN:
			plain++
		}
	}
	return dictionary, plain
}

func readBack(t *testing.T, data []byte, f *schema.Frame) {
	t.Helper()
	values, _, _, err := open(t, data).ReadColumnByIndex(0, int64(f.N))
	if err != nil || len(values) != f.N {
		t.Fatalf("%d values (%v)", len(values), err)
	}
	for i := range f.N {
		if err := sameValue(&f.Cols[0], i, values[i]); err != nil {
			t.Fatalf("row %d: %v", i, err)
		}
	}
}

func TestDictionaryGivenUp(t *testing.T) {
	number := func(i int) string { return string(binary.BigEndian.AppendUint32([]byte("id"), uint32(i))) }
	const whole = mostRows / pageRows
	for name, c := range map[string]struct {
		n     int
		text  func(int) string
		pages [][2]int // with a dictionary and plain, by row group
	}{
		"few texts":          {mostRows + 10, func(i int) string { return number(i % 100) }, [][2]int{{whole, 0}, {1, 0}}},
		"all different":      {mostRows + 10, number, [][2]int{{1, whole - 1}, {0, 1}}},
		"few rows":           {10, number, [][2]int{{1, 0}}},
		"nothing":            {10, func(int) string { return "" }, [][2]int{{0, 1}}},
		"nothing at first":   {3 * pageRows, func(i int) string { return strings.Repeat("x", i/pageRows) }, [][2]int{{2, 1}}},
		"different later":    {3 * pageRows, func(i int) string { return number(max(0, i-pageRows)) }, [][2]int{{3, 0}}},
		"a large dictionary": {2 * pageRows, func(i int) string { return strings.Repeat("x", 500) + number(i/8) }, nil},
		"long texts":         {200, func(i int) string { return strings.Repeat("y", 30_000) + number(i%150) }, nil},
	} {
		table, f := texts(c.n, c.text)
		data := write(t, table, Options{}, f)
		readBack(t, data, f)
		for g, group := range footer(t, data).RowGroups {
			list := pages(t, data, group.Columns[0])
			dictionary, plain := countEncodings(list)
			if c.pages != nil && (dictionary != c.pages[g][0] || plain != c.pages[g][1]) {
				t.Errorf("%s, group %d: %d pages with a dictionary, %d plain", name, g, dictionary, plain)
			}
			if c.pages == nil && (dictionary == 0 || plain == 0) {
				t.Errorf("%s: %d pages with a dictionary, %d plain: the dictionary was not given up on the way", name, dictionary, plain)
			}
			for _, p := range list {
				if p.header.UncompressedPageSize > pageBytes+64<<10 {
					t.Errorf("%s: a page of %d bytes", name, p.header.UncompressedPageSize)
				}
			}
		}
	}
}

// A shortened text would be no bound: long ones are left out.
func TestLongTextsAreNoBounds(t *testing.T) {
	for length, known := range map[int]bool{maxTextBound: true, maxTextBound + 1: false} {
		table, f := texts(100, func(i int) string { return strings.Repeat("z", length) })
		data := write(t, table, Options{}, f)
		readBack(t, data, f)
		chunk := footer(t, data).RowGroups[0].Columns[0]
		if s := chunk.MetaData.Statistics; (s.MinValue != nil) != known || (s.MaxValue != nil) != known || s.NullCount == nil {
			t.Errorf("texts of %d bytes: statistics %v", length, s)
		}
		if (chunk.ColumnIndexOffset != nil) != known || chunk.OffsetIndexOffset == nil {
			t.Errorf("texts of %d bytes: index of bounds %v", length, chunk.ColumnIndexOffset)
		}
	}
}

// Long texts must end a row group before its rows do, at the same row whatever
// the frames.
func TestGroupsAreBounded(t *testing.T) {
	if testing.Short() {
		t.Skip("800 MB by one goroutine")
	}
	const n, size = 5*checkRows + 100, 20_000
	text := func(i int) string { return strings.Repeat(string(rune('a'+i%26)), size+i%100) }
	var rows []int64
	for _, step := range []int{1000, 4096} {
		table, _ := texts(0, nil)
		var out counting
		w, err := New(&out, table, Options{Compression: "none"})
		if err != nil {
			t.Fatal(err)
		}
		for from := 0; from < n; from += step {
			_, f := texts(min(step, n-from), func(i int) string { return text(from + i) })
			if err := w.Write(f); err != nil {
				t.Fatal(err)
			}
			if held := w.held(); held > mostBytes {
				t.Fatalf("%d bytes held", held)
			}
		}
		if err := w.Close(); err != nil {
			t.Fatal(err)
		}
		var got []int64
		for _, g := range w.groups {
			got = append(got, g.NumRows)
		}
		if len(got) < 3 || got[0] != checkRows {
			t.Errorf("row groups of %v rows", got)
		}
		if rows != nil && !slices.Equal(rows, got) {
			t.Errorf("frames of %d rows: row groups of %v rows, not %v", step, got, rows)
		}
		rows = got
	}
}

type counting int64

func (c *counting) Write(b []byte) (int, error) {
	*c += counting(len(b))
	return len(b), nil
}
