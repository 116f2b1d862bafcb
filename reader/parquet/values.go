package parquet

import (
	"encoding/binary"
	"fmt"
	"math"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/schema"
)

// values decodes the stored values of a column, page by page. What has been
// read last stands in one of ints, floats and bytes, as the physical type says:
// booleans and integers, floats, texts and twelve-byte times.
type values struct {
	encoding parquet.Encoding
	data     []byte // of the page, not yet read
	bit      int    // of data[0], of plain booleans
	indices  hybrid
	delta    delta
	lengths  delta // of the texts not yet read
	prefixes delta
	last     []byte // the text before, of which prefixes are taken
	arena    []byte // memory of texts that are put together
	count    int    // values of a byte-stream-split page, and how many are read
	done     int

	dictionary dictionary
	at         []uint32 // places in it
	plain
}

// plain are decoded values.
type plain struct {
	ints   []int64
	floats []float64
	bytes  [][]byte
}

func (c *column) tooShort() error { return damaged("a page has fewer values than its header says") }

// start begins with the values of a page.
func (v *values) start(c *column, e parquet.Encoding, data []byte) error {
	v.encoding, v.data, v.bit = e, data, 0
	switch e {
	case parquet.Encoding_PLAIN:
		return nil
	case parquet.Encoding_PLAIN_DICTIONARY, parquet.Encoding_RLE_DICTIONARY:
		v.encoding = parquet.Encoding_RLE_DICTIONARY
		if len(data) == 0 { // a page of nulls
			v.indices.reset(nil, 0)
			return nil
		}
		if data[0] > 32 {
			return damaged("indices of %d bits", data[0])
		}
		v.indices.reset(data[1:], int(data[0]))
		return nil
	case parquet.Encoding_RLE:
		if c.physical != parquet.Type_BOOLEAN || len(data) < 4 {
			break
		}
		v.indices.reset(data[4:], 1)
		return nil
	case parquet.Encoding_BYTE_STREAM_SPLIT:
		if w := c.width(); w > 0 {
			v.count, v.done = len(data)/w, 0
			return nil
		}
	case parquet.Encoding_DELTA_BINARY_PACKED:
		if c.physical == parquet.Type_INT32 || c.physical == parquet.Type_INT64 {
			return v.delta.start(data)
		}
	case parquet.Encoding_DELTA_LENGTH_BYTE_ARRAY:
		if c.physical == parquet.Type_BYTE_ARRAY {
			return v.startLengths(data)
		}
	case parquet.Encoding_DELTA_BYTE_ARRAY:
		if c.physical == parquet.Type_BYTE_ARRAY || c.physical == parquet.Type_FIXED_LEN_BYTE_ARRAY {
			return v.startPrefixes(data)
		}
	}
	return fmt.Errorf("%s in the encoding %s is not read: write the column in another, such as PLAIN", c.physical, encodingName(e))
}

// encodingName names an encoding, one that came after this reader by its number.
func encodingName(e parquet.Encoding) string {
	if name := e.String(); name != "<UNSET>" {
		return name
	}
	return fmt.Sprintf("number %d of the format", int64(e))
}

// width returns the bytes of a value of fixed width; 0 is that it has none.
func (c *column) width() int {
	switch c.physical {
	case parquet.Type_INT32, parquet.Type_FLOAT:
		return 4
	case parquet.Type_INT64, parquet.Type_DOUBLE:
		return 8
	case parquet.Type_INT96:
		return 12
	case parquet.Type_FIXED_LEN_BYTE_ARRAY:
		return c.length
	}
	return 0
}

// read decodes the next n values.
func (v *values) read(c *column, n int) (err error) {
	switch v.encoding {
	case parquet.Encoding_PLAIN:
		if c.physical == parquet.Type_BOOLEAN {
			return v.readBits(c, n)
		}
		v.data, err = v.plain.read(c, v.data, n)
		return err
	case parquet.Encoding_RLE_DICTIONARY:
		return v.readIndices(n)
	case parquet.Encoding_RLE:
		bits, err := v.indices.next(n)
		v.ints = resized(v.ints, n)
		for i, b := range bits {
			v.ints[i] = int64(b)
		}
		return err
	case parquet.Encoding_BYTE_STREAM_SPLIT:
		return v.readSplit(c, n)
	case parquet.Encoding_DELTA_BINARY_PACKED:
		v.ints, err = v.delta.next(v.ints[:0], n)
		if c.physical == parquet.Type_INT32 { // its differences wrap around at 32 bits
			for i, x := range v.ints {
				v.ints[i] = int64(int32(x))
			}
		}
		return err
	case parquet.Encoding_DELTA_LENGTH_BYTE_ARRAY:
		return v.readLengths(n)
	}
	return v.readPrefixes(c, n)
}

// readBits reads plain booleans: a bit each.
func (v *values) readBits(c *column, n int) error {
	if v.bit+n > 8*len(v.data) {
		return c.tooShort()
	}
	v.ints = resized(v.ints, n)
	for i := range v.ints {
		v.ints[i] = int64(v.data[v.bit>>3] >> (v.bit & 7) & 1)
		v.bit++
	}
	return nil
}

// readSplit reads values whose first bytes stand together, then their second, …
func (v *values) readSplit(c *column, n int) error {
	if v.done+n > v.count {
		return c.tooShort()
	}
	w := c.width()
	v.arena = v.arena[:0]
	for i := v.done; i < v.done+n; i++ {
		for k := range w {
			v.arena = append(v.arena, v.data[k*v.count+i])
		}
	}
	v.done += n
	_, err := v.plain.read(c, v.arena, n)
	return err
}

// read decodes n plain values and returns the bytes behind them. Texts are
// parts of data.
func (p *plain) read(c *column, data []byte, n int) (rest []byte, err error) {
	p.ints, p.floats, p.bytes = p.ints[:0], p.floats[:0], p.bytes[:0]
	if c.physical == parquet.Type_BYTE_ARRAY {
		for range n {
			size, err := textAt(c, data)
			if err != nil {
				return nil, err
			}
			p.bytes = append(p.bytes, data[4:4+size])
			data = data[4+size:]
		}
		return data, nil
	}
	w := c.width()
	if w == 0 || n > len(data)/w {
		return nil, c.tooShort()
	}
	switch c.physical {
	case parquet.Type_INT32:
		p.ints = resized(p.ints, n)
		for i := range p.ints {
			p.ints[i] = int64(int32(binary.LittleEndian.Uint32(data[4*i:])))
		}
	case parquet.Type_INT64:
		p.ints = resized(p.ints, n)
		for i := range p.ints {
			p.ints[i] = int64(binary.LittleEndian.Uint64(data[8*i:]))
		}
	case parquet.Type_FLOAT:
		p.floats = resized(p.floats, n)
		for i := range p.floats {
			p.floats[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(data[4*i:])))
		}
	case parquet.Type_DOUBLE:
		p.floats = resized(p.floats, n)
		for i := range p.floats {
			p.floats[i] = math.Float64frombits(binary.LittleEndian.Uint64(data[8*i:]))
		}
	default:
		for at := data; n > 0; n-- {
			p.bytes = append(p.bytes, at[:w])
			at = at[w:]
		}
		n = len(p.bytes)
	}
	return data[n*w:], nil
}

// resized returns s with n elements of no value in particular, in its memory if
// that has room.
func resized[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n, max(n, schema.BatchRows+1))
	}
	return s[:n]
}
