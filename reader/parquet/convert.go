package parquet

import (
	"encoding/binary"
	"encoding/hex"
	"math"
	"math/big"
	"slices"
	"strconv"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/reader/table"
	"nightbook/schema"
)

const fixed = parquet.Type_FIXED_LEN_BYTE_ARRAY

// prepare sets the kind of the vector that the column is read into.
func (c *column) prepare(into *table.Rows, at int) {
	v := &into.Cols[at]
	switch c.meaning {
	case floats:
		v.Kind = schema.KindFloats
	case ints:
		v.Kind = schema.KindInts
	case days:
		v.Kind = schema.KindDates
	default:
		v.Kind = schema.KindStrings
	}
	switch c.meaning {
	case unsigned, decimals:
		into.Cells[at] = alike(table.Number)
	case timestamps:
		if c.utc {
			into.Cells[at] = alike(table.UTC)
		} else {
			into.Cells[at] = alike(table.Date)
		}
	}
}

// alike returns the marks of a run of rows whose cells are all of one kind.
func alike(kind table.Cell) []table.Cell {
	switch kind {
	case table.Number:
		return numbers[:]
	case table.UTC:
		return utcs[:]
	}
	return dates[:]
}

var numbers, dates, utcs = marks(table.Number), marks(table.Date), marks(table.UTC)

func marks(kind table.Cell) (m [schema.BatchRows]table.Cell) {
	for i := range m {
		m[i] = kind
	}
	return m
}

// convert appends the stored values read last to the vector of n rows, nulls
// where there is none.
func (c *column) convert(into *table.Rows, at, n, stored int) {
	v := &into.Cols[at]
	from := &c.values.plain
	switch c.meaning {
	case floats:
		if hasNaN(from.floats) {
			mark(into, at, len(v.Floats), from.floats, c.rows(n, stored), func(x float64) bool { return math.IsNaN(x) })
		}
		v.Floats = stretch(v.Floats, from.floats, c.rows(n, stored), math.NaN())
		return
	case ints:
		if hasNoInt(from.ints) {
			mark(into, at, len(v.Ints), from.ints, c.rows(n, stored), func(x int64) bool { return x == schema.NoInt })
		}
		v.Ints = stretch(v.Ints, from.ints, c.rows(n, stored), schema.NoInt)
		return
	}
	k := 0 // of the stored values
	longest := int(c.file.limits.Of(schema.FieldBytes))
	for _, level := range c.rows(n, stored) {
		switch present := level == 1; c.meaning {
		case days:
			x := schema.NoDate
			if present {
				x = day(from.ints[k])
			}
			v.Dates = append(v.Dates, x)
		case texts:
			var x []byte
			if present {
				if x = from.bytes[k]; len(x) > longest {
					c.file.long, x = append(c.file.long, v.Strings.Len()), nil
				}
				c.file.texts += int64(len(x))
			}
			v.Strings.Append(x)
		default:
			c.clock = c.clock[:0]
			if present {
				c.clock = c.text(c.clock, from, k)
			}
			v.Strings.Append(c.clock)
		}
		k += int(level)
	}
}

// rows returns the levels of the n rows at hand, of which stored have a value.
func (c *column) rows(n, stored int) []uint32 {
	switch {
	case n == 0 || n > schema.BatchRows:
	case stored == n:
		return everyRow[:n]
	case stored == 0:
		return noRow[:n]
	}
	return c.levels
}

// The levels of rows that all have a value, and of rows of which none has.
var (
	everyRow = levelsOf(1)
	noRow    [schema.BatchRows]uint32
)

func levelsOf(level uint32) (l [schema.BatchRows]uint32) {
	for i := range l {
		l[i] = level
	}
	return l
}

// stretch appends the rows with these levels to a vector.
func stretch[T any](to, stored []T, levels []uint32, null T) []T {
	if len(stored) == len(levels) {
		return append(to, stored...)
	}
	n := len(to)
	to = slices.Grow(to, len(levels))[:n+len(levels)]
	spread(to[n:], stored, levels, null)
	return to
}

// mark marks the cells of the rows whose value is odd: it stands for null, and is none.
func mark[T any](into *table.Rows, at, row int, stored []T, levels []uint32, odd func(T) bool) {
	k := 0
	for i, level := range levels {
		if level == 1 && odd(stored[k]) {
			fault(into, at, row+i)
		}
		k += int(level)
	}
}

func hasNaN(s []float64) bool {
	for _, x := range s {
		if x != x {
			return true
		}
	}
	return false
}

func hasNoInt(s []int64) bool { return slices.Contains(s, schema.NoInt) }

// fault marks a cell as a stored NaN or NoInt, which is no null.
func fault(into *table.Rows, at, row int) {
	if into.Cells[at] == nil {
		into.Cells[at] = make([]table.Cell, schema.BatchRows)
	}
	into.Cells[at][row] = table.Fault
}

