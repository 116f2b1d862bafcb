package parquet

import (
	"fmt"
	"io"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/reader/table"
)

// meaning is what the values of a column stand for.
type meaning uint8

const (
	floats meaning = iota
	ints
	unsigned
	bools
	texts
	decimals
	days
	timestamps
	clocks
	uuids
)

// column is a column of the file and how far it has been read.
type column struct {
	name     string
	physical parquet.Type
	length   int // of fixed-length values, in bytes
	meaning  meaning
	scale    int   // of decimals: digits behind the point
	unit     int64 // of timestamps and clocks: units a second; INT96 has its own
	utc      bool  // of timestamps: the clock is that of UTC
	optional bool

	file   *File // that it is part of
	pages  pages
	levels []uint32 // of the rows at hand: 1 where there is a value
	values values
	clock  []byte // scratch
	stamp  int64  // the time written out last, and its text: rows have few expiries
	dated  []byte
}

// String returns the column's name and type.
func (c *column) String() string {
	s := c.name + " " + c.physical.String()
	switch c.meaning {
	case unsigned:
		s += " unsigned"
	case texts:
		s += " text"
	case decimals:
		s += fmt.Sprintf(" decimal, %d digits behind the point", c.scale)
	case days:
		s += " date"
	case timestamps:
		s += fmt.Sprintf(" timestamp, %d a second", c.unit)
		if c.utc {
			s += ", of UTC"
		}
	case clocks:
		s += fmt.Sprintf(" time, %d a second", c.unit)
	case uuids:
		s += " UUID"
	}
	if c.physical == fixed {
		s += fmt.Sprintf(", %d bytes", c.length)
	}
	return s
}

// columnsOf returns the columns of a flat schema.
func columnsOf(elements []*parquet.SchemaElement) ([]*column, error) {
	if len(elements) == 0 || elements[0] == nil {
		return nil, damaged("it has no schema")
	}
	var columns []*column
	for _, e := range elements[1:] {
		if e == nil {
			return nil, damaged("its schema has a hole")
		}
		if e.GetNumChildren() > 0 || e.Type == nil {
			return nil, fmt.Errorf("column %s is nested (%s): only flat columns are read; write its fields as columns of their own", e.Name, describe(e))
		}
		if e.GetRepetitionType() == parquet.FieldRepetitionType_REPEATED {
			return nil, fmt.Errorf("column %s repeats (a list of %s): only one value a row is read; write one, or leave the column out", e.Name, describe(e))
		}
		c := &column{name: e.Name, physical: *e.Type, length: int(e.GetTypeLength()),
			optional: e.RepetitionType != nil && *e.RepetitionType == parquet.FieldRepetitionType_OPTIONAL}
		if c.physical == parquet.Type_FIXED_LEN_BYTE_ARRAY && c.length <= 0 {
			return nil, damaged("column %s has values of %d bytes", c.name, c.length)
		}
		if !c.classify(e) {
			return nil, fmt.Errorf("column %s is of type %s, which is not read: write it as numbers, dates, times or texts", e.Name, describe(e))
		}
		columns = append(columns, c)
	}
	return columns, nil
}

// classify finds out what the column's values stand for.
func (c *column) classify(e *parquet.SchemaElement) bool {
	converted := parquet.ConvertedType(-1)
	if e.ConvertedType != nil {
		converted = *e.ConvertedType
	}
	logical := e.LogicalType
	if logical == nil {
		logical = &parquet.LogicalType{}
	} else if *logical == (parquet.LogicalType{}) {
		return false // one that came after this reader: its bytes mean what they do not say
	}
	if logical.DECIMAL != nil || converted == parquet.ConvertedType_DECIMAL {
		c.meaning = decimals
		if c.scale = int(e.GetScale()); logical.DECIMAL != nil {
			c.scale = int(logical.DECIMAL.Scale)
		}
		switch c.physical {
		case parquet.Type_INT32, parquet.Type_INT64, parquet.Type_BYTE_ARRAY, parquet.Type_FIXED_LEN_BYTE_ARRAY:
			return 0 <= c.scale && c.scale <= 76 && c.length <= 64
		}
		return false
	}
	switch c.physical {
	case parquet.Type_BOOLEAN:
		c.meaning = bools
		return true
	case parquet.Type_FLOAT, parquet.Type_DOUBLE:
		c.meaning = floats
		return true
	case parquet.Type_INT96:
		// It does not tell its zone; the engines that write it turn times into UTC.
		c.meaning, c.utc = timestamps, true
		return true
	case parquet.Type_BYTE_ARRAY:
		c.meaning = texts
		return logical.BSON == nil && converted != parquet.ConvertedType_BSON
	case parquet.Type_FIXED_LEN_BYTE_ARRAY:
		if logical.UUID != nil {
			c.meaning = uuids
			return c.length == 16
		}
		c.meaning = texts
		return converted != parquet.ConvertedType_INTERVAL
	case parquet.Type_INT32, parquet.Type_INT64:
		return c.classifyInt(converted, logical)
	}
	return false
}

