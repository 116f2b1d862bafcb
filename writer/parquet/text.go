package parquet

import (
	"encoding/binary"
	"math/bits"
	"strings"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/schema"
)

const (
	// dictionaryBytes is how large the dictionary of a column chunk may grow;
	// what comes after it in the chunk is PLAIN.
	dictionaryBytes = 1 << 20

	// scattered is how many different texts in its first page show a column of
	// free text to be one that gains nothing from a dictionary, like line_id.
	scattered = pageRows / 4
)

// dictionary numbers the texts of a column chunk in the order in which they
// first appear.
type dictionary struct {
	off    bool // the rest of the chunk is PLAIN
	offAll bool // so are the chunks to come

	texts   []string
	bytes   int // that texts take in the file
	numbers map[string]uint32

	// known[c] is the number, plus one, of the text behind code or choice c of
	// source: it saves looking the text up. Codes depend on chance and leave no
	// trace in the file.
	known  []uint32
	source any

	// seen[n] is the last page that holds text n, so that a text is compared
	// with the bounds once a page.
	seen []int
	page int // number of the page being filled, from 1
}

// addTexts appends rows [from, to) of a text vector, ending pages where they
// are full of rows or of bytes. If it fails, row is the row at fault.
func (c *column) addTexts(v *schema.Vector, from, to int, s *scratch) (row int, err error) {
	d := &c.dict
	d.know(v)
	for i := from; i < to; i++ {
		if err := c.addText(v, i); err != nil {
			return i, err
		}
		if c.rows == pageRows || len(c.body) >= pageBytes || !d.off && d.bytes > dictionaryBytes {
			if err := c.endPage(s); err != nil {
				return i, err
			}
			first := len(c.pages) == 1
			if d.bytes > dictionaryBytes || first && v.Kind == schema.KindStrings && len(d.texts) > scattered {
				d.off = true
				d.offAll = d.offAll || first
			}
		}
	}
	return to, nil
}

func (c *column) addText(v *schema.Vector, i int) error {
	d := &c.dict
	code := 0
	switch v.Kind {
	case schema.KindCodes:
		code = int(v.Codes[i])
	case schema.KindChoices:
		code = int(v.Choices[i])
	}
	if !d.off && code < len(d.known) && d.known[code] > 0 {
		c.value()
		c.addIndex(d.known[code] - 1)
		return nil
	}
	text := v.Text(i)
	if text == "" {
		return c.null()
	}
	c.value()
	if d.off {
		c.body = binary.LittleEndian.AppendUint32(c.body, uint32(len(text)))
		c.body = append(c.body, text...)
		c.bounds.addText(text)
		return nil
	}
	n, ok := d.numbers[text]
	if !ok {
		n = d.add(text, v.Kind)
	}
	if code > 0 {
		d.remember(code, n)
	}
	c.addIndex(n)
	return nil
}

func (c *column) addIndex(n uint32) {
	c.indices = append(c.indices, n)
	if d := &c.dict; d.seen[n] != d.page {
		d.seen[n] = d.page
		c.bounds.addText(d.texts[n])
	}
}

// know prepares for a vector: codes of another source are not the same codes.
func (d *dictionary) know(v *schema.Vector) {
	if d.numbers == nil {
		d.numbers, d.page = map[string]uint32{}, 1
	}
	var source any
	switch v.Kind {
	case schema.KindCodes:
		source = v.Dict
	case schema.KindChoices:
		source = &v.Names[0]
	}
	if source != d.source {
		d.source = source
		clear(d.known)
	}
}

func (d *dictionary) remember(code int, n uint32) {
	for len(d.known) <= code {
		d.known = append(d.known, 0)
	}
	d.known[code] = n + 1
}

func (d *dictionary) add(text string, kind schema.Kind) uint32 {
	if kind == schema.KindStrings {
		text = strings.Clone(text) // it is part of the frame's memory
	}
	n := uint32(len(d.texts))
	d.texts = append(d.texts, text)
	d.seen = append(d.seen, 0)
	d.bytes += 4 + len(text)
	d.numbers[text] = n
	return n
}

// width is how many bits an index takes.
func (d *dictionary) width() int { return max(1, bits.Len(uint(len(d.texts)-1))) }

// endDictionary makes the dictionary page of the chunk, if it has a dictionary,
// and starts the next chunk's.
func (c *column) endDictionary(s *scratch) error {
	d := &c.dict
	c.dictPage.bytes = c.dictPage.bytes[:0]
	if len(d.texts) > 0 {
		s.raw = s.raw[:0]
		for _, text := range d.texts {
			s.raw = binary.LittleEndian.AppendUint32(s.raw, uint32(len(text)))
			s.raw = append(s.raw, text...)
		}
		packed, err := c.comp.pack(s, c.codec)
		if err != nil {
			return err
		}
		err = c.dictPage.seal(&parquet.PageHeader{
			Type: parquet.PageType_DICTIONARY_PAGE,
			DictionaryPageHeader: &parquet.DictionaryPageHeader{
				NumValues: int32(len(d.texts)),
				Encoding:  parquet.Encoding_PLAIN,
			},
		}, len(s.raw), packed, s)
		if err != nil {
			return err
		}
	}
	clear(d.texts)
	clear(d.known)
	clear(d.numbers)
	d.texts, d.seen, d.bytes, d.off = d.texts[:0], d.seen[:0], 0, d.offAll
	return nil
}
