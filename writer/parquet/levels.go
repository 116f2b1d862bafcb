package parquet

import "encoding/binary"

// appendHybrid appends values of width bits (1 to 32) in the format's mixture of
// run-length and bit-packed runs: a run of eight or more equal values becomes a
// run-length run, what lies between is packed in groups of eight.
func appendHybrid[T uint8 | uint32](dst []byte, values []T, width int) []byte {
	literal, i := 0, 0 // values[literal:i] are to be bit-packed
	for i < len(values) {
		run := 1
		for i+run < len(values) && values[i+run] == values[i] {
			run++
		}
		// A bit-packed run other than the last must be whole groups.
		fill := (8 - (i-literal)%8) % 8
		if run-fill < 8 {
			i += run
			continue
		}
		dst = appendPacked(dst, values[literal:i+fill], width)
		dst = binary.AppendUvarint(dst, uint64(run-fill)<<1)
		for v, bits := uint32(values[i]), 0; bits < width; bits += 8 {
			dst = append(dst, byte(v))
			v >>= 8
		}
		i += run
		literal = i
	}
	return appendPacked(dst, values[literal:], width)
}

// appendPacked appends one bit-packed run, the last group filled with zeros.
func appendPacked[T uint8 | uint32](dst []byte, values []T, width int) []byte {
	if len(values) == 0 {
		return dst
	}
	groups := (len(values) + 7) / 8
	dst = binary.AppendUvarint(dst, uint64(groups)<<1|1)
	var acc uint64
	bits := 0
	for i := range groups * 8 {
		if i < len(values) {
			acc |= uint64(values[i]) << bits
		}
		for bits += width; bits >= 8; bits -= 8 {
			dst = append(dst, byte(acc))
			acc >>= 8
		}
	}
	return dst
}

// appendLevels appends definition levels of an optional column, with their
// length before them, as a data page holds them.
func appendLevels(dst []byte, present []uint8) []byte {
	at := len(dst)
	dst = append(dst, 0, 0, 0, 0)
	dst = appendHybrid(dst, present, 1)
	binary.LittleEndian.PutUint32(dst[at:], uint32(len(dst)-at-4))
	return dst
}
