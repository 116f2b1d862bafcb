package parquet

import (
	"encoding/binary"
	"slices"
)

// leastRun is how many equal values make a run-length run.
const leastRun = 8

// appendHybrid appends values of width bits (1 to 32) in the format's mixture of
// run-length and bit-packed runs: a run of eight or more equal values becomes a
// run-length run, what lies between is packed in groups of eight.
func appendHybrid(dst []byte, values []uint32, width int) []byte {
	literal, i := 0, 0 // values[literal:i] are to be bit-packed, none of them equal to the next
	for i+leastRun <= len(values) {
		// A long run that begins at i reaches the value looked at. If that is
		// another, the runs before its own are short ones.
		probe := i + leastRun - 1
		start, value := probe, values[probe]
		for start > i && values[start-1] == value {
			start--
		}
		if start > i {
			i = start
			continue
		}
		end := probe + 1
		for end < len(values) && values[end] == value {
			end++
		}
		// A bit-packed run other than the last must be whole groups.
		fill := -(i - literal) & 7
		if end-i-fill >= leastRun {
			dst = appendPacked(dst, values[literal:i+fill], width)
			dst = appendRun(dst, end-i-fill, value, width)
			literal = end
		}
		i = end
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
func appendPacked(dst []byte, values []uint32, width int) []byte {
	if len(values) == 0 {
		return dst
	}
	groups := (len(values) + 7) / 8
	dst = binary.AppendUvarint(dst, uint64(groups)<<1|1)
	const slack = 32 // that the last group is written with, and more
	end := len(dst) + groups*width
	dst = slices.Grow(dst, groups*width+slack)
	to := dst[len(dst) : end+slack]
	for ; len(values) >= 8; values = values[8:] {
		packGroup((*[slack]byte)(to), (*[8]uint32)(values), uint(width))
		to = to[width:]
	}
	if len(values) > 0 {
		var last [8]uint32
		copy(last[:], values)
		packGroup((*[slack]byte)(to), &last, uint(width))
	}
	return dst[:end]
}

// packGroup packs eight values of width bits each; the bytes after them are
// anything.
func packGroup(to *[32]byte, v *[8]uint32, width uint) {
	a := uint64(v[0]) | uint64(v[1])<<(width&63)
	b := uint64(v[2]) | uint64(v[3])<<(width&63)
	c := uint64(v[4]) | uint64(v[5])<<(width&63)
	d := uint64(v[6]) | uint64(v[7])<<(width&63)
	if width <= 8 {
		a |= b << (2 * width & 63)
		c |= d << (2 * width & 63)
		binary.LittleEndian.PutUint64(to[:], a|c<<(4*width&63))
		return
	}
	var acc uint64
	n, at := uint(0), 0 // bits in acc, fewer than 64
	for _, pair := range [...]uint64{a, b, c, d} {
		acc |= pair << n
		if n += 2 * width; n >= 64 {
			binary.LittleEndian.PutUint64(to[at:], acc)
			at += 8
			n -= 64
			acc = pair >> (2*width - n)
		}
	}
	if n > 0 {
		binary.LittleEndian.PutUint64(to[at:], acc)
	}
}
