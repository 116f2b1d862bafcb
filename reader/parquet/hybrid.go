package parquet

import (
	"encoding/binary"

	"nightbook/schema"
)

// hybrid reads Parquet's mixture of runs and bit-packed groups of small
// integers: levels, and indices into a dictionary.
type hybrid struct {
	b     []byte
	width int // bits a value, 0 to 32

	run    int    // values left of a run, or
	value  uint32 // what they are
	packed int    // values left of a bit-packed stretch, whose bits
	bits   []byte // stand here
	bit    int    // from here

	out []uint32
}

func (h *hybrid) reset(b []byte, width int) {
	h.b, h.width, h.run, h.packed = b, width, 0, 0
}

// next returns the next n values, valid until it is called again.
func (h *hybrid) next(n int) ([]uint32, error) {
	if cap(h.out) < n {
		h.out = make([]uint32, max(n, schema.BatchRows))
	}
	h.out = h.out[:n]
	return h.out, h.read(h.out)
}

// read reads the next len(out) values.
func (h *hybrid) read(out []uint32) error {
	for len(out) > 0 {
		switch {
		case h.run > 0:
			k := min(h.run, len(out))
			for i := range k {
				out[i] = h.value
			}
			h.run -= k
			out = out[k:]
		case h.packed > 0:
			k := min(h.packed, len(out))
			h.unpack(out[:k])
			h.packed -= k
			out = out[k:]
		default:
			if err := h.head(); err != nil {
				return err
			}
		}
	}
	return nil
}

// alike takes the next n > 0 values if they are of one run: it returns what they
// are, and whether so.
func (h *hybrid) alike(n int) (value uint32, ok bool, err error) {
	if h.run == 0 && h.packed == 0 {
		if err := h.head(); err != nil {
			return 0, false, err
		}
	}
	if h.run < n {
		return 0, false, nil
	}
	h.run -= n
	return h.value, true, nil
}

// head reads the head of the next run or stretch.
func (h *hybrid) head() error {
	head, n := binary.Uvarint(h.b)
	if n <= 0 || head>>1 > 1<<31-1 {
		return damaged("levels or indices end too early")
	}
	h.b = h.b[n:]
	count := int(head >> 1)
	if head&1 == 0 {
		size := (h.width + 7) / 8
		if size > len(h.b) || count == 0 {
			return damaged("a run without its value")
		}
		h.value = 0
		for i := range size {
			h.value |= uint32(h.b[i]) << (8 * i)
		}
		if uint64(h.value)>>h.width != 0 {
			return damaged("a run of %d in %d bits", h.value, h.width)
		}
		h.b, h.run = h.b[size:], count
		return nil
	}
	// Groups of eight values; the last may be cut off by the end of the page.
	size := count * h.width
	if count == 0 || count > 1<<28 {
		return damaged("a stretch of %d groups", count)
	}
	h.packed = 8 * count
	if size > len(h.b) {
		size = len(h.b)
		h.packed = 8 * size / max(h.width, 1)
		if h.packed == 0 {
			return damaged("a stretch without its values")
		}
	}
	h.bits, h.bit, h.b = h.b[:size], 0, h.b[size:]
	return nil
}

// unpack reads len(out) values from the bits of a stretch: as many at a time as
// are sure to lie in the eight bytes that the first of them begins in.
func (h *hybrid) unpack(out []uint32) {
	w := uint(h.width)
	mask := uint64(1)<<w - 1
	bit := uint(h.bit)
	h.bit += len(out) * h.width
	switch {
	case w <= 7 || w == 8: // those of 8 bits begin with their bytes
		for len(out) >= 8 && bit>>3+8 <= uint(len(h.bits)) {
			x := binary.LittleEndian.Uint64(h.bits[bit>>3:]) >> (bit & 7)
			o := out[:8:8]
			o[0] = uint32(x & mask)
			x >>= w & 63
			o[1] = uint32(x & mask)
			x >>= w & 63
			o[2] = uint32(x & mask)
			x >>= w & 63
			o[3] = uint32(x & mask)
			x >>= w & 63
			o[4] = uint32(x & mask)
			x >>= w & 63
			o[5] = uint32(x & mask)
			x >>= w & 63
			o[6] = uint32(x & mask)
			x >>= w & 63
			o[7] = uint32(x & mask)
			out = out[8:]
			bit += 8 * w
		}
	case w <= 14 || w == 16:
		for len(out) >= 4 && bit>>3+8 <= uint(len(h.bits)) {
			x := binary.LittleEndian.Uint64(h.bits[bit>>3:]) >> (bit & 7)
			o := out[:4:4]
			o[0] = uint32(x & mask)
			o[1] = uint32(x >> (w & 63) & mask)
			o[2] = uint32(x >> (2 * w & 63) & mask)
			o[3] = uint32(x >> (3 * w & 63) & mask)
			out = out[4:]
			bit += 4 * w
		}
	}
	for i := range out {
		at := bit >> 3
		var word uint64
		if at+8 <= uint(len(h.bits)) {
			word = binary.LittleEndian.Uint64(h.bits[at:])
		} else {
			var last [8]byte
			copy(last[:], h.bits[at:])
			word = binary.LittleEndian.Uint64(last[:])
		}
		out[i] = uint32(word >> (bit & 7) & mask)
		bit += w
	}
}
