package parquet

import (
	"bytes"
	"encoding/binary"
	"errors"
	"strings"
	"testing"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/reader/table"
	"nightbook/schema"
)

// The text of a time has as many digits as the time has, and no more.
func TestTimes(t *testing.T) {
	for _, c := range []struct {
		want               string
		second, part, unit int64
		utc                bool
	}{
		{"1970-01-01", 0, 0, 1e3, false},
		{"1970-01-01T00:00Z", 0, 0, 1e3, true},
		{"1969-12-31T23:59:59.999", -1, 999, 1e3, false},
		{"1970-01-02T00:00:00.000001", 86400, 1, 1e6, false},
		{"1970-01-01T01:01", 3660, 0, 1e9, false},
		{"1970-01-01T01:01:01.00000005Z", 3661, 50, 1e9, true},
	} {
		if got := string(appendTime(nil, c.second, c.part, c.unit, c.utc)); got != c.want {
			t.Errorf("%s, want %s", got, c.want)
		}
	}
	b := readFile(t, "time.parquet")
	_, rows, err := rendered(bytes.NewReader(b), int64(len(b)))
	if err != nil || len(rows) == 0 {
		t.Errorf("times of day: %v %v", rows, err)
	}
	for _, r := range rows {
		if got := r[len(r)-1]; got != "∅" && (len(got) < 5 || got[2] != ':') {
			t.Errorf("a time of day is %q", got)
		}
	}
}

// Nor is an encoding that came after it.
func TestUnknownEncoding(t *testing.T) {
	c := &column{physical: parquet.Type_DOUBLE}
	for e, want := range map[parquet.Encoding]string{parquet.Encoding_DELTA_BINARY_PACKED: "DOUBLE in the encoding DELTA_BINARY_PACKED is not read: write the column in another, such as PLAIN", 10: "DOUBLE in the encoding number 10 of the format is not read: write the column in another, such as PLAIN"} {
		if err := c.values.start(c, e, nil); err == nil || err.Error() != want {
			t.Errorf("%v, want %s", err, want)
		}
	}
}

// A few bytes that claim rows without end are stopped.
func TestRowsWithoutBytes(t *testing.T) {
	b := readFile(t, "lz4-delta.parquet")
	f, err := Open(bytes.NewReader(b), int64(len(b)), schema.Limits{})
	if err != nil {
		t.Fatal(err)
	}
	c := f.columns[0]
	f.group, f.left = 0, 1<<60
	c.pages.left = 1 << 60
	c.pages.levels.reset([]byte{0xfe, 0xff, 0xff, 0xff, 0x0f, 0}, 1) // a run of nulls
	c.values.encoding = parquet.Encoding_PLAIN
	var rows table.Rows
	for err = f.Next(&rows); err == nil; err = f.Next(&rows) {
	}
	var limit *schema.LimitError
	if !errors.As(err, &limit) || limit.Limit != schema.UnpackedRatio || f.row > 20_000_000 {
		t.Errorf("%d rows of %d bytes: %v", f.row, len(b), err)
	}
}

// An annotation that came after this reader is refused: the bytes below it do
// not say what they mean.
func TestUnknownAnnotation(t *testing.T) {
	kind, optional := parquet.Type_FIXED_LEN_BYTE_ARRAY, parquet.FieldRepetitionType_OPTIONAL
	length := int32(2)
	_, err := columnsOf([]*parquet.SchemaElement{{Name: "root"}, {Name: "half", Type: &kind, TypeLength: &length, RepetitionType: &optional, LogicalType: &parquet.LogicalType{}}})
	if err == nil || !strings.Contains(err.Error(), "column half is of type FIXED_LEN_BYTE_ARRAY with an annotation unknown to this reader") {
		t.Error(err)
	}
}

// A row group without a dictionary of its own does not take that of the one before.
func TestDictionaryOfItsRowGroup(t *testing.T) {
	f := &File{limits: new(schema.Limits)}
	c := &column{physical: parquet.Type_INT32, file: f}
	if err := c.values.setDictionary(c, []byte{7, 0, 0, 0}, 1, parquet.Encoding_PLAIN); err != nil {
		t.Fatal(err)
	}
	index := []byte{1, 2, 0} // of one bit: a run of one 0
	read := func() error {
		if err := c.values.start(c, parquet.Encoding_RLE_DICTIONARY, index); err != nil {
			return err
		}
		return c.values.read(c, 1)
	}
	if err := read(); err != nil || c.values.ints[0] != 7 {
		t.Fatalf("%v %v", err, c.values.ints)
	}
	meta := &parquet.ColumnMetaData{Type: parquet.Type_INT32, NumValues: 1, DataPageOffset: 4}
	if err := c.start(bytes.NewReader(make([]byte, 100)), 100, meta, 1); err != nil {
		t.Fatal(err)
	}
	if err := read(); !errors.Is(err, errDamaged) {
		t.Errorf("%v, want a damaged file", err)
	}
}

// Few words may make many texts, which are counted before they are spelled out.
func TestWordsBeyondLimit(t *testing.T) {
	c := &column{physical: parquet.Type_BYTE_ARRAY, meaning: texts, file: &File{limits: new(schema.Limits)}}
	c.file.columns = []*column{c}
	c.file.limits[schema.BatchBytes] = 1 << 20
	var rows table.Rows
	rows.Reset(1)
	for n, size := range []int{1, 50_000} {
		word := append(binary.LittleEndian.AppendUint32(nil, uint32(size)), make([]byte, size)...)
		if err := c.values.setDictionary(c, word, 1, parquet.Encoding_PLAIN); err != nil {
			t.Fatal(err)
		}
		if err := c.values.start(c, parquet.Encoding_RLE_DICTIONARY, []byte{0, 0xfe, 0x1f}); err != nil { // of no bit: 0 0 0 …, 2,047 times
			t.Fatal(err)
		}
		err := c.take(&rows, 0, 2000, 2000)
		if limit := (*schema.LimitError)(nil); n == 0 && err != nil || n == 1 && (!errors.As(err, &limit) || limit.Limit != schema.BatchBytes) {
			t.Errorf("words of %d bytes: %v", size, err)
		}
	}
	if n := cap(rows.Cols[0].Strings.Data); n > 2<<20 {
		t.Errorf("%d bytes are taken before the texts are refused", n)
	}
}

// A column with a second dictionary, which no writer makes within a run of rows,
// is spelled out: the rows before keep their texts.
func TestSecondDictionary(t *testing.T) {
	c := &column{physical: parquet.Type_BYTE_ARRAY, meaning: texts, file: &File{limits: new(schema.Limits)}}
	c.file.columns = []*column{c}
	var rows table.Rows
	rows.Reset(1)
	for _, words := range []string{"\x01\x00\x00\x00a\x01\x00\x00\x00b", "\x01\x00\x00\x00c\x02\x00\x00\x00dd"} {
		if err := c.values.setDictionary(c, []byte(words), 2, parquet.Encoding_PLAIN); err != nil {
			t.Fatal(err)
		}
		if err := c.values.start(c, parquet.Encoding_RLE_DICTIONARY, []byte{1, 3, 2}); err != nil { // of one bit: 0 1 0 0 …
			t.Fatal(err)
		}
		if err := c.take(&rows, 0, 3, 3); err != nil {
			t.Fatal(err)
		}
		rows.N += 3
	}
	var got string
	for i := range rows.N {
		got += string(rows.Text(0, i)) + " "
	}
	if got != "a b a c dd c " || c.file.texts < 7 {
		t.Errorf("%s, of %d bytes", got, c.file.texts)
	}
}
