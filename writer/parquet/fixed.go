package parquet

import (
	"encoding/binary"
	"math"

	"nightbook/schema"
)

// The functions of this file append values of fixed width to the page. Each
// returns the index of the value at fault, if it fails.

func (c *column) addFloats(values []float64) (int, error) {
	b := &c.bounds
	for i, x := range values {
		if x-x != 0 {
			if x == x {
				return i, errNotFinite
			}
			if err := c.null(); err != nil {
				return i, err
			}
			continue
		}
		c.value()
		c.body = binary.LittleEndian.AppendUint64(c.body, math.Float64bits(x))
		if b.values == 0 {
			b.minFloat, b.maxFloat = x, x
		}
		b.minFloat, b.maxFloat = min(b.minFloat, x), max(b.maxFloat, x)
		b.values++
	}
	return 0, nil
}

func (c *column) addInts(values []int64) (int, error) {
	for i, x := range values {
		if x == schema.NoInt {
			if err := c.null(); err != nil {
				return i, err
			}
			continue
		}
		c.value()
		c.body = binary.LittleEndian.AppendUint64(c.body, uint64(x))
		c.bounds.addInt(x)
	}
	return 0, nil
}

func (c *column) addDates(values []schema.Date) (int, error) {
	for i, d := range values {
		if d == schema.NoDate {
			if err := c.null(); err != nil {
				return i, err
			}
			continue
		}
		c.value()
		c.body = binary.LittleEndian.AppendUint32(c.body, uint32(d))
		c.bounds.addInt(int64(d))
	}
	return 0, nil
}

// addBools appends booleans, which are never null, a byte each.
func (c *column) addBools(values []bool) (int, error) {
	for _, x := range values {
		c.value()
		var n byte
		if x {
			n = 1
		}
		c.body = append(c.body, n)
		c.bounds.addInt(int64(n))
	}
	return 0, nil
}

// appendBits packs bytes of 0 and 1 into bits, the first into the lowest.
func appendBits(dst, bits []byte) []byte {
	for len(bits) > 0 {
		var packed byte
		n := min(8, len(bits))
		for i, b := range bits[:n] {
			packed |= b << i
		}
		dst, bits = append(dst, packed), bits[n:]
	}
	return dst
}
