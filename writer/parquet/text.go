package parquet

import (
	"encoding/binary"
	"math/bits"
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

	// known[c] tells of code or choice c of source what has been found out: it
	// saves looking the text up. Codes depend on chance and leave no trace in the
	// file.
	known  []uint32 // unmet, null, or firstKnown plus the number of the text
	source any

	// seen[k] is whether the page holds a code of which k is known: a text is
	// compared with the bounds once a page.
	seen []bool
}

// What is known of a code.
const (
	unmet = iota
	null
	firstKnown
)

// addTexts appends rows [from, to) of a text vector, ending pages where they
// are full of rows or of bytes. If it fails, row is the row at fault.
func (c *column) addTexts(v *schema.Vector, from, to int, s *scratch) (row int, err error) {
	d := &c.texts
	d.know(v)
	for from < to {
		end := min(to, from+pageRows-c.present.rows)
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
		if c.present.rows == pageRows || len(c.body) >= pageBytes || !d.off && d.bytes > dictionaryBytes {
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

// addPresence notes of n rows, from a row on, which have a value. It returns the
// row behind them, or the row at fault.
func (c *column) addPresence(mask uint64, from, n int) (int, error) {
	if c.Required && mask != ^uint64(0)>>(64-n) {
		return from + bits.TrailingZeros64(^mask), errNull
	}
	c.present.add(mask, n)
	return from + n, nil
}

// The next three append rows [from, to) to the page, up to the row that fills
// it with bytes or overfills the dictionary. They return the row behind the
// last one, or the row at fault.

// addCoded appends texts that have codes, through the dictionary.
func addCoded[C schema.Code | schema.Choice](c *column, v *schema.Vector, codes []C, from, to int) (int, error) {
	d := &c.texts
	c.growIndices(to - from)
	for from < to {
		part := codes[from:min(from+64, to)]
		at := len(c.indices)
		indices, known, seen := c.indices[at:at+len(part)], d.known, d.seen
		var mask uint64
		n := 0
		for i, code := range part {
			k := known[code]
			seen[k] = true
			indices[n] = k - firstKnown // or is overwritten
			if k >= firstKnown {
				n++
				mask |= 1 << i
			}
		}
		if seen[unmet] {
			seen[unmet] = false
			if end := meet(d, v, codes, from, from+len(part), to); end < to {
				to = end
				d.see(c.indices) // and no text behind the last row
			}
			continue
		}
		c.indices = c.indices[:at+n]
		var err error
		if from, err = c.addPresence(mask, from, len(part)); err != nil {
			return from, err
		}
	}
	return to, nil
}

// meet numbers the texts of rows [from, to) with a code that is unmet. It returns
// end, or the row behind the one that overfills the dictionary.
func meet[C schema.Code | schema.Choice](d *textDict, v *schema.Vector, codes []C, from, to, end int) int {
	for i := from; i < to; i++ {
		code := codes[i]
		if d.known[code] != unmet {
			continue
		}
		text := v.Text(i)
		if text == "" {
			d.known[code] = null
			continue
		}
		d.known[code] = firstKnown + d.number(text)
		if d.bytes > dictionaryBytes {
			return i + 1
		}
	}
	return end
}

// see notes that the page holds texts of these numbers, and no others.
func (d *textDict) see(indices []uint32) {
	clear(d.seen)
	for _, n := range indices {
		d.seen[firstKnown+n] = true
	}
}

// addStrings appends texts that come as they are, through the dictionary.
func (c *column) addStrings(v *schema.Vector, from, to int) (int, error) {
	d := &c.texts
	for from < to {
		end := min(from+64, to)
		var mask uint64
		for i := from; i < end; i++ {
			text := v.Strings.At(i)
			if text == "" {
				continue
			}
			n := d.number(text)
			d.seen[firstKnown+n] = true
			c.indices = append(c.indices, n)
			mask |= 1 << (i - from)
			if d.bytes > dictionaryBytes {
				to, end = i+1, i+1
			}
		}
		var err error
		if from, err = c.addPresence(mask, from, end-from); err != nil {
			return from, err
		}
	}
	return to, nil
}

// addPlain appends texts without a dictionary.
func (c *column) addPlain(v *schema.Vector, from, to int) (int, error) {
	for from < to {
		end := min(from+64, to)
		var mask uint64
		for i := from; i < end; i++ {
			text := v.Text(i)
			if text == "" {
				continue
			}
			c.body = binary.LittleEndian.AppendUint32(c.body, uint32(len(text)))
			start := len(c.body)
			c.body = append(c.body, text...)
			c.bounds.addText(c.body[start:])
			mask |= 1 << (i - from)
			if len(c.body) >= pageBytes {
				to, end = i+1, i+1
			}
		}
		var err error
		if from, err = c.addPresence(mask, from, end-from); err != nil {
			return from, err
		}
	}
	return to, nil
}

// know prepares for a vector: codes of another source are not the same codes.
func (d *textDict) know(v *schema.Vector) {
	if d.numbers == nil {
		d.numbers, d.seen = map[string]uint32{}, make([]bool, firstKnown)
	}
	var source any
	codes := 0
	switch v.Kind {
	case schema.KindCodes:
		source, codes = v.Dict, v.Dict.Len()
	case schema.KindChoices:
		source, codes = &v.Names[0], len(v.Names)
	}
	if source != d.source {
		d.source = source
		clear(d.known)
	}
	for len(d.known) < codes {
		d.known = append(d.known, unmet)
	}
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
	d.seen = append(d.seen, false)
	d.bytes += 4 + len(text)
	d.numbers[text] = n
	return n
}

// endPage adds the texts of the page to its bounds.
func (d *textDict) endPage(b *bounds) {
	low, high, any := "", "", false
	for n, text := range d.values {
		if !d.seen[firstKnown+n] {
			continue
		}
		switch {
		case !any:
			low, high, any = text, text, true
		case text < low:
			low = text
		case text > high:
			high = text
		}
	}
	clear(d.seen)
	if any {
		b.addText([]byte(low))
		b.addText([]byte(high))
	}
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
	d.values, d.bytes, d.off = d.values[:0], 0, d.offAll
	d.seen = d.seen[:min(len(d.seen), firstKnown)]
}
