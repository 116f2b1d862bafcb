package csv

import (
	"encoding/binary"

	"nightbook/schema"
)

// strings formats n rows of a column of texts from the given row on; see column.
func (p *part) strings(c int, list *schema.Strings, from, n int) (bad int) {
	guard, required := p.columns[c].guard, p.columns[c].Required
	starts, ends := list.Start[from:][:n], list.End[from:][:n]
	for i, start := range starts {
		s, end := &p.cells[i*len(p.columns)+c], ends[i]
		if start == end {
			if s.null(); required {
				return i
			}
			continue
		}
		if size := int(end - start); size <= slotText && int(start)+slotText+2 <= len(list.Data) {
			if putPlain(s, list.Data[start:], size, guard) {
				s.end(size)
				continue
			}
		}
		p.text(s, list.At(from+i), guard)
	}
	return -1
}

const (
	ones  = 0x0101010101010101
	highs = 0x80 * ones
)

// putPlain writes the text that the first n bytes of data are, if it is plain:
// ASCII that is neither quoted nor changed nor guarded. It looks at eight bytes
// at a time, of data, which goes on for a slot at least, and of s.
func putPlain(s *slot, data []byte, n int, guard bool) bool {
	if guard {
		switch data[0] {
		case '=', '+', '-', '@', '\'':
			return false
		}
	}
	d := (*slot)(data)
	var special uint64
	for at := 0; at < n; at += 8 {
		w := binary.LittleEndian.Uint64(d[at&24:])
		binary.LittleEndian.PutUint64(s[at&24:], w)
		if rest := n - at; rest < 8 {
			text := uint64(1)<<(rest*8&63) - 1
			w = w&text | 'a'*ones&^text
		}
		special |= specials(w)
	}
	return special&highs == 0
}

// specials returns a word with the highest bit of a byte set for each byte of w
// that is not ASCII, a control character, a comma or a quotation mark; the byte
// after such a one may be marked by mistake.
func specials(w uint64) uint64 {
	comma, quote := w^','*ones, w^'"'*ones
	return w | (w-' '*ones)&^w | (comma-ones)&^comma | (quote-ones)&^quote
}
