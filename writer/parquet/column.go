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

// column encodes one column: it fills a page, and keeps the finished pages of
// the row group.
type column struct {
	schema.Column
	physical parquet.Type
	comp     *compressor

	// the page being filled
	rows    int
	present []uint8 // optional columns: 1 where row i has a value, 0 for null
	body    []byte  // values in PLAIN layout; of booleans a byte each
	indices []uint32
	bounds  bounds

	dict     dictionary
	dictPage page
	pages    []page                   // the finished pages of the row group
	codec    parquet.CompressionCodec // of the chunk; settled by its first page
}

func newColumn(c schema.Column, comp *compressor) *column {
	return &column{Column: c, physical: physicalType(c.Type), comp: comp}
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

// add appends rows [from, to) of v, which all fit into the page as far as its
// number of rows goes. If it fails, row is the row at fault.
func (c *column) add(v *schema.Vector, from, to int, s *scratch) (row int, err error) {
	if v.Type() != c.Type {
		panic("parquet: the type of a vector is not that of its column")
	}
	switch v.Kind {
	case schema.KindFloats:
		row, err = c.addFloats(v.Floats[from:to])
	case schema.KindInts:
		row, err = c.addInts(v.Ints[from:to])
	case schema.KindDates:
		row, err = c.addDates(v.Dates[from:to])
	case schema.KindBools:
		row, err = c.addBools(v.Bools[from:to])
	default:
		return c.addTexts(v, from, to, s)
	}
	if err != nil {
		return from + row, err
	}
	if c.rows == pageRows {
		err = c.endPage(s)
	}
	return to, err
}

// null notes that the next row has no value.
func (c *column) null() error {
	if c.Required {
		return errNull
	}
	c.present = append(c.present, 0)
	c.rows++
	c.bounds.nulls++
	return nil
}

// value notes that the next row has a value.
func (c *column) value() {
	if !c.Required {
		c.present = append(c.present, 1)
	}
	c.rows++
}

// finish ends the last page of the row group.
func (c *column) finish(s *scratch) error {
	if c.rows > 0 {
		if err := c.endPage(s); err != nil {
			return err
		}
	}
	return c.endDictionary(s)
}

// held is how many bytes the row group's pages take.
func (c *column) held() int64 {
	var n int64
	for i := range c.pages {
		n += int64(len(c.pages[i].bytes))
	}
	return n + int64(len(c.body))
}

// endPage turns what was added since the last page into a finished page.
func (c *column) endPage(s *scratch) error {
	encoding := parquet.Encoding_PLAIN
	s.raw = s.raw[:0]
	if !c.Required {
		s.raw = appendLevels(s.raw, c.present)
	}
	switch {
	case c.physical == parquet.Type_BOOLEAN:
		s.raw = appendBits(s.raw, c.body)
	case len(c.indices) > 0:
		encoding = parquet.Encoding_RLE_DICTIONARY
		width := c.dict.width()
		s.raw = append(s.raw, byte(width))
		s.raw = appendHybrid(s.raw, c.indices, width)
	default:
		s.raw = append(s.raw, c.body...)
	}
	packed, err := c.pack(s)
	if err != nil {
		return err
	}
	p := c.nextPage()
	p.encoding, p.rows, p.bounds = encoding, c.rows, c.bounds.encoded(c.physical)
	err = p.seal(&parquet.PageHeader{
		Type: parquet.PageType_DATA_PAGE,
		DataPageHeader: &parquet.DataPageHeader{
			NumValues:               int32(c.rows),
			Encoding:                encoding,
			DefinitionLevelEncoding: parquet.Encoding_RLE,
			RepetitionLevelEncoding: parquet.Encoding_RLE,
			Statistics:              p.bounds.statistics(),
		},
	}, len(s.raw), packed, s)
	c.rows = 0
	c.present, c.body, c.indices = c.present[:0], c.body[:0], c.indices[:0]
	c.bounds.reset()
	c.dict.page++
	return err
}

// pack returns s.raw as the page is to hold it. The first page of the chunk
// settles the codec of the whole chunk: compression of numbers that saves less
// than a tenth only costs the readers time. Texts always gain, if not on their
// first page of indices then in the dictionary.
func (c *column) pack(s *scratch) ([]byte, error) {
	if len(c.pages) > 0 {
		return c.comp.pack(s, c.codec)
	}
	c.codec = c.comp.codec
	packed, err := c.comp.pack(s, c.codec)
	if c.physical != parquet.Type_BYTE_ARRAY && len(packed)*10 > len(s.raw)*9 {
		c.codec = parquet.CompressionCodec_UNCOMPRESSED
		return s.raw, err
	}
	return packed, err
}

// nextPage returns a page to be filled, with the memory of an earlier row group.
func (c *column) nextPage() *page {
	if n := len(c.pages); n < cap(c.pages) {
		c.pages = c.pages[:n+1]
	} else {
		c.pages = append(c.pages, page{})
	}
	return &c.pages[len(c.pages)-1]
}
