package parquet

import (
	"slices"

	"nightbook/reader/table"
	"nightbook/schema"
)

// takeWords appends n rows of the page to a coded column. The part of the column
// that is none, or is one by another dictionary, ends being one.
func (c *column) takeWords(into *table.Rows, at, n, stored int) error {
	d := &c.values.dictionary
	places, err := c.places(n, stored)
	if err != nil {
		return err
	}
	v, coded := &into.Cols[at].Strings, &into.Coded[at]
	if coded.Words != d.words && len(coded.At) > 0 {
		into.SpellOut(at)
	}
	row := v.Len() + len(coded.At)
	if d.long != nil {
		for i, k := range places {
			if d.long[k] {
				c.file.long = append(c.file.long, row+i)
			}
		}
	}
	if v.Len() > 0 {
		if sizeOf(d.words, places) > c.file.limits.Of(schema.BatchBytes) { // few words may make many texts
			return c.file.limits.Exceeded(schema.BatchBytes)
		}
		for _, k := range places {
			v.Append(d.words.Bytes(int(k)))
		}
	} else {
		coded.Words, coded.At = d.words, append(coded.At, places...)
	}
	if c.meaning != texts {
		return nil
	}
	if c.file.counted {
		c.file.texts += sizeOf(d.words, places)
	} else { // as if each were the longest, until that is more than there may be
		c.file.texts += int64(n) * int64(d.longest)
	}
	return c.file.holdTexts(into, at)
}

// takePlainTexts appends n rows of a page of plain texts: their spans of the
// page, and the page as far as they reach.
func (c *column) takePlainTexts(into *table.Rows, at, n, stored int) error {
	v, data := &into.Cols[at].Strings, c.values.data
	longest := int(c.file.limits.Of(schema.FieldBytes))
	base, rows, end, size, long := len(v.Data), v.Len(), 0, 0, false
	v.Start, v.End = slices.Grow(v.Start, n)[:rows+n], slices.Grow(v.End, n)[:rows+n]
	starts, ends := v.Start[rows:], v.End[rows:]
	for i, level := range c.rows(n, stored) {
		start := end
		if level == 1 {
			x, err := textAt(c, data[end:])
			if err != nil {
				return err
			}
			start += 4
			end = start + x
			size += x
			long = long || x > longest
		}
		starts[i], ends[i] = uint32(base+start), uint32(base+end)
	}
	c.values.data = data[end:]
	if long {
		size = 0
		for i := range starts {
			x := int(ends[i] - starts[i])
			if x > longest {
				c.file.long = append(c.file.long, rows+i)
				ends[i], x = starts[i], 0
			}
			size += x
		}
	}
	c.file.texts += int64(size)
	if err := c.file.holdTexts(into, at); err != nil {
		return err
	}
	if !long {
		v.Data = append(v.Data, data[:end]...)
		return nil
	}
	for i := range starts { // without those that are too long
		from := data[int(starts[i])-base : int(ends[i])-base]
		starts[i] = uint32(len(v.Data))
		v.Data = append(v.Data, from...)
		ends[i] = uint32(len(v.Data))
	}
	return nil
}

// holdTexts holds the texts of the run, read up to column at, to the limit. Those
// of coded columns count as if all were the longest of their dictionary as long
// as that is within it, and one by one from there on.
func (f *File) holdTexts(into *table.Rows, at int) error {
	limit := f.limits.Of(schema.BatchBytes)
	if f.texts <= limit {
		return nil
	}
	if !f.counted {
		f.counted, f.texts = true, 0
		for k, c := range f.columns[:at+1] {
			if c.meaning != texts {
				continue
			}
			v := &into.Cols[k].Strings
			for i := range v.Start {
				f.texts += int64(v.End[i] - v.Start[i])
			}
			if coded := &into.Coded[k]; coded.Words != nil {
				f.texts += sizeOf(coded.Words, coded.At)
			}
		}
	}
	if f.texts > limit {
		return f.limits.Exceeded(schema.BatchBytes)
	}
	return nil
}

// sizeOf returns the bytes of words with repetition.
func sizeOf(words *table.Words, at []uint32) (n int64) {
	for _, k := range at {
		n += int64(words.End[k] - words.Start[k])
	}
	return n
}
