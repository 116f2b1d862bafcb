package interop

import (
	"encoding/binary"
	"fmt"
	"math"
	"math/big"
	"strconv"
	"time"

	"github.com/apache/arrow-go/v18/parquet"
	"github.com/apache/arrow-go/v18/parquet/schema"
)

// kind is a type of column: how the library declares it, and value i of it, as
// the library stores it and as the reader is to show it.
type kind struct {
	name     string
	physical parquet.Type
	logical  schema.LogicalType
	length   int
	value    func(i int) any
	text     func(i int) string
}

const (
	micro = schema.TimeUnitMicros
	milli = schema.TimeUnitMillis
	nano  = schema.TimeUnitNanos
)

// spread is an integer of all sizes and both signs.
func spread(i int) int64 {
	x := int64(i)*0x1E3779B97F4A7C15>>(i%60) ^ int64(i)
	if i%11 == 0 {
		return int64(i % 7) // runs of like values, too
	}
	return x
}

func double(i int) float64 {
	switch i % 9 {
	case 0:
		return math.Copysign(0, -1)
	case 1:
		return math.SmallestNonzeroFloat64 * float64(i)
	case 2:
		return math.MaxFloat64 / float64(i)
	}
	return float64(spread(i)) / 1024
}

func text(i int) string {
	return []string{"", "north", "a \"quoted\", one", "ä€𝄞", "line\nend", "prefix shared by many " + strconv.Itoa(i/5)}[i%6] + strconv.Itoa(i%13)
}

// clock writes a time as the reader is to show it, by the standard library.
func clock(t time.Time, utc bool) string {
	t = t.UTC()
	layout := "2006-01-02"
	switch {
	case t.Nanosecond() != 0:
		layout += "T15:04:05.999999999"
	case t.Second() != 0:
		layout += "T15:04:05"
	case utc || t.Hour() != 0 || t.Minute() != 0:
		layout += "T15:04"
	}
	if utc {
		layout += "Z"
	}
	return t.Format(layout)
}

// instant is a time between 1970 ± some centuries, often without a part of a day.
func instant(i int, unit time.Duration) time.Time {
	seconds := (spread(i)%4_000_000_000 + 4_000_000_000) % 4_000_000_000
	switch i % 3 {
	case 0:
		seconds -= seconds % 86400
	case 1:
		seconds -= seconds % 60
	}
	return time.Unix(seconds-2_000_000_000, int64(i%4)*int64(unit)%1e9)
}

func decimalText(x *big.Int, scale int) string {
	r := new(big.Rat).SetFrac(x, new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(scale)), nil))
	return r.FloatString(scale)
}

// twos is x as n bytes of two's complement, the highest first.
func twos(x *big.Int, n int) []byte {
	if x.Sign() < 0 {
		x = new(big.Int).Add(x, new(big.Int).Lsh(big.NewInt(1), uint(8*n)))
	}
	return x.FillBytes(make([]byte, n))
}

func wide(i int) *big.Int {
	return new(big.Int).Mul(big.NewInt(spread(i)), big.NewInt(spread(i+1)>>4))
}

func timestamp(unit schema.TimeUnitType, step time.Duration, utc bool) kind {
	return kind{
		name: fmt.Sprint("timestamp of ", step, ", UTC ", utc), physical: parquet.Types.Int64,
		logical: schema.NewTimestampLogicalType(utc, unit),
		value:   func(i int) any { return stamp(instant(i, step), step) },
		text:    func(i int) string { return clock(instant(i, step), utc) },
	}
}

func stamp(t time.Time, step time.Duration) int64 {
	return t.Unix()*int64(time.Second/step) + int64(t.Nanosecond())/int64(step)
}

