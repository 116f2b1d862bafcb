package parquet

import (
	"errors"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/schema"
)

// pageBytes ends a page early: it bounds what a column of long texts holds
// uncompressed.
const pageBytes = 1 << 20

var (
	errNull      = errors.New("null in a column that is never null")
	errNotFinite = errors.New("not a finite number")
)

// column encodes one column: it fills a page, and adds it to its chunk of the
// row group when it is full.
type column struct {
	schema.Column
	physical parquet.Type
	width    int // of a value, in bytes; 0 for texts
	comp     *compressor
	blocks   *blocks

	// the page being filled
	present presence
	body    []byte   // values in PLAIN layout; of booleans a byte each
	indices []uint32 // or of values in the dictionary
	bounds  bounds

	texts   textDict // of which a column uses one
	numbers numberDict

	chunk *chunk // being filled
}

func newColumn(c schema.Column, comp *compressor, b *blocks) *column {
	t := physicalType(c.Type)
	return &column{Column: c, physical: t, width: valueWidth(t), comp: comp, blocks: b}
}

func physicalType(t schema.Type) parquet.Type {
	switch t {
	case schema.Float:
		return parquet.Type_DOUBLE
	case schema.Int:
		return parquet.Type_INT64
	case schema.Day:
		return parquet.Type_INT32
	case schema.Bool:
		return parquet.Type_BOOLEAN
	}
	return parquet.Type_BYTE_ARRAY
}

// valueWidth is how many bytes a value takes in a page being filled; 0 is that
// each takes its own.
func valueWidth(t parquet.Type) int {
	switch t {
	case parquet.Type_DOUBLE, parquet.Type_INT64:
		return 8
	case parquet.Type_INT32:
		return 4
	case parquet.Type_BOOLEAN:
		return 1
	}
	return 0
}

// add appends rows [from, to) of v, which all fit into the page as far as its
// number of rows goes. If it fails, row is the row at fault.
func (c *column) add(v *schema.Vector, from, to int, s *scratch) (row int, err error) {
	if v.Type() != c.Type {
		panic("parquet: the type of a vector is not that of its column")
	}
	switch v.Kind {
	case schema.KindFloats:
		row, err = c.addFloats(v.Floats[from:to], s)
	case schema.KindInts:
		row, err = addWhole(c, v.Ints[from:to], schema.NoInt, s)
	case schema.KindDates:
		row, err = addWhole(c, v.Dates[from:to], schema.NoDate, s)
	case schema.KindBools:
		c.addBools(v.Bools[from:to])
	default:
		return c.addTexts(v, from, to, s)
	}
	if err != nil {
		return from + row, err
	}
	if c.present.rows == pageRows {
		err = c.endPage(s)
	}
	return to, err
}

// finish ends the last page of the row group.
func (c *column) finish(s *scratch) error {
	if c.present.rows > 0 {
		if err := c.endPage(s); err != nil {
			return err
		}
	}
	return c.endDictionary(s)
}

// held is how many bytes the row group's pages take.
func (c *column) held() int64 { return c.chunk.held + int64(len(c.body)+4*len(c.indices)) }

// endPage turns what was added since the last page into a finished page.
func (c *column) endPage(s *scratch) error {
	first := len(c.chunk.pages) == 0
	rows := c.present.rows
	c.bounds.values, c.bounds.nulls = rows-c.present.nulls, c.present.nulls
	s.raw = s.raw[:0]
	if !c.Required {
		s.raw = c.present.appendLevels(s.raw)
	}
	encoding, block := c.encode(s)
	if first {
		if err := c.settleCodec(s, encoding, block); err != nil {
			return err
		}
	}
	size := len(s.raw) + len(block)
	packed := s.raw
	if c.chunk.codec != parquet.CompressionCodec_UNCOMPRESSED {
		s.raw = append(s.raw, block...)
		block = nil
		var err error
		if packed, err = c.comp.pack(s, s.raw, c.chunk.codec); err != nil {
			return err
		}
	}
	p := c.chunk.nextPage()
	p.encoding, p.rows, p.bounds = encoding, rows, c.bounds.encoded(c.physical)
	err := c.chunk.seal(p, &parquet.PageHeader{
		Type: parquet.PageType_DATA_PAGE,
		DataPageHeader: &parquet.DataPageHeader{
			NumValues:               int32(rows),
			Encoding:                encoding,
			DefinitionLevelEncoding: parquet.Encoding_RLE,
			RepetitionLevelEncoding: parquet.Encoding_RLE,
			Statistics:              p.bounds.statistics(),
		},
	}, size, packed, block, s)
	if len(block) > 0 {
		c.body = nil // it is the chunk's now
	}
	c.present.reset()
	c.body, c.indices = c.body[:0], c.indices[:0]
	c.bounds.reset()
	return err
}

