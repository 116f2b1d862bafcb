package parquet

import "encoding/binary"

// delta reads integers stored as differences: blocks with a least difference,
// each of some miniblocks with a bit width of its own.
type delta struct {
	b      []byte
	left   int // values not yet read
	first  bool
	value  int64
	perMin int // values of a miniblock

	least  int64
	widths []byte // of the miniblocks of the block not yet begun
	minis  int    // miniblocks of a block
	in     int    // values left of the miniblock
	width  int
	bits   []byte
	bit    int
}

// maxDelta bounds the values of a delta-coded page: they may take no bits at
// all, so that the size of the page says nothing of their number.
const maxDelta = 1 << 24

// start reads the head of b.
func (d *delta) start(b []byte) error {
	*d = delta{b: b, first: true}
	block, ok1 := d.uvarint()
	minis, ok2 := d.uvarint()
	count, ok3 := d.uvarint()
	value, ok4 := d.varint()
	if !ok1 || !ok2 || !ok3 || !ok4 || minis == 0 || minis > 1<<10 || block == 0 || block > 1<<20 || block%minis != 0 || block/minis%8 != 0 || count > maxDelta {
		return damaged("delta-coded values with a bad head")
	}
	d.left, d.minis, d.perMin, d.value = int(count), int(minis), int(block/minis), value
	return nil
}

func (d *delta) uvarint() (uint64, bool) {
	x, n := binary.Uvarint(d.b)
	if n <= 0 {
		return 0, false
	}
	d.b = d.b[n:]
	return x, true
}

func (d *delta) varint() (int64, bool) {
	x, n := binary.Varint(d.b)
	if n <= 0 {
		return 0, false
	}
	d.b = d.b[n:]
	return x, true
}

// next appends the next n values.
func (d *delta) next(out []int64, n int) ([]int64, error) {
	if n > d.left {
		return nil, damaged("fewer delta-coded values than rows")
	}
	for ; n > 0; n-- {
		if d.first {
			d.first = false
		} else {
			if d.in == 0 {
				if err := d.miniblock(); err != nil {
					return nil, err
				}
			}
			d.value += d.least + int64(d.take())
			d.in--
		}
		d.left--
		out = append(out, d.value)
	}
	return out, nil
}

// miniblock begins the next miniblock, and the next block if need be.
func (d *delta) miniblock() error {
	if len(d.widths) == 0 {
		least, ok := d.varint()
		if !ok || len(d.b) < d.minis {
			return damaged("delta-coded values end too early")
		}
		d.least = least
		d.widths, d.b = d.b[:d.minis], d.b[d.minis:]
	}
	d.width = int(d.widths[0])
	d.widths = d.widths[1:]
	size := d.perMin * d.width / 8
	if d.width > 64 || size > len(d.b) {
		return damaged("delta-coded values end too early")
	}
	d.bits, d.bit, d.b = d.b[:size], 0, d.b[size:]
	d.in = d.perMin
	return nil
}

// take reads the next difference.
func (d *delta) take() uint64 {
	if d.width == 0 {
		return 0
	}
	var word [16]byte
	at, shift := d.bit>>3, d.bit&7
	copy(word[:9], d.bits[at:])
	x := binary.LittleEndian.Uint64(word[:]) >> shift
	if shift+d.width > 64 {
		x |= uint64(word[8]) << (64 - shift)
	}
	d.bit += d.width
	if d.width < 64 {
		x &= 1<<d.width - 1
	}
	return x
}

func (v *values) startDelta(data []byte) error { return v.delta.start(data) }

// startLengths begins with texts whose lengths are delta-coded before them.
func (v *values) startLengths(data []byte) (err error) {
	v.lengths, v.data, err = v.allDelta(v.lengths[:0], data)
	return err
}

// startPrefixes begins with texts of which each says how much of the text
// before it it shares.
func (v *values) startPrefixes(data []byte) (err error) {
	if v.prefixes, data, err = v.allDelta(v.prefixes[:0], data); err != nil {
		return err
	}
	v.last = v.last[:0]
	return v.startLengths(data)
}

// allDelta reads a whole sequence of delta-coded numbers and returns what is behind it.
func (v *values) allDelta(out []int64, data []byte) ([]int64, []byte, error) {
	if err := v.delta.start(data); err != nil {
		return nil, nil, err
	}
	out, err := v.delta.next(out, v.delta.left)
	return out, v.delta.b, err
}

func (v *values) readLengths(c *column, n int) error {
	if n > len(v.lengths) {
		return c.tooShort()
	}
	v.bytes = v.bytes[:0]
	for _, size := range v.lengths[:n] {
		if size < 0 || size > int64(len(v.data)) {
			return damaged("a text longer than its page")
		}
		v.bytes = append(v.bytes, v.data[:size])
		v.data = v.data[size:]
	}
	v.lengths = v.lengths[n:]
	return nil
}

func (v *values) readPrefixes(c *column, n int) error {
	if n > len(v.prefixes) {
		return c.tooShort()
	}
	if err := v.readLengths(c, n); err != nil {
		return err
	}
	v.arena = v.arena[:0]
	for i, shared := range v.prefixes[:n] {
		if shared < 0 || shared > int64(len(v.last)) || len(v.arena) > maxPage {
			return damaged("a text shares more than there is")
		}
		v.last = append(v.last[:shared], v.bytes[i]...)
		at := len(v.arena)
		v.arena = append(v.arena, v.last...) // the texts before keep the memory they stand in
		v.bytes[i] = v.arena[at:len(v.arena):len(v.arena)]
		if c.physical == fixed && len(v.bytes[i]) != c.length {
			return damaged("a value of %d bytes in a column of %d", len(v.bytes[i]), c.length)
		}
	}
	v.prefixes = v.prefixes[n:]
	return nil
}