func (c *column) classifyInt(converted parquet.ConvertedType, logical *parquet.LogicalType) bool {
	c.meaning = ints
	switch {
	case logical.DATE != nil || converted == parquet.ConvertedType_DATE:
		c.meaning = days
		return c.physical == parquet.Type_INT32
	case logical.TIMESTAMP != nil:
		c.meaning, c.utc = timestamps, logical.TIMESTAMP.IsAdjustedToUTC
		return c.physical == parquet.Type_INT64 && c.setUnit(logical.TIMESTAMP.Unit)
	case converted == parquet.ConvertedType_TIMESTAMP_MILLIS:
		c.meaning, c.unit, c.utc = timestamps, 1e3, true // by the format's rules for its older annotations
		return c.physical == parquet.Type_INT64
	case converted == parquet.ConvertedType_TIMESTAMP_MICROS:
		c.meaning, c.unit, c.utc = timestamps, 1e6, true
		return c.physical == parquet.Type_INT64
	case logical.TIME != nil:
		c.meaning = clocks
		return c.setUnit(logical.TIME.Unit)
	case converted == parquet.ConvertedType_TIME_MILLIS:
		c.meaning, c.unit = clocks, 1e3
	case converted == parquet.ConvertedType_TIME_MICROS:
		c.meaning, c.unit = clocks, 1e6
	case logical.INTEGER != nil && !logical.INTEGER.IsSigned,
		parquet.ConvertedType_UINT_8 <= converted && converted <= parquet.ConvertedType_UINT_64:
		c.meaning = unsigned
	}
	return true
}

func (c *column) setUnit(u *parquet.TimeUnit) bool {
	switch {
	case u == nil:
		return false
	case u.MILLIS != nil:
		c.unit = 1e3
	case u.MICROS != nil:
		c.unit = 1e6
	case u.NANOS != nil:
		c.unit = 1e9
	}
	return c.unit != 0
}

// describe names the type of a schema element.
func describe(e *parquet.SchemaElement) string {
	name := "group"
	if e.Type != nil {
		name = e.Type.String()
	}
	switch {
	case e.ConvertedType != nil:
		name += "/" + e.ConvertedType.String()
	case e.LogicalType != nil && *e.LogicalType == (parquet.LogicalType{}):
		name += " with an annotation unknown to this reader"
	}
	return name
}

// start begins with the column's part of a row group of that many rows.
func (c *column) start(r io.ReaderAt, size int64, m *parquet.ColumnMetaData, rows int64) error {
	if m.Type != c.physical {
		return damaged("its type is %s, the schema says %s", m.Type, c.physical)
	}
	if m.NumValues != rows {
		return damaged("it has %d values for %d rows", m.NumValues, rows)
	}
	c.values.dictionary.forget() // that of the row group before is none of this one's
	return c.pages.start(r, size, m)
}

// read appends the next n values to column at of the rows.
func (c *column) read(into *table.Rows, at, n int) error {
	c.prepare(into, at)
	for n > 0 {
		if c.pages.left == 0 {
			if err := c.nextPage(); err != nil {
				return err
			}
			continue
		}
		k := min(n, c.pages.left)
		stored, err := c.readPresent(k)
		if err != nil {
			return err
		}
		if err := c.take(into, at, k, stored); err != nil {
			return err
		}
		if c.pages.left -= k; c.pages.left == 0 && c.values.encoding == parquet.Encoding_BYTE_STREAM_SPLIT && c.values.done != c.values.count {
			return damaged("a page has %d values, its header says %d", c.values.count, c.values.done)
		}
		n -= k
	}
	return nil
}

// take appends the next n rows of the page, of which stored have a value: words
// and numbers of the dictionary by their places, plain texts as they lie in the
// page, all else value by value.
func (c *column) take(into *table.Rows, at, n, stored int) error {
	v, d := &into.Cols[at], &c.values.dictionary
	if c.values.encoding == parquet.Encoding_RLE_DICTIONARY {
		switch {
		case d.words != nil:
			return c.takeWords(into, at, n, stored)
		case d.size == 0 || d.odd || c.meaning > ints && c.meaning != days:
		default:
			places, err := c.places(n, stored)
			if err != nil {
				return err
			}
			switch c.meaning {
			case floats:
				v.Floats = gather(v.Floats, d.floats, places)
			case ints:
				v.Ints = gather(v.Ints, d.ints, places)
			case days:
				v.Dates = gather(v.Dates, d.days, places)
			}
			return nil
		}
	}
	into.SpellOut(at)
	if c.values.encoding == parquet.Encoding_PLAIN && c.meaning == texts && c.physical == parquet.Type_BYTE_ARRAY {
		return c.takePlainTexts(into, at, n, stored)
	}
	if err := c.values.read(c, stored); err != nil {
		return err
	}
	c.convert(into, at, n, stored)
	return c.file.holdTexts(into, at)
}

// readPresent finds out which of the next n > 0 rows have a value, and how many.
func (c *column) readPresent(n int) (stored int, err error) {
	c.levels = nil
	if !c.optional {
		return n, nil
	}
	level, ok, err := c.pages.levels.alike(n)
	if ok || err != nil {
		return n * int(level), err
	}
	if c.levels, err = c.pages.levels.next(n); err != nil {
		return 0, err
	}
	for _, l := range c.levels {
		stored += int(l)
	}
	return stored, nil
}