// kinds are the types that are read.
func kinds() []kind {
	pt := parquet.Types
	none := schema.NoLogicalType{}
	return []kind{
		{"bool", pt.Boolean, none, 0, func(i int) any { return i%3 == 0 || i%100 > 50 }, func(i int) string { return strconv.FormatBool(i%3 == 0 || i%100 > 50) }},
		{"int8", pt.Int32, schema.NewIntLogicalType(8, true), 0, func(i int) any { return int32(int8(spread(i))) }, func(i int) string { return fmt.Sprint(int8(spread(i))) }},
		{"int32", pt.Int32, none, 0, func(i int) any { return int32(spread(i)) }, func(i int) string { return fmt.Sprint(int32(spread(i))) }},
		{"int64", pt.Int64, none, 0, func(i int) any { return spread(i) }, func(i int) string { return fmt.Sprint(spread(i)) }},
		{"uint16", pt.Int32, schema.NewIntLogicalType(16, false), 0, func(i int) any { return int32(uint16(spread(i))) }, func(i int) string { return fmt.Sprint(uint16(spread(i))) }},
		{"uint32", pt.Int32, schema.NewIntLogicalType(32, false), 0, func(i int) any { return int32(spread(i)) }, func(i int) string { return fmt.Sprint(uint32(spread(i))) }},
		{"uint64", pt.Int64, schema.NewIntLogicalType(64, false), 0, func(i int) any { return spread(i) }, func(i int) string { return fmt.Sprint(uint64(spread(i))) }},
		{"float", pt.Float, none, 0, func(i int) any { return float32(spread(i)) / 64 }, func(i int) string { return bits(float64(float32(spread(i)) / 64)) }},
		{"double", pt.Double, none, 0, func(i int) any { return double(i) }, func(i int) string { return bits(double(i)) }},
		{"text", pt.ByteArray, schema.StringLogicalType{}, 0, func(i int) any { return parquet.ByteArray(text(i)) }, text},
		{"enum", pt.ByteArray, schema.EnumLogicalType{}, 0, func(i int) any { return parquet.ByteArray(text(i % 6)) }, func(i int) string { return text(i % 6) }},
		{"bytes", pt.ByteArray, none, 0, func(i int) any { return parquet.ByteArray(text(i)) }, text},
		{"fixed text", pt.FixedLenByteArray, none, 5, func(i int) any { return parquet.FixedLenByteArray(fmt.Sprintf("%05d", i%9999)) }, func(i int) string { return fmt.Sprintf("%05d", i%9999) }},
		{"date", pt.Int32, schema.DateLogicalType{}, 0, func(i int) any { return int32(spread(i) % 100_000) }, func(i int) string {
			return time.Unix(86400*(spread(i)%100_000), 0).UTC().Format("2006-01-02")
		}},
		{"decimal(9,2)", pt.Int32, schema.NewDecimalLogicalType(9, 2), 0, func(i int) any { return int32(spread(i) % 1e9) }, func(i int) string { return decimalText(big.NewInt(spread(i)%1e9), 2) }},
		{"decimal(18,6)", pt.Int64, schema.NewDecimalLogicalType(18, 6), 0, func(i int) any { return spread(i) % 1e18 }, func(i int) string { return decimalText(big.NewInt(spread(i)%1e18), 6) }},
		{"decimal(38,10)", pt.FixedLenByteArray, schema.NewDecimalLogicalType(38, 10), 16, func(i int) any { return parquet.FixedLenByteArray(twos(wide(i), 16)) }, func(i int) string { return decimalText(wide(i), 10) }},
		{"decimal in bytes", pt.ByteArray, schema.NewDecimalLogicalType(38, 3), 0, func(i int) any { return parquet.ByteArray(twos(wide(i), 16)) }, func(i int) string { return decimalText(wide(i), 3) }},
		{"uuid", pt.FixedLenByteArray, schema.UUIDLogicalType{}, 16, func(i int) any { return parquet.FixedLenByteArray(uuid(i)) }, func(i int) string {
			u := uuid(i)
			return fmt.Sprintf("%x-%x-%x-%x-%x", u[:4], u[4:6], u[6:8], u[8:10], u[10:])
		}},
		timestamp(milli, time.Millisecond, false), timestamp(milli, time.Millisecond, true),
		timestamp(micro, time.Microsecond, false), timestamp(micro, time.Microsecond, true),
		timestamp(nano, time.Nanosecond, false), timestamp(nano, time.Nanosecond, true),
		{"int96", pt.Int96, none, 0, func(i int) any {
			// Nanoseconds of the day, and the Julian day: 1970-01-01 is 2440588.
			const day = 86_400_000_000_000
			ns := instant(i, time.Microsecond).UnixNano()
			of := (ns%day + day) % day
			var x parquet.Int96
			binary.LittleEndian.PutUint64(x[:], uint64(of))
			binary.LittleEndian.PutUint32(x[8:], uint32(2440588+(ns-of)/day))
			return x
		}, func(i int) string { return clock(instant(i, time.Microsecond), true) }},
		{"time", pt.Int64, schema.NewTimeLogicalType(false, micro), 0, func(i int) any { return dayMicros(i) }, func(i int) string {
			return clock(time.UnixMicro(dayMicros(i)), true)[len("1970-01-01T") : len(clock(time.UnixMicro(dayMicros(i)), true))-1]
		}},
	}
}

func dayMicros(i int) int64 { return (spread(i)%86_400_000_000 + 86_400_000_000) % 86_400_000_000 }

func uuid(i int) []byte {
	b := make([]byte, 16)
	binary.BigEndian.PutUint64(b, uint64(spread(i)))
	binary.BigEndian.PutUint64(b[8:], uint64(i))
	return b
}

// bits shows a double so that no two of them look alike.
func bits(x float64) string { return fmt.Sprintf("%x", math.Float64bits(x)) }

// encodings are those that values of a physical type can be written in.
func encodings(t parquet.Type) []parquet.Encoding {
	e := parquet.Encodings
	switch t {
	case parquet.Types.Boolean:
		return []parquet.Encoding{e.Plain, e.RLE}
	case parquet.Types.Int32, parquet.Types.Int64:
		return []parquet.Encoding{e.Plain, e.RLEDict, e.DeltaBinaryPacked, e.ByteStreamSplit}
	case parquet.Types.Float, parquet.Types.Double:
		return []parquet.Encoding{e.Plain, e.RLEDict, e.ByteStreamSplit}
	case parquet.Types.ByteArray:
		return []parquet.Encoding{e.Plain, e.RLEDict, e.DeltaLengthByteArray, e.DeltaByteArray}
	case parquet.Types.FixedLenByteArray:
		return []parquet.Encoding{e.Plain, e.RLEDict, e.ByteStreamSplit} // the library does not write delta byte arrays of them
	}
	return []parquet.Encoding{e.Plain, e.RLEDict}
}
