package parquet

import (
	"encoding/binary"
	"fmt"
	"math"
	"slices"

	"github.com/xitongsys/parquet-go/parquet"

	"nightbook/reader/table"
	"nightbook/schema"
)

// dictionary is what the pages of a row group have indices into. What the column
// hands on decides the form in which it is kept: words, days, or the values as
// they are stored, numbers with the null behind them.
type dictionary struct {
	size int // values
	plain
	days []schema.Date
	odd  bool // a number among them stands for null, and is none

	words   *table.Words
	long    []bool // of the words: longer than a field may be; nil is that none is
	longest int    // of the others, in bytes
}

// maxWords is up to how many values that are no texts are written out as such:
// all of them, whether there are rows of them or not.
const maxWords = 1 << 16

// forget makes the dictionary one without values, and keeps memory.
func (d *dictionary) forget() {
	*d = dictionary{plain: plain{ints: d.ints[:0], floats: d.floats[:0]}, days: d.days[:0]}
}

// setDictionary decodes the dictionary of a row group.
func (v *values) setDictionary(c *column, data []byte, n int, e parquet.Encoding) error {
	if e != parquet.Encoding_PLAIN && e != parquet.Encoding_PLAIN_DICTIONARY {
		return fmt.Errorf("a dictionary in the encoding %s is not read: write the column with a plain one, or without", encodingName(e))
	}
	if n < 0 || n > len(data) || c.physical == parquet.Type_BOOLEAN {
		return damaged("a dictionary of %d values in %d bytes", n, len(data))
	}
	if int64(n) > c.file.limits.Of(schema.DictionaryValues) {
		return c.file.limits.Exceeded(schema.DictionaryValues)
	}
	d := &v.dictionary
	d.forget()
	if c.meaning == texts && c.physical == parquet.Type_BYTE_ARRAY {
		return d.readWords(c, data, n)
	}
	if _, err := d.plain.read(c, data, n); err != nil {
		return err
	}
	d.size = n
	switch c.meaning {
	case floats:
		d.odd = hasNaN(d.floats)
		d.floats = append(d.floats, math.NaN())
	case ints:
		d.odd = hasNoInt(d.ints)
		d.ints = append(d.ints, schema.NoInt)
	case days:
		for _, x := range d.ints {
			d.days = append(d.days, day(x))
		}
		d.days = append(d.days, schema.NoDate)
	default:
		if n <= maxWords {
			d.writeWords(c, n)
		}
	}
	return nil
}

// readWords takes the n plain texts in data for words, without copying them.
func (d *dictionary) readWords(c *column, data []byte, n int) error {
	w := schema.Strings{Data: data, Start: make([]uint32, 0, n+1), End: make([]uint32, 0, n+1)}
	at := 0
	for range n {
		size, err := textAt(c, data[at:])
		if err != nil {
			return err
		}
		at += 4
		d.add(c, &w, at, at+size)
		at += size
	}
	d.end(w)
	return nil
}

// writeWords writes n values of another sort out as texts.
func (d *dictionary) writeWords(c *column, n int) {
	w := schema.Strings{Start: make([]uint32, 0, n+1), End: make([]uint32, 0, n+1)}
	for k := range n {
		start := len(w.Data)
		if c.meaning == texts {
			w.Data = append(w.Data, d.bytes[k]...)
		} else {
			w.Data = c.text(w.Data, &d.plain, k)
		}
		d.add(c, &w, start, len(w.Data))
	}
	d.end(w)
	d.plain = plain{}
}

// add adds the next word, a part of w.Data. Of one that is longer than a field
// may be, none of a column of texts, nothing is kept but that.
func (d *dictionary) add(c *column, w *schema.Strings, start, end int) {
	if size := end - start; c.meaning == texts && int64(size) > c.file.limits.Of(schema.FieldBytes) {
		if d.long == nil {
			d.long = make([]bool, cap(w.Start))
		}
		d.long[w.Len()] = true
		end = start
	} else {
		d.longest = max(d.longest, size)
	}
	w.AppendSpan(uint32(start), uint32(end))
}

func (d *dictionary) end(w schema.Strings) {
	d.size = w.Len()
	w.AppendSpan(0, 0)
	d.words = table.NewWords(w)
}

// textAt returns the size of the plain text that data begins with, behind the
// four bytes that say so.
func textAt(c *column, data []byte) (size int, err error) {
	if len(data) < 4 {
		return 0, c.tooShort()
	}
	n := uint64(binary.LittleEndian.Uint32(data))
	if n > uint64(len(data)-4) {
		return 0, damaged("a text longer than its page")
	}
	return int(n), nil
}

// check refuses indices that are none of the dictionary's.
func (d *dictionary) check(indices []uint32) error {
	var a, b, c, e uint32 // a chain of one maximum would take twice as long
	rest := indices
	for ; len(rest) >= 4; rest = rest[4:] {
		a, b, c, e = max(a, rest[0]), max(b, rest[1]), max(c, rest[2]), max(e, rest[3])
	}
	for _, i := range rest {
		a = max(a, i)
	}
	if int(max(a, b, c, e)) < d.size || len(indices) == 0 {
		return nil
	}
	for _, i := range indices {
		if int(i) >= d.size {
			return damaged("an index of %d into a dictionary of %d values", i, d.size)
		}
	}
	return nil
}

// readIndices decodes the next n values of a page of indices, as they are stored.
func (v *values) readIndices(n int) error {
	indices, err := v.indices.next(n)
	if err != nil {
		return err
	}
	d := &v.dictionary
	if err := d.check(indices); err != nil {
		return err
	}
	v.ints, v.floats, v.bytes = v.ints[:0], v.floats[:0], v.bytes[:0]
	for _, i := range indices {
		switch {
		case len(d.ints) > 0:
			v.ints = append(v.ints, d.ints[i])
		case len(d.floats) > 0:
			v.floats = append(v.floats, d.floats[i])
		default:
			v.bytes = append(v.bytes, d.bytes[i])
		}
	}
	return nil
}

// places returns where in the dictionary the next n rows stand, of which the next
// stored have a value: a null stands behind the last. It is valid until the
// next call.
func (c *column) places(n, stored int) ([]uint32, error) {
	v := &c.values
	null := uint32(v.dictionary.size)
	if stored == 0 {
		v.at = resized(v.at, n)
		for i := range v.at {
			v.at[i] = null
		}
		return v.at, nil
	}
	indices, err := v.indices.next(stored)
	if err == nil {
		err = v.dictionary.check(indices)
	}
	if err != nil || stored == n {
		return indices, err
	}
	v.at = resized(v.at, n)
	spread(v.at, indices, c.levels, null)
	return v.at, nil
}

// spread gives each row its value out of those stored, or null where its level is 0.
func spread[T any](rows, stored []T, levels []uint32, null T) {
	stored = append(stored, null)
	k, last := 0, len(stored)-1
	rows = rows[:len(levels)]
	for i, level := range levels {
		from := k
		if level == 0 {
			from = last
		}
		rows[i] = stored[from]
		k += int(level)
	}
}

// gather appends values by their places.
func gather[T any](to, from []T, places []uint32) []T {
	n := len(to)
	to = slices.Grow(to, len(places))[:n+len(places)]
	rows := to[n:]
	for i, k := range places {
		rows[i] = from[k]
	}
	return to
}
