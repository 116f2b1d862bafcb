package parquet

import (
	"bytes"
	"encoding/binary"
	"slices"
	"testing"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/reader/table"
	"nightbook/schema"
)

// Each part of the format is fuzzed by itself: in whole files, changes seldom
// come past the footer.

func FuzzParquet(f *testing.F) {
	for _, name := range append([]string{"list", "empty", "time"}, packed...) {
		f.Add(readFile(f, name+".parquet"))
	}
	f.Fuzz(func(t *testing.T, b []byte) {
		r, size := bytes.NewReader(b), int64(len(b))
		_, rows, err := rendered(r, size)
		if err != nil {
			return
		}
		// What can be read, the headers of its pages tell of.
		p, err := Open(r, size, schema.Limits{})
		if err != nil {
			t.Fatal(err)
		}
		if reading, kept, err := p.Memory(); err != nil || len(rows) > 0 && reading < codecBytes || kept < 0 {
			t.Fatalf("reading takes %d, a run %d: %v", reading, kept, err)
		}
	})
}

// FuzzFooter changes the footer of a file whose pages are in order.
func FuzzFooter(f *testing.F) {
	whole := readFile(f, "lz4-delta.parquet")
	n := int(binary.LittleEndian.Uint32(whole[len(whole)-8:]))
	pages := whole[:len(whole)-8-n]
	f.Add(whole[len(pages) : len(whole)-8])
	f.Fuzz(func(t *testing.T, footer []byte) {
		b := append(bytes.Clone(pages), footer...)
		b = append(binary.LittleEndian.AppendUint32(b, uint32(len(footer))), magic...)
		_, rows, err := rendered(bytes.NewReader(b), int64(len(b)))
		if err == nil && len(rows) > 1<<20 {
			t.Fatalf("%d rows of a file of %d bytes", len(rows), len(b))
		}
	})
}

// FuzzHybrid reads levels and indices of any width.
func FuzzHybrid(f *testing.F) {
	f.Add([]byte{8, 1, 3, 0x55}, 1, 12)                  // a run of four, a group of eight
	f.Add([]byte{3, 0x88, 0xc6, 0xfa, 0x80, 0x01}, 3, 8) // 0 1 2 3 4 5 6 7, as the format's description packs them, and a run of 64
	f.Add([]byte{0xff, 0xff, 0xff, 0xff, 0x0f}, 32, 100)
	f.Fuzz(func(t *testing.T, b []byte, width, n int) {
		if width < 0 || width > 32 || n < 0 || n > 1<<16 {
			return
		}
		var h hybrid
		h.reset(b, width)
		whole, err := h.next(n)
		if err == nil && len(whole) != n {
			t.Fatalf("%d values, want %d", len(whole), n)
		}
		if err != nil {
			return
		}
		whole = slices.Clone(whole)
		h.reset(b, width)
		for i, want := range whole { // one at a time gives the same
			one, err := h.next(1)
			if err != nil || one[0] != want || width < 32 && one[0]>>width != 0 {
				t.Fatalf("value %d is %v, %v, want %d", i, one, err, want)
			}
		}
	})
}

// FuzzDelta reads delta-coded integers, and finds their end without reading them.
func FuzzDelta(f *testing.F) {
	// 1 2 3 4 5 and 7 5 3 1 2 3 4 5: the examples of the format's description.
	f.Add([]byte{0x80, 0x01, 0x04, 0x05, 0x02, 0x02, 0, 0, 0, 0})
	f.Add([]byte{0x80, 0x01, 0x04, 0x08, 0x0e, 0x03, 0x02, 0, 0, 0, 0xc0, 0x3f, 0, 0, 0, 0, 0, 0})
	f.Fuzz(func(t *testing.T, b []byte) {
		var d delta
		if d.start(b) != nil || d.left > 1<<20 {
			return
		}
		rest, skipErr := d.rest()
		n := d.left
		values, err := d.next(nil, n)
		if (err == nil) != (skipErr == nil) {
			t.Fatalf("read: %v; skipped: %v", err, skipErr)
		}
		if err == nil && (len(values) != n || !bytes.Equal(rest, d.b)) {
			t.Fatalf("%d values of %d, %d bytes behind them, %d where they were skipped", len(values), n, len(d.b), len(rest))
		}
	})
}

