package parquet

import "encoding/binary"

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
		h.out = make([]uint32, n)
	}
	h.out = h.out[:n]
	for at := 0; at < n; {
		switch {
		case h.run > 0:
			k := min(h.run, n-at)
			for i := range k {
				h.out[at+i] = h.value
			}
			h.run -= k
			at += k
		case h.packed > 0:
			k := min(h.packed, n-at)
			h.unpack(h.out[at : at+k])
			h.packed -= k
			at += k
		default:
			if err := h.head(); err != nil {
				return nil, err
			}
		}
	}
	return h.out, nil
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

// unpack reads len(out) values from the bits of a stretch.
func (h *hybrid) unpack(out []uint32) {
	if h.width == 1 {
		for i := range out {
			out[i] = uint32(h.bits[h.bit>>3]>>(h.bit&7)) & 1
			h.bit++
		}
		return
	}
	mask := uint64(1)<<h.width - 1
	for i := range out {
		at := h.bit >> 3
		var word uint64
		if at+8 <= len(h.bits) {
			word = binary.LittleEndian.Uint64(h.bits[at:])
		} else {
			var last [8]byte
			copy(last[:], h.bits[at:])
			word = binary.LittleEndian.Uint64(last[:])
		}
		out[i] = uint32(word >> (h.bit & 7) & mask)
		h.bit += h.width
	}
}
