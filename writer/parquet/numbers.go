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
	had    int      // how many were there before the page that fills; 0: nothing is settled
	places []uint32 // open addressing: index of a value plus one, 0 where free
	shift  int      // 64 minus the bits of a place
}

// index appends the indices of numbers of width bytes each, and returns how many
// bytes of them it took: it stops at one that would be more than most.
func (d *numberDict) index(indices []uint32, numbers []byte, width, most int) ([]uint32, int) {
	had := len(indices)
	indices = slices.Grow(indices, len(numbers)/width)[:had+len(numbers)/width]
	at, to := 0, indices[had:]
	for {
		// Those that are known, up to one that is not.
		places, values, shift := d.places, d.values, d.shift&63
		var v uint64
		for ; at < len(numbers); at += width {
			if width == 8 {
				v = binary.LittleEndian.Uint64(numbers[at:])
			} else {
				v = uint64(binary.LittleEndian.Uint32(numbers[at:]))
			}
			i := place(v, shift)
			n := places[i]
			for n != 0 && values[n-1] != v {
				i = (i + 1) & (len(places) - 1)
				n = places[i]
			}
			if n == 0 {
				break
			}
			to[0] = n - 1
			to = to[1:]
		}
		if at == len(numbers) || len(d.values) == most {
			return indices[:len(indices)-len(to)], at
		}
		d.add(v)
	}
}

// place is where the search for v begins among 2^(64−shift) places. The multiplier
// is 2⁶⁴ over the golden ratio, made odd.
func place(v uint64, shift int) int {
	v ^= v >> 32 // round decimals differ in their high bits alone
	return int(v * 0x9e3779b97f4a7c15 >> shift)
}

// add takes up a value that is new.
func (d *numberDict) add(v uint64) {
	d.values = append(d.values, v)
	if 2*len(d.values) > len(d.places) {
		d.resize(2 * len(d.places))
	} else {
		d.set(len(d.values))
	}
}

// set notes the place of value n−1.
func (d *numberDict) set(n int) {
	i := place(d.values[n-1], d.shift)
	for d.places[i] != 0 {
		i = (i + 1) & (len(d.places) - 1)
	}
	d.places[i] = uint32(n)
}

// resize makes size places, a power of two.
func (d *numberDict) resize(size int) {
	d.places = slices.Grow(d.places[:0], size)[:size]
	clear(d.places)
	d.shift = 64 - bits.Len(uint(size-1))
	for n := range d.values {
		d.set(n + 1)
	}
}

// try makes the dictionary of a first page's numbers, if they are repeated
// enough, and appends their indices.
func (d *numberDict) try(indices []uint32, numbers []byte, width int) (_ []uint32, ok bool) {
	most := min(len(numbers)/width/repeats, mostNumbers)
	d.values = d.values[:0]
	d.resize(2 << bits.Len(uint(most)))
	indices, n := d.index(indices, numbers, width, most)
	return indices, n == len(numbers)
}

// take makes the dictionary a copy of another.
func (d *numberDict) take(from *numberDict) {
	d.values = append(d.values[:0], from.values...)
	d.had = len(d.values)
	d.resize(max(256, 4<<bits.Len(uint(d.had)))) // few places are near
}

// giveUp takes the page out of the dictionary, and has the rest of the chunk go
// PLAIN.
func (d *numberDict) giveUp() {
	d.off, d.values = true, d.values[:d.had]
}

// appendValues appends the numbers behind indices, of width bytes each.
func (d *numberDict) appendValues(dst []byte, indices []uint32, width int) []byte {
	for _, n := range indices {
		dst = appendNumber(dst, d.values[n], width)
	}
	return dst
}

// reset empties the dictionary for the next chunk.
func (d *numberDict) reset() {
	d.values, d.had, d.off = d.values[:0], 0, false
}

// appendPlain appends the dictionary as its page holds it.
func (d *numberDict) appendPlain(dst []byte, width int) []byte {
	for _, v := range d.values {
		dst = appendNumber(dst, v, width)
	}
	return dst
}

func appendNumber(dst []byte, v uint64, width int) []byte {
	if width == 8 {
		return binary.LittleEndian.AppendUint64(dst, v)
	}
	return binary.LittleEndian.AppendUint32(dst, uint32(v))
}
