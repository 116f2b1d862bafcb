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

// start reads the head of b.
func (d *delta) start(b []byte) error {
	*d = delta{b: b, first: true}
	block, ok1 := d.uvarint()
	minis, ok2 := d.uvarint()
	count, ok3 := d.uvarint()
	value, ok4 := d.varint()
	if !ok1 || !ok2 || !ok3 || !ok4 || minis == 0 || minis > 1<<10 || block == 0 || block > 1<<20 || block%minis != 0 || block/minis%8 != 0 || count > 1<<31 {
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

// rest returns what stands behind the values, without keeping any of them: they
// may take no bits at all, so that the size of a page says nothing of their number.
func (d *delta) rest() ([]byte, error) {
	skipped := *d
	for left := d.left - 1; left > 0; left -= d.perMin {
		if err := skipped.miniblock(); err != nil {
			return nil, err
		}
	}
	return skipped.b, nil
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
