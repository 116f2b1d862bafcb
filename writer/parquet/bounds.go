package parquet

import (
	"bytes"
	"encoding/binary"
	"math"

	"github.com/xitongsys/parquet-go/parquet"
)

// maxTextBound is the length beyond which a text is not given as a bound: a
// shortened one would not be the smallest or largest value any more.
const maxTextBound = 256

// bounds are the smallest and largest of a page's values so far, in the fields
// of the column's type.
type bounds struct {
	values, nulls      int  // counted when the page ends
	any                bool // whether there are values
	minFloat, maxFloat float64
	minInt, maxInt     int64 // also dates and booleans
	minText, maxText   []byte
}

func (b *bounds) reset() { *b = bounds{} }

// addFloats takes into account values that lie from low to high and reach both.
func (b *bounds) addFloats(low, high float64) {
	if !b.any {
		b.any, b.minFloat, b.maxFloat = true, low, high
	}
	b.minFloat, b.maxFloat = min(b.minFloat, low), max(b.maxFloat, high)
}

// addInts is addFloats for integers.
func (b *bounds) addInts(low, high int64) {
	if !b.any {
		b.any, b.minInt, b.maxInt = true, low, high
	}
	b.minInt, b.maxInt = min(b.minInt, low), max(b.maxInt, high)
}

// addText takes a text into account, and keeps it. Texts are ordered by their bytes.
func (b *bounds) addText(text []byte) {
	switch {
	case !b.any:
		b.any, b.minText, b.maxText = true, text, text
	case bytes.Compare(text, b.maxText) > 0:
		b.maxText = text
	case bytes.Compare(text, b.minText) < 0:
		b.minText = text
	}
}

// encodedBounds are bounds as the file holds them.
type encodedBounds struct {
	values, nulls int
	known         bool // whether min and max are given
	min, max      []byte
}

func (b *bounds) encoded(t parquet.Type) encodedBounds {
	e := encodedBounds{values: b.values, nulls: b.nulls, known: b.values > 0}
	if b.values == 0 {
		return e
	}
	switch t {
	case parquet.Type_DOUBLE:
		low, high := b.minFloat, b.maxFloat
		// The format wants zeros so that a reader which tells -0 from +0 skips
		// no page that holds the other.
		if low == 0 {
			low = math.Copysign(0, -1)
		}
		if high == 0 {
			high = 0
		}
		e.min, e.max = encodeUint64(math.Float64bits(low)), encodeUint64(math.Float64bits(high))
	case parquet.Type_INT64:
		e.min, e.max = encodeUint64(uint64(b.minInt)), encodeUint64(uint64(b.maxInt))
	case parquet.Type_INT32:
		e.min = binary.LittleEndian.AppendUint32(nil, uint32(b.minInt))
		e.max = binary.LittleEndian.AppendUint32(nil, uint32(b.maxInt))
	case parquet.Type_BOOLEAN:
		e.min, e.max = []byte{byte(b.minInt)}, []byte{byte(b.maxInt)}
	default:
		e.known = len(b.minText) <= maxTextBound && len(b.maxText) <= maxTextBound
		if e.known {
			e.min, e.max = bytes.Clone(b.minText), bytes.Clone(b.maxText)
		}
	}
	return e
}

// merge widens e, which are the bounds of some pages, by those of another.
func (e *encodedBounds) merge(page encodedBounds, t parquet.Type) {
	switch {
	case page.values == 0:
	case e.values == 0:
		e.known, e.min, e.max = page.known, page.min, page.max
	case !e.known || !page.known:
		e.known, e.min, e.max = false, nil, nil
	default:
		if less(t, page.min, e.min) {
			e.min = page.min
		}
		if less(t, e.max, page.max) {
			e.max = page.max
		}
	}
	e.values += page.values
	e.nulls += page.nulls
}

// less compares two encoded values of a type.
func less(t parquet.Type, a, b []byte) bool {
	switch t {
	case parquet.Type_DOUBLE:
		return decodeFloat(a) < decodeFloat(b)
	case parquet.Type_INT64:
		return int64(binary.LittleEndian.Uint64(a)) < int64(binary.LittleEndian.Uint64(b))
	case parquet.Type_INT32:
		return int32(binary.LittleEndian.Uint32(a)) < int32(binary.LittleEndian.Uint32(b))
	}
	return bytes.Compare(a, b) < 0
}

func (e *encodedBounds) statistics() *parquet.Statistics {
	nulls := int64(e.nulls)
	s := &parquet.Statistics{NullCount: &nulls}
	if e.known {
		s.MinValue, s.MaxValue = e.min, e.max
	}
	return s
}

func encodeUint64(x uint64) []byte { return binary.LittleEndian.AppendUint64(nil, x) }

func decodeFloat(b []byte) float64 { return math.Float64frombits(binary.LittleEndian.Uint64(b)) }
