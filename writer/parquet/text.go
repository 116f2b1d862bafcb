package parquet

import (
	"encoding/binary"
	"math/bits"
	"slices"
	"strings"

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

// textDict is the dictionary of a column chunk of texts, in the order in which they
// first appear.
type textDict struct {
	off    bool // the rest of the chunk is PLAIN
	offAll bool // so are the chunks to come

	values  []string
	bytes   int // that values take in the file
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
	d := &c.texts
	d.know(v)
	for from < to {
		end := min(to, from+pageRows-c.rows)
		switch {
		case d.off:
			from, err = c.addPlain(v, from, end)
		case v.Kind == schema.KindCodes:
			from, err = addCoded(c, v, v.Codes, from, end)
		case v.Kind == schema.KindChoices:
			from, err = addCoded(c, v, v.Choices, from, end)
		default:
			from, err = c.addStrings(v, from, end)
		}
		if err != nil {
			return from, err
		}
		if c.rows == pageRows || len(c.body) >= pageBytes || !d.off && d.bytes > dictionaryBytes {
			if err := c.endPage(s); err != nil {
				return from, err
			}
			first := len(c.chunk.pages) == 1
			if d.bytes > dictionaryBytes || first && v.Kind == schema.KindStrings && len(d.values) > scattered {
				d.off = true
				d.offAll = d.offAll || first
			}
		}
	}
	return to, nil
}

// value notes that the next row has a value.
func (c *column) value() {
	if !c.Required {
		c.present = append(c.present, 1)
	}
	c.rows++
}

// null notes that the next row has none.
func (c *column) null() error {
	if c.Required {
		return errNull
	}
	c.present = append(c.present, 0)
	c.rows++
	c.bounds.nulls++
	return nil
}

// The next three append rows [from, to) to the page, up to the row that fills
// it with bytes or overfills the dictionary. They return the row behind the
// last one, or the row at fault.

// addCoded appends texts that have codes, through the dictionary.
func addCoded[C schema.Code | schema.Choice](c *column, v *schema.Vector, codes []C, from, to int) (int, error) {
	d := &c.texts
	c.indices = slices.Grow(c.indices, to-from)
	for i := from; i < to; i++ {
		code := int(codes[i])
		n := uint32(0)
		if code < len(d.known) {
			n = d.known[code]
		}
		if n == 0 {
			text := v.Text(i)
			if text == "" {
				if err := c.null(); err != nil {
					return i, err
				}
				continue
			}
			n = d.number(text) + 1
			d.remember(code, n)
			if d.bytes > dictionaryBytes {
				to = i + 1
			}
		}
		c.value()
		c.addIndex(n - 1)
	}
	return to, nil
}

// addStrings appends texts that come as they are, through the dictionary.
func (c *column) addStrings(v *schema.Vector, from, to int) (int, error) {
	d := &c.texts
	for i := from; i < to; i++ {
		text := v.Strings.At(i)
		if text == "" {
			if err := c.null(); err != nil {
				return i, err
			}
			continue
		}
		c.value()
		c.addIndex(d.number(text))
		if d.bytes > dictionaryBytes {
			return i + 1, nil
		}
	}
	return to, nil
}

// addPlain appends texts without a dictionary.
func (c *column) addPlain(v *schema.Vector, from, to int) (int, error) {
	for i := from; i < to; i++ {
		text := v.Text(i)
		if text == "" {
			if err := c.null(); err != nil {
				return i, err
			}
			continue
		}
		c.value()
		c.body = binary.LittleEndian.AppendUint32(c.body, uint32(len(text)))
		c.body = append(c.body, text...)
		c.bounds.addText(text)
		if len(c.body) >= pageBytes {
			return i + 1, nil
		}
	}
	return to, nil
}

func (c *column) addIndex(n uint32) {
	c.indices = append(c.indices, n)
	if d := &c.texts; d.seen[n] != d.page {
		d.seen[n] = d.page
		c.bounds.addText(d.values[n])
	}
}

// know prepares for a vector: codes of another source are not the same codes.
func (d *textDict) know(v *schema.Vector) {
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

// remember notes the number, plus one, of a code's text.
func (d *textDict) remember(code int, n uint32) {
	for len(d.known) <= code {
		d.known = append(d.known, 0)
	}
	d.known[code] = n
}

// number returns the number of a text, giving it one if it has none.
func (d *textDict) number(text string) uint32 {
	n, ok := d.numbers[text]
	if ok {
		return n
	}
	text = strings.Clone(text) // it may be part of the frame's memory
	n = uint32(len(d.values))
	d.values = append(d.values, text)
	d.seen = append(d.seen, 0)
	d.bytes += 4 + len(text)
	d.numbers[text] = n
	return n
}

// indexWidth is how many bits an index into a dictionary of n values takes.
func indexWidth(n int) int { return max(1, bits.Len(uint(n-1))) }

// appendPlain appends the dictionary as its page holds it.
func (d *textDict) appendPlain(dst []byte) []byte {
	for _, text := range d.values {
		dst = binary.LittleEndian.AppendUint32(dst, uint32(len(text)))
		dst = append(dst, text...)
	}
	return dst
}

// reset empties the dictionary for the next chunk.
func (d *textDict) reset() {
	clear(d.values)
	clear(d.known)
	clear(d.numbers)
	d.values, d.seen, d.bytes, d.off = d.values[:0], d.seen[:0], 0, d.offAll
}
