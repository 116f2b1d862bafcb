package shortest

import (
	"encoding/binary"
	"math/bits"
	"strconv"
)

const (
	zeros   = 0x3030303030303030 // "00000000"
	leading = 0x3030303030302e30 // "0.000000"
)

// eight returns the eight digits of x < 1e8 as the bytes 0 to 9 of a word, the
// first in the lowest byte. It cuts all pieces in two at a time.
func eight(x uint64) uint64 {
	high := x * 109951163 >> 40 // /1e4
	x = high | (x-1e4*high)<<32
	high = x * 10486 >> 20 & 0x7f_0000007f // /100
	x = high | (x-100*high)<<16
	high = x * 103 >> 10 & 0x0f_000f_000f_000f // /10
	return high | (x-10*high)<<8
}

// Int writes n to the beginning of dst, and returns the length of the text.
// What follows the text in dst is overwritten, too.
func Int(dst *[Size]byte, n int64) int {
	sign, u := int(uint64(n)>>63), uint64(n)
	if n < 0 {
		u = -u
	}
	if u >= 1e16 {
		return len(strconv.AppendInt(dst[:0], n, 10))
	}
	dst[0] = '-'
	if u < 1e8 {
		w := eight(u)
		skip := bits.TrailingZeros64(w|1<<56) &^ 7
		binary.LittleEndian.PutUint64(dst[sign:], (w|zeros)>>(skip&63))
		return sign + 8 - skip/8
	}
	high := u / 1e8
	w := eight(high)
	skip := bits.TrailingZeros64(w) &^ 7
	binary.LittleEndian.PutUint64(dst[sign:], (w|zeros)>>(skip&63))
	binary.LittleEndian.PutUint64(dst[sign+8-skip/8:], eight(u-1e8*high)|zeros)
	return sign + 16 - skip/8
}