// day returns a date of days since 1970-01-01. One that a Date cannot hold is
// made the first that no calendar has, so that it is refused and not taken for null.
func day(n int64) schema.Date {
	if n < -math.MaxInt32 || n > math.MaxInt32 {
		return schema.Date(math.MaxInt32)
	}
	return schema.Date(n)
}

// text appends the text of value k of a column whose values are none of
// the vectors' own kinds.
func (c *column) text(b []byte, from *plain, k int) []byte {
	switch c.meaning {
	case bools:
		return strconv.AppendBool(b, from.ints[k] != 0)
	case unsigned:
		if c.physical == parquet.Type_INT32 {
			return strconv.AppendUint(b, uint64(uint32(from.ints[k])), 10)
		}
		return strconv.AppendUint(b, uint64(from.ints[k]), 10)
	case timestamps:
		if c.physical == parquet.Type_INT96 {
			return appendINT96(b, from.bytes[k])
		}
		if t := from.ints[k]; t != c.stamp || len(c.dated) == 0 {
			second := floorDiv(t, c.unit)
			c.stamp, c.dated = t, appendTime(c.dated[:0], second, t-second*c.unit, c.unit, c.utc)
		}
		return append(b, c.dated...)
	case clocks:
		second := floorDiv(from.ints[k], c.unit)
		return appendClock(b, second, from.ints[k]-second*c.unit, c.unit)
	case decimals:
		if c.physical == parquet.Type_BYTE_ARRAY || c.physical == fixed {
			return appendDecimal(b, bigEndian(from.bytes[k]), c.scale)
		}
		var digits [20]byte
		return appendDecimal(b, strconv.AppendInt(digits[:0], from.ints[k], 10), c.scale)
	}
	// A UUID: 8-4-4-4-12 hexadecimal digits.
	u := from.bytes[k]
	for i := range u {
		if i == 4 || i == 6 || i == 8 || i == 10 {
			b = append(b, '-')
		}
		b = hex.AppendEncode(b, u[i:i+1])
	}
	return b
}

// appendTime appends a second since 1970, and a part of it in units of which
// unit make one, as a date, with a time of day behind it unless it is midnight.
// A time of UTC ends with a Z, and has a time of day always.
func appendTime(b []byte, second, part, unit int64, utc bool) []byte {
	d := floorDiv(second, 24*60*60)
	b = day(d).AppendDate(b)
	if second -= d * 24 * 60 * 60; second != 0 || part != 0 || utc {
		b = appendClock(append(b, 'T'), second, part, unit)
	}
	if utc {
		b = append(b, 'Z')
	}
	return b
}

// appendClock appends a second of the day and a part of it as HH:MM, with :SS
// and a fraction where they are not 0.
func appendClock(b []byte, second, part, unit int64) []byte {
	if second < 0 || second >= 24*60*60 {
		return append(b, "beyond a day"...)
	}
	two := func(n int64) { b = append(b, byte('0'+n/10), byte('0'+n%10)) }
	two(second / 3600)
	b = append(b, ':')
	two(second / 60 % 60)
	if second%60 == 0 && part == 0 {
		return b
	}
	b = append(b, ':')
	two(second % 60)
	if part == 0 {
		return b
	}
	b = append(b, '.')
	for ; part != 0; part %= unit {
		unit /= 10
		b = append(b, byte('0'+part/unit))
	}
	return b
}

// appendINT96 appends the older form of a time: nanoseconds of the day and the
// Julian day number.
func appendINT96(b, v []byte) []byte {
	const epoch = 2440588 // Julian day number of 1970-01-01
	nanos := int64(binary.LittleEndian.Uint64(v))
	days := int64(binary.LittleEndian.Uint32(v[8:])) - epoch
	second := floorDiv(nanos, 1e9)
	return appendTime(b, days*24*60*60+second, nanos-second*1e9, 1e9, true)
}

func floorDiv(a, b int64) int64 {
	q := a / b
	if a%b < 0 {
		q--
	}
	return q
}

// bigEndian returns a two's complement number as decimal digits. No decimal
// has more than 76 digits: a longer value is not worth the work of writing it out.
func bigEndian(v []byte) []byte {
	if len(v) > 64 {
		return []byte("beyond a decimal")
	}
	x := new(big.Int).SetBytes(v)
	if len(v) > 0 && v[0] >= 0x80 {
		x.Sub(x, new(big.Int).Lsh(big.NewInt(1), uint(8*len(v))))
	}
	return x.Append(nil, 10)
}

// appendDecimal puts the point into a whole number, scale digits from its end.
func appendDecimal(b, digits []byte, scale int) []byte {
	if digits[0] == '-' {
		b = append(b, '-')
		digits = digits[1:]
	}
	if scale == 0 {
		return append(b, digits...)
	}
	whole := len(digits) - scale
	if whole <= 0 {
		b = append(b, '0')
	} else {
		b = append(b, digits[:whole]...)
	}
	b = append(b, '.')
	for ; whole < 0; whole++ {
		b = append(b, '0')
	}
	return append(b, digits[whole:]...)
}
