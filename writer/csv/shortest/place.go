package shortest

import (
	"encoding/binary"
	"math/bits"
)

// place writes 0.d₁d₂…×10^point, of which sixteen ≥ 1e15 are the first sixteen
// digits, and last is one more; zeros at the end are dropped. The number is no
// whole one, or has an exponent.
func place(dst *[Size]byte, sign int, sixteen, last uint64, point int) int {
	high := sixteen / 1e8
	first, second := eight(high), eight(sixteen-1e8*high)
	n := 16 - bits.LeadingZeros64(second)/8
	if second == 0 {
		n -= bits.LeadingZeros64(first) / 8
	}
	if last != 0 {
		n = 17
	}
	first, second, last = first|zeros, second|zeros, last+'0'
	dst[0] = '-'
	text := dst[sign&1:]
	if -6 < point && point <= 0 { // 0.00125
		binary.LittleEndian.PutUint64(text, leading)
		text = text[(2-point)&7:]
		binary.LittleEndian.PutUint64(text, first)
		binary.LittleEndian.PutUint64(text[8:], second)
		text[16] = byte(last)
		return sign + 2 - point + n
	}
	exponent := point - 1
	if uint(exponent) >= 15 {
		point = 1
	}
	last = second>>56 | last<<8
	if point < 8 {
		second = first>>56 | second<<8
		first = withPoint(first, point)
	} else {
		second = withPoint(second, point-8)
	}
	binary.LittleEndian.PutUint64(text, first)
	binary.LittleEndian.PutUint64(text[8:], second)
	binary.LittleEndian.PutUint16(text[16:], uint16(last))
	n++
	if uint(exponent) < 15 { // 12.5
		return sign + n
	}
	if n == 2 { // 5e-07
		n = 1
	}
	return sign + n + putExponent(text[n&31:], exponent)
}

// withPoint puts a point before byte at of a word; its last byte drops out.
func withPoint(w uint64, at int) uint64 {
	shift := at * 8 & 63
	before := uint64(1)<<shift - 1
	return w&before | '.'<<shift | w&^before<<8
}

// putExponent writes an exponent, of two digits at least.
func putExponent(text []byte, exponent int) int {
	sign, e := uint32('+'), uint32(exponent)
	if exponent < 0 {
		sign, e = '-', -e
	}
	hundreds := e / 100
	e -= 100 * hundreds
	digits := (e/10 | e%10<<8) + '0'*0x101
	if hundreds == 0 {
		binary.LittleEndian.PutUint32(text, 'e'|sign<<8|digits<<16)
		return 4
	}
	binary.LittleEndian.PutUint32(text, 'e'|sign<<8|(hundreds+'0')<<16|digits<<24)
	text[4] = byte(digits >> 8)
	return 5
}