// encode appends the page's values to s.raw, or returns them as a block if they
// are numbers to be written as they lie.
func (c *column) encode(s *scratch) (e parquet.Encoding, block []byte) {
	width := 0
	switch {
	case c.physical == parquet.Type_BOOLEAN:
		s.raw = appendBits(s.raw, c.body)
		return parquet.Encoding_PLAIN, nil
	case c.width > 0:
		if len(c.body) > 0 && !c.numbers.off {
			c.enterDictionary(s)
		}
		if len(c.indices) == 0 {
			return parquet.Encoding_PLAIN, c.body
		}
		c.numbers.had = len(c.numbers.values)
		width = indexWidth(len(c.numbers.values))
	default:
		if len(c.indices) == 0 {
			s.raw = append(s.raw, c.body...)
			return parquet.Encoding_PLAIN, nil
		}
		c.texts.endPage(&c.bounds)
		width = indexWidth(len(c.texts.values))
	}
	s.raw = append(s.raw, byte(width))
	s.raw = appendHybrid(s.raw, c.indices, width)
	return parquet.Encoding_RLE_DICTIONARY, nil
}

const (
	// trialBytes is how much of a chunk is packed to see whether it is worth it.
	trialBytes = 8 << 10

	// tellingBytes are the fewest that tell anything of the chunk.
	tellingBytes = 1 << 10
)

// settleCodec settles the codec of the chunk by its first page, and the dictionary
// as far as that goes: what compression does not halve is not compressed. Texts
// without codes always gain, if not on their first page then on those to come.
func (c *column) settleCodec(s *scratch, e parquet.Encoding, block []byte) error {
	c.chunk.codec = c.comp.codec
	if c.physical == parquet.Type_BYTE_ARRAY && (e == parquet.Encoding_PLAIN || c.texts.source == nil) {
		return nil
	}
	size := len(s.raw)
	if e == parquet.Encoding_PLAIN {
		s.raw = append(s.raw, block[:min(len(block), trialBytes)]...)
	} else if s.raw = c.appendDictionary(s.raw); len(s.raw) < tellingBytes {
		s.raw = s.raw[:size]
		return nil
	}
	// What there is most of, the beginning of it.
	trial := s.raw[:min(size, trialBytes)]
	if 2*size < len(s.raw) {
		trial = s.raw[size:min(len(s.raw), size+trialBytes)]
	}
	packed, err := c.comp.pack(s, trial, c.comp.codec)
	if 2*len(packed) > len(trial) {
		c.chunk.codec = parquet.CompressionCodec_UNCOMPRESSED
	}
	s.raw = s.raw[:size]
	return err
}

// appendDictionary appends the dictionary as its page holds it.
func (c *column) appendDictionary(dst []byte) []byte {
	if c.width > 0 {
		return c.numbers.appendPlain(dst, c.width)
	}
	return c.texts.appendPlain(dst)
}

// endDictionary makes the dictionary page of the chunk, if it has a dictionary,
// and empties it.
func (c *column) endDictionary(s *scratch) error {
	s.raw = c.appendDictionary(s.raw[:0])
	values := len(c.texts.values) + len(c.numbers.values)
	c.texts.reset()
	c.numbers.reset()
	if values == 0 {
		return nil
	}
	packed, err := c.comp.pack(s, s.raw, c.chunk.codec)
	if err != nil {
		return err
	}
	return c.chunk.seal(&c.chunk.dict, &parquet.PageHeader{
		Type:                 parquet.PageType_DICTIONARY_PAGE,
		DictionaryPageHeader: &parquet.DictionaryPageHeader{NumValues: int32(values), Encoding: parquet.Encoding_PLAIN},
	}, len(s.raw), packed, nil, s)
}
