package parquet

import (
	"encoding/binary"
	"math/bits"
	"slices"
)

const (
	// mostNumbers is how many different numbers the dictionary of a column chunk
	// may hold; the pages after it are PLAIN.
	mostNumbers = pageRows

	// repeats is how often, on average, the numbers of a chunk's first page must
	// be repeated for the chunk to have a dictionary.
	repeats = 4
)

// numberDict is the dictionary of a column chunk of numbers, in the order in which
// they first appear. Numbers are the same if their bits are.
type numberDict struct {
	off    bool // the rest of the chunk is PLAIN
	values []uint64
	places []uint32 // open addressing: index of a value plus one, 0 where free
	shift  int      // 64 minus the bits of a place
}

// index appends the indices of a page's numbers, of width bytes each. If the
// dictionary would grow beyond most numbers, it appends none and says so.
func (d *numberDict) index(indices []uint32, page []byte, width, most int) (_ []uint32, tooMany bool) {
	had := len(d.values)
	indices = slices.Grow(indices, len(page)/width)
	var last uint64
	n := uint32(0) // index of last, plus one
	for at := 0; at < len(page); at += width {
		var v uint64
		if width == 8 {
			v = binary.LittleEndian.Uint64(page[at:])
		} else {
			v = uint64(binary.LittleEndian.Uint32(page[at:]))
		}
		if v != last || n == 0 {
			if n = d.find(v); n == 0 {
				if len(d.values) == most {
					d.values = d.values[:had]
					return indices[:0], true
				}
				n = d.add(v)
			}
			last = v
		}
		indices = append(indices, n-1)
	}
	return indices, false
}

// place is where the search for v begins. The multiplier is 2⁶⁴ over the golden
// ratio, made odd.
func (d *numberDict) place(v uint64) int {
	v ^= v >> 32 // round decimals differ in their high bits alone
	return int(v * 0x9e3779b97f4a7c15 >> d.shift)
}

// find returns the index of v, plus one; 0 is that it is new.
func (d *numberDict) find(v uint64) uint32 {
	if len(d.places) == 0 {
		return 0
	}
	for i := d.place(v); ; i = (i + 1) & (len(d.places) - 1) {
		n := d.places[i]
		if n == 0 || d.values[n-1] == v {
			return n
		}
	}
}

func (d *numberDict) add(v uint64) uint32 {
	d.values = append(d.values, v)
	if 2*len(d.values) > len(d.places) {
		d.grow()
	} else {
		d.set(len(d.values))
	}
	return uint32(len(d.values))
}

// set notes the place of value n−1.
func (d *numberDict) set(n int) {
	i := d.place(d.values[n-1])
	for d.places[i] != 0 {
		i = (i + 1) & (len(d.places) - 1)
	}
	d.places[i] = uint32(n)
}

func (d *numberDict) grow() {
	size := max(256, 2*len(d.places))
	d.places, d.shift = make([]uint32, size), 64-bits.Len(uint(size-1))
	for n := range d.values {
		d.set(n + 1)
	}
}

// reset empties the dictionary for the next chunk.
func (d *numberDict) reset() {
	clear(d.places)
	d.values, d.off = d.values[:0], false
}

// appendPlain appends the dictionary as its page holds it.
func (d *numberDict) appendPlain(dst []byte, width int) []byte {
	for _, v := range d.values {
		if width == 8 {
			dst = binary.LittleEndian.AppendUint64(dst, v)
		} else {
			dst = binary.LittleEndian.AppendUint32(dst, uint32(v))
		}
	}
	return dst
}
