package parquet

import "encoding/binary"

// unlz4 unpacks an LZ4 block of exactly size bytes into the memory of buf: what
// the format calls LZ4_RAW, without any frame around it.
//
// A block is a row of sequences: a token, whose high half is the number of
// literals and whose low half that of the bytes to be repeated less four, each
// carried on in further bytes where it is 15; the literals; and how far back the
// repeated bytes stand. The last sequence ends with its literals.
//
// Source: "LZ4 Block Format Description", in the documentation of LZ4.
func unlz4(packed []byte, size int, buf []byte) ([]byte, error) {
	out := buf[:0]
	if cap(out) < size {
		// Nothing grows more than 255-fold: what claims to is not worth the memory.
		if size/255 > len(packed) {
			return nil, errLZ4
		}
		out = make([]byte, 0, size)
	}
	for len(packed) > 0 {
		token := packed[0]
		literals, rest, ok := lz4Length(packed[1:], int(token>>4))
		if !ok || literals > len(rest) || literals > size-len(out) {
			return nil, errLZ4
		}
		out = append(out, rest[:literals]...)
		if packed = rest[literals:]; len(packed) == 0 {
			if token&15 != 0 {
				return nil, errLZ4
			}
			return out, nil
		}
		if len(packed) < 2 {
			return nil, errLZ4
		}
		back := int(binary.LittleEndian.Uint16(packed))
		repeated, rest, ok := lz4Length(packed[2:], int(token&15))
		repeated += 4
		if !ok || back == 0 || back > len(out) || repeated > size-len(out) {
			return nil, errLZ4
		}
		for repeated > 0 { // what is repeated may reach into itself
			k := min(back, repeated)
			from := len(out) - back
			out = append(out, out[from:from+k]...)
			repeated -= k
		}
		packed = rest
	}
	return nil, errLZ4 // the last sequence has no end
}

var errLZ4 = damaged("an LZ4 block that cannot be unpacked")

// lz4Length carries on a length of 15 in the bytes that follow.
func lz4Length(b []byte, n int) (length int, rest []byte, ok bool) {
	if n < 15 {
		return n, b, true
	}
	for i, c := range b {
		if n += int(c); n > maxPage {
			return 0, nil, false
		}
		if c < 255 {
			return n, b[i+1:], true
		}
	}
	return 0, nil, false
}
