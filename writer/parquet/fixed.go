package parquet

import (
	"encoding/binary"
	"math"
	"slices"

	"nightbook/schema"
)

// smallBytes is how far the page of a column grows before it gets a block:
// most tables are short.
const smallBytes = 16 << 10

// reserve makes room for so many bytes of numbers in the page.
func (c *column) reserve(bytes int) {
	switch size := len(c.body) + bytes; {
	case size <= cap(c.body):
	case size <= smallBytes:
		c.body = slices.Grow(c.body, bytes)
	default:
		c.body = append(c.blocks.take(), c.body...)
	}
}

// indexing is whether numbers go through the dictionary as they come. Those of
// a chunk's first page do not: it is they that settle whether there is one.
func (c *column) indexing() bool { return c.numbers.had > 0 && !c.numbers.off }

// room is memory for n numbers, which addNumbers takes: that of the page itself
// if they go there.
func (c *column) room(n int, s *scratch) []byte {
	n *= c.width
	if c.indexing() {
		s.numbers = slices.Grow(s.numbers[:0], n)
		return s.numbers[:n]
	}
	c.reserve(n)
	return c.body[len(c.body) : len(c.body)+n]
}

// addNumbers appends the numbers that the room begins with.
func (c *column) addNumbers(numbers []byte) {
	if !c.indexing() {
		c.body = c.body[:len(c.body)+len(numbers)]
		return
	}
	c.growIndices(len(numbers) / c.width)
	var n int
	if c.indices, n = c.numbers.index(c.indices, numbers, c.width, mostNumbers); n < len(numbers) {
		c.leaveDictionary()
		c.reserve(len(numbers) - n)
		c.body = append(c.body, numbers[n:]...)
	}
}

// growIndices makes room for n more indices in the page.
func (c *column) growIndices(n int) {
	if size := len(c.indices) + n; size > cap(c.indices) {
		if len(c.indices) > 0 {
			size = pageRows // there are more to come
		}
		c.indices = append(make([]uint32, 0, size), c.indices...)
	}
}

// enterDictionary turns the numbers of a chunk's first page into indices, if they
// are repeated enough for the chunk to have a dictionary.
func (c *column) enterDictionary(s *scratch) {
	var ok bool
	if s.indices, ok = s.trial.try(s.indices[:0], c.body, c.width); !ok {
		c.numbers.off = true
		return
	}
	c.numbers.take(&s.trial)
	c.growIndices(len(s.indices))
	c.indices = append(c.indices, s.indices...)
	c.blocks.give([][]byte{c.body})
	c.body = nil
}

// leaveDictionary turns the indices of the page into the numbers they stand for,
// and has those to come follow them.
func (c *column) leaveDictionary() {
	c.reserve(len(c.indices) * c.width)
	c.body = c.numbers.appendValues(c.body, c.indices, c.width)
	c.indices = c.indices[:0]
	c.numbers.giveUp()
}

// The functions of this file append values of fixed width to the page. Each
// returns the index of the value at fault, if it fails.

func (c *column) addFloats(values []float64, s *scratch) (int, error) {
	low, high, nulls := rangeOf(values)
	if math.IsInf(low, -1) || math.IsInf(high, 1) {
		return slices.IndexFunc(values, func(x float64) bool { return math.IsInf(x, 0) }), errNotFinite
	}
	switch {
	case nulls > 0 && c.Required:
		return slices.IndexFunc(values, func(x float64) bool { return x != x }), errNull
	case nulls == len(values):
		c.present.addNulls(nulls)
		return 0, nil
	}
	c.bounds.addFloats(low, high)
	numbers := c.room(len(values), s)
	if nulls == 0 {
		c.present.addValues(len(values))
		putFloats(numbers, values)
	} else {
		numbers = numbers[:c.putPresent(numbers, values)]
	}
	c.addNumbers(numbers)
	return 0, nil
}

// rangeOfGeneric returns the smallest and the largest of values, of zeros either,
// and how many are null; if all are, the smallest is above the largest.
func rangeOfGeneric(values []float64) (low, high float64, nulls int) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, x := range values {
		if x >= low && x <= high {
			continue
		}
		if x != x {
			nulls++
			continue
		}
		low, high = min(low, x), max(high, x)
	}
	return low, high, nulls
}

// putFloats puts values to the start of dst.
func putFloats(dst []byte, values []float64) {
	for len(values) >= 4 && len(dst) >= 32 {
		binary.LittleEndian.PutUint64(dst, math.Float64bits(values[0]))
		binary.LittleEndian.PutUint64(dst[8:], math.Float64bits(values[1]))
		binary.LittleEndian.PutUint64(dst[16:], math.Float64bits(values[2]))
		binary.LittleEndian.PutUint64(dst[24:], math.Float64bits(values[3]))
		dst, values = dst[32:], values[4:]
	}
	for i, x := range values {
		binary.LittleEndian.PutUint64(dst[8*i:], math.Float64bits(x))
	}
}

// putPresent puts those of values that are not null to the start of dst, notes
// which they are, and returns how many bytes they take.
func (c *column) putPresent(dst []byte, values []float64) int {
	const infinity = 0x7ff << 52
	at := 0
	for len(values) > 0 {
		part := values[:min(64, len(values))]
		var mask uint64
		for i, x := range part {
			b := math.Float64bits(x)
			binary.LittleEndian.PutUint64(dst[at:], b)
			is := (b<<1>>1 - infinity - 1) >> 63 // 1 unless x is NaN
			mask |= is << i
			at += int(8 * is)
		}
		c.present.add(mask, len(part))
		values = values[len(part):]
	}
	return at
}

// addWhole appends integers or dates; none is their null.
func addWhole[T schema.Date | int64](c *column, values []T, none T, s *scratch) (int, error) {
	var low, high T
	n := 0
	numbers := c.room(len(values), s)
	at := 0
	for from := 0; from < len(values); from += 64 {
		part := values[from:min(from+64, len(values))]
		var mask uint64
		for i, x := range part {
			if x == none {
				if c.Required {
					return from + i, errNull
				}
				continue
			}
			mask |= 1 << i
			if n == 0 {
				low, high = x, x
			}
			low, high = min(low, x), max(high, x)
			n++
			if c.width == 8 {
				binary.LittleEndian.PutUint64(numbers[at:], uint64(x))
			} else {
				binary.LittleEndian.PutUint32(numbers[at:], uint32(x))
			}
			at += c.width
		}
		c.present.add(mask, len(part))
	}
	if n > 0 {
		c.bounds.addInts(int64(low), int64(high))
		c.addNumbers(numbers[:at])
	}
	return 0, nil
}

// addBools appends booleans, which are never null, a byte each.
func (c *column) addBools(values []bool) {
	low, high := byte(1), byte(0)
	for _, x := range values {
		n := byte(0)
		if x {
			n = 1
		}
		low, high = low&n, high|n
		c.body = append(c.body, n)
	}
	c.bounds.addInts(int64(low), int64(high))
	c.present.addValues(len(values))
}

// appendBits packs bytes of 0 and 1 into bits, the first into the lowest.
func appendBits(dst, bits []byte) []byte {
	for ; len(bits) >= 8; bits = bits[8:] {
		// Each product of a byte and a bit of the factor that lands in the
		// highest byte lands on a bit of its own, and nothing carries.
		dst = append(dst, byte(binary.LittleEndian.Uint64(bits)*0x0102040810204080>>56))
	}
	if len(bits) > 0 {
		var packed byte
		for i, b := range bits {
			packed |= b << i
		}
		dst = append(dst, packed)
	}
	return dst
}