// FuzzValues reads the values of a page of any type, in any encoding, with any
// dictionary, and shows them.
func FuzzValues(f *testing.F) {
	f.Add(int64(parquet.Type_DOUBLE), int64(parquet.Encoding_PLAIN), byte(0), []byte("eightbyteightbyt"), []byte(nil), 2)
	f.Add(int64(parquet.Type_BYTE_ARRAY), int64(parquet.Encoding_RLE_DICTIONARY), byte(0), []byte{1, 8, 1}, []byte("\x01\x00\x00\x00a\x01\x00\x00\x00b"), 4)
	f.Add(int64(parquet.Type_BYTE_ARRAY), int64(parquet.Encoding_DELTA_BYTE_ARRAY), byte(0), []byte{0x80, 1, 4, 2, 0, 0, 0, 0, 0, 0, 0x80, 1, 4, 2, 2, 0, 0, 0, 0, 0, 'a', 'b'}, []byte(nil), 2)
	f.Add(int64(parquet.Type_FIXED_LEN_BYTE_ARRAY), int64(parquet.Encoding_BYTE_STREAM_SPLIT), byte(1), []byte("abcdefgh"), []byte(nil), 2)
	f.Add(int64(parquet.Type_INT96), int64(parquet.Encoding_PLAIN), byte(3), []byte("twelve bytes"), []byte(nil), 1)
	f.Add(int64(parquet.Type_INT64), int64(parquet.Encoding_DELTA_BINARY_PACKED), byte(3), []byte{0x80, 0x01, 0x04, 0x05, 0x02, 0x02, 0, 0, 0, 0}, []byte(nil), 5)
	f.Add(int64(parquet.Type_BOOLEAN), int64(parquet.Encoding_RLE), byte(0), []byte{2, 0, 0, 0, 8, 1}, []byte(nil), 4)
	f.Fuzz(func(t *testing.T, physical, encoding int64, sort byte, page, dictionary []byte, n int) {
		if physical < 0 || physical > 7 || n < 0 || n > schema.BatchRows {
			return
		}
		c := &column{name: "x", physical: parquet.Type(physical), file: &File{limits: &schema.Limits{}}}
		c.file.columns = []*column{c}
		e := &parquet.SchemaElement{Name: "x", Type: &c.physical}
		if c.physical == fixed {
			c.length = 1 + int(sort>>3)
			length := int32(c.length)
			e.TypeLength = &length
		}
		scale, converted := int32(sort>>4), parquet.ConvertedType(-1)
		switch sort & 7 {
		case 1:
			converted = parquet.ConvertedType_DECIMAL
		case 2:
			converted = parquet.ConvertedType_DATE
		case 3:
			converted = parquet.ConvertedType_TIMESTAMP_MICROS
		case 4:
			converted = parquet.ConvertedType_UINT_64
		case 5:
			converted = parquet.ConvertedType_TIME_MILLIS
		}
		if converted >= 0 {
			e.ConvertedType, e.Scale = &converted, &scale
		}
		if !c.classify(e) {
			return
		}
		if len(dictionary) > 0 && c.values.setDictionary(c, dictionary, min(len(dictionary)/4, 100), parquet.Encoding_PLAIN) != nil {
			return
		}
		if c.values.start(c, parquet.Encoding(encoding), page) != nil {
			return
		}
		var rows table.Rows
		rows.Reset(1)
		c.prepare(&rows, 0)
		rows.N = n
		if n == 0 || c.take(&rows, 0, n, n) != nil {
			return
		}
		for i := range n {
			rows.AppendText(nil, 0, i)
		}
	})
}

// FuzzUnpack unpacks pages of every codec into the size they claim.
func FuzzUnpack(f *testing.F) {
	f.Add(int64(parquet.CompressionCodec_SNAPPY), []byte("\x05\x10hello"), 5)
	f.Add(int64(parquet.CompressionCodec_LZ4_RAW), []byte("\x50hello"), 5)
	f.Add(int64(parquet.CompressionCodec_ZSTD), []byte("\x28\xb5\x2f\xfd\x20\x05\x29\x00\x00hello"), 5)
	f.Add(int64(parquet.CompressionCodec_GZIP), []byte("\x1f\x8b\x08\x00\x00\x00\x00\x00\x00\xff\xcaH\xcd\xc9\xc9\x07\x04\x00\x00\xff\xff\x86\xa6\x106\x05\x00\x00\x00"), 5)
	f.Fuzz(func(t *testing.T, codec int64, packed []byte, size int) {
		if size < 0 || size > 1<<20 {
			return
		}
		var u unpacker
		data, err := u.page(parquet.CompressionCodec(codec), packed, size, nil)
		if err == nil && len(data) != size {
			t.Fatalf("%d bytes, want %d", len(data), size)
		}
	})
}

// The seeds above are what they say they are.
func TestUnpack(t *testing.T) {
	for codec, packed := range map[parquet.CompressionCodec]string{
		parquet.CompressionCodec_UNCOMPRESSED: "hello",
		parquet.CompressionCodec_SNAPPY:       "\x05\x10hello",
		parquet.CompressionCodec_LZ4_RAW:      "\x50hello",
		parquet.CompressionCodec_ZSTD:         "\x28\xb5\x2f\xfd\x20\x05\x29\x00\x00hello",
		parquet.CompressionCodec_GZIP:         "\x1f\x8b\x08\x00\x00\x00\x00\x00\x00\xff\xcaH\xcd\xc9\xc9\x07\x04\x00\x00\xff\xff\x86\xa6\x106\x05\x00\x00\x00",
	} {
		var u unpacker
		for _, size := range []int{5, 4, 6, 0, 1 << 20} { // a size that lies is found out
			data, err := u.page(codec, []byte(packed), size, nil)
			if (err == nil) != (size == 5) || err == nil && string(data) != "hello" {
				t.Errorf("%s to %d bytes: %q %v", codec, size, data, err)
			}
		}
		if _, err := u.page(codec, []byte(packed)[:len(packed)-1], 5, nil); err == nil {
			t.Errorf("%s cut short unpacks", codec)
		}
	}
}
