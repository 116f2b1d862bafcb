package parquet

import "nightbook/schema"

// startLengths begins with texts whose lengths are delta-coded before them.
func (v *values) startLengths(data []byte) (err error) {
	if err := v.lengths.start(data); err != nil {
		return err
	}
	v.data, err = v.lengths.rest()
	return err
}

// startPrefixes begins with texts of which each says how much of the text
// before it it shares.
func (v *values) startPrefixes(data []byte) error {
	if err := v.prefixes.start(data); err != nil {
		return err
	}
	rest, err := v.prefixes.rest()
	if err != nil {
		return err
	}
	v.last = v.last[:0]
	return v.startLengths(rest)
}

func (v *values) readLengths(n int) (err error) {
	if v.ints, err = v.lengths.next(v.ints[:0], n); err != nil {
		return err
	}
	v.bytes = v.bytes[:0]
	for _, size := range v.ints {
		if size < 0 || size > int64(len(v.data)) {
			return damaged("a text longer than its page")
		}
		v.bytes = append(v.bytes, v.data[:size])
		v.data = v.data[size:]
	}
	return nil
}

func (v *values) readPrefixes(c *column, n int) (err error) {
	if err := v.readLengths(n); err != nil {
		return err
	}
	if v.ints, err = v.prefixes.next(v.ints[:0], n); err != nil {
		return err
	}
	v.arena = v.arena[:0]
	for i, shared := range v.ints {
		if shared < 0 || shared > int64(len(v.last)) {
			return damaged("a text shares more than there is")
		}
		if int64(len(v.arena)) > c.file.limits.Of(schema.BatchBytes) { // few bytes may make long texts
			return c.file.limits.Exceeded(schema.BatchBytes)
		}
		v.last = append(v.last[:shared], v.bytes[i]...)
		at := len(v.arena)
		v.arena = append(v.arena, v.last...) // the texts before keep the memory they stand in
		v.bytes[i] = v.arena[at:len(v.arena):len(v.arena)]
		if c.physical == fixed && len(v.bytes[i]) != c.length {
			return damaged("a value of %d bytes in a column of %d", len(v.bytes[i]), c.length)
		}
	}
	return nil
}
