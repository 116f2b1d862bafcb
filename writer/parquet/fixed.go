package parquet

import (
	"encoding/binary"
	"math"
	"slices"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/schema"
)

// smallBytes is how far the page of a column grows before it gets a block:
// most tables are short.
const smallBytes = 16 << 10

// room makes room for n more rows, and returns the presence of each, which a
// column that is never null has not.
func (c *column) room(n int) (present []uint8) {
	if !c.Required {
		row := len(c.present)
		c.present = slices.Grow(c.present, n)[:row+n]
		present = c.present[row:]
	}
	switch size := len(c.body) + n*c.width; {
	case size <= cap(c.body):
	case size <= smallBytes || c.physical == parquet.Type_BOOLEAN:
		c.body = slices.Grow(c.body, n*c.width)
	default:
		c.body = append(c.blocks.take(), c.body...)
	}
	return present
}

// added notes that n rows were added, so many of them with a value.
func (c *column) added(n, values int) {
	c.rows += n
	c.bounds.values += values
	c.bounds.nulls += n - values
}

// The functions of this file append values of fixed width to the page. Each
// returns the index of the value at fault, if it fails.

func (c *column) addFloats(values []float64) (int, error) {
	present := c.room(len(values))
	low, high := math.Inf(1), math.Inf(-1)
	start := len(c.body)
	body, at := c.body[start:start+8*len(values)], 0
	for i, x := range values {
		if x != x {
			if c.Required {
				return i, errNull
			}
			present[i] = 0
			continue
		}
		if !c.Required {
			present[i] = 1
		}
		if x < low {
			low = x
		}
		if x > high {
			high = x
		}
		binary.LittleEndian.PutUint64(body[at:], math.Float64bits(x))
		at += 8
	}
	if math.IsInf(low, -1) || math.IsInf(high, 1) {
		return slices.IndexFunc(values, func(x float64) bool { return math.IsInf(x, 0) }), errNotFinite
	}
	c.body = c.body[:start+at]
	if at > 0 {
		c.bounds.addFloats(low, high)
	}
	c.added(len(values), at/8)
	return 0, nil
}

// addWhole appends integers or dates; none is their null.
func addWhole[T schema.Date | int64](c *column, values []T, none T) (int, error) {
	present := c.room(len(values))
	var low, high T
	n := 0
	for i, x := range values {
		if x == none {
			if c.Required {
				return i, errNull
			}
			present[i] = 0
			continue
		}
		if !c.Required {
			present[i] = 1
		}
		if n == 0 {
			low, high = x, x
		}
		low, high = min(low, x), max(high, x)
		if c.width == 8 {
			c.body = binary.LittleEndian.AppendUint64(c.body, uint64(x))
		} else {
			c.body = binary.LittleEndian.AppendUint32(c.body, uint32(x))
		}
		n++
	}
	if n > 0 {
		c.bounds.addInts(int64(low), int64(high))
	}
	c.added(len(values), n)
	return 0, nil
}

// addBools appends booleans, which are never null, a byte each.
func (c *column) addBools(values []bool) (int, error) {
	present := c.room(len(values))
	for i := range present {
		present[i] = 1
	}
	low, high := byte(1), byte(0)
	for _, x := range values {
		n := byte(0)
		if x {
			n = 1
		}
		low, high = min(low, n), max(high, n)
		c.body = append(c.body, n)
	}
	if len(values) > 0 {
		c.bounds.addInts(int64(low), int64(high))
	}
	c.added(len(values), len(values))
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
