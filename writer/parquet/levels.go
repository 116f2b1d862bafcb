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
		dst = appendRun(dst, run-fill, uint32(values[i]), width)
		i += run
		literal = i
	}
	return appendPacked(dst, values[literal:], width)
}

// appendRun appends one run-length run.
func appendRun(dst []byte, n int, value uint32, width int) []byte {
	dst = binary.AppendUvarint(dst, uint64(n)<<1)
	for ; width > 0; width -= 8 {
		dst = append(dst, byte(value))
		value >>= 8
	}
	return dst
}

// appendPacked appends one bit-packed run, the last group filled with zeros.
func appendPacked[T uint8 | uint32](dst []byte, values []T, width int) []byte {
	if len(values) == 0 {
		return dst
	}
	groups := (len(values) + 7) / 8
	dst = binary.AppendUvarint(dst, uint64(groups)<<1|1)
	end := len(dst) + groups*width
	var acc uint64
	bits := 0 // in acc, fewer than 32 between values
	for _, v := range values {
		acc |= uint64(v) << bits
		if bits += width; bits >= 32 {
			dst = binary.LittleEndian.AppendUint32(dst, uint32(acc))
			acc >>= 32
			bits -= 32
		}
	}
	for len(dst) < end {
		dst = append(dst, byte(acc))
		acc >>= 8
	}
	return dst[:end]
}

// appendLevels appends definition levels of an optional column, with their
// length before them, as a data page holds them.
func appendLevels(dst []byte, present []uint8, nulls int) []byte {
	at := len(dst)
	dst = append(dst, 0, 0, 0, 0)
	switch nulls {
	case 0:
		dst = appendRun(dst, len(present), 1, 1)
	case len(present):
		dst = appendRun(dst, len(present), 0, 1)
	default:
		dst = appendHybrid(dst, present, 1)
	}
	binary.LittleEndian.PutUint32(dst[at:], uint32(len(dst)-at-4))
	return dst
}
