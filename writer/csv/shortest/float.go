package shortest

import (
	"math"
	"math/bits"
	"strconv"
)

// Size is the room for the text of a number. The longest text of a double takes
// 25 bytes, such as -0.0000012345678901234567, that of an integer 20.
const Size = 32

// Float writes x, which is finite, to the beginning of dst, and returns the
// length of the text. What follows the text in dst is overwritten, too.
//
// Method: Schubfach (R. Giulietti, The Schubfach way to render doubles, 2021),
// with one product in place of three. A normal double c·2^q that is no power of
// two is the closest double to every real number within 2^q/2 of it. With
//
//	k = ⌊log₁₀ 2^q⌋, so that 1 ≤ 2^q/10^k < 10,
//
// that interval, 1 to 10 times 10^k wide, holds a multiple of 10^k, and one of
// 10^(k+1) at most: where there is one it is the shortest decimal, when its zeros at the end
// are dropped; where there is none, the multiple of 10^k closest to c·2^q is.
// So all that has to be known is c·2^q/10^k, whose whole part has 16 or 17
// digits, and how its last digit and its fraction compare with half the interval.
//
// Errors: the product is that of an exact 57-bit factor with the first 128 bits
// of a power of ten, so that its 64 bits of fraction are less than 2 units too
// small. Where two sides of a comparison are within slack of each other, which
// includes each tie and each decimal on the edge of the interval, and for what is
// no normal double or a power of two, strconv decides.
func Float(dst *[Size]byte, x float64) int {
	b := math.Float64bits(x)
	// Whole numbers, zeros above all, are frequent and quick to write.
	if n := int64(x); float64(n) == x && n > -1e15 && n < 1e15 && (n != 0 || b == 0) {
		return Int(dst, n)
	}
	exponent, mantissa := int(b>>52)&0x7ff, b&(1<<52-1)
	if exponent == 0 || exponent == 0x7ff || mantissa == 0 {
		return slowly(dst, x)
	}
	k, whole, fraction, half := scaled(mantissa|1<<52, exponent-1075)

	// In units of 2^-60 of 10^k: how far the number is above the multiple of
	// 10^(k+1) below it, and below the one above, and half the interval.
	const slack = 4
	tens := whole / 10
	last := whole - 10*tens
	above := last<<60 | fraction>>4
	below := 10<<60 - above
	if above-half+slack <= 2*slack || below-half+slack <= 2*slack || fraction-1<<63+slack <= 2*slack {
		return slowly(dst, x)
	}
	last += fraction >> 63
	if above < half {
		last = 0
	}
	if below < half {
		last = 0
		tens++
	}

	// The first sixteen digits, and one more: without a branch, as it is a matter
	// of chance how many there are.
	fewer := (tens - 1e15) >> 63
	sixteen := tens + -fewer&(9*tens+last)
	last &= fewer - 1
	point := 17 + k - int(fewer)
	if 16 <= point && point <= 21 { // 1250000000000000
		return slowly(dst, x)
	}
	return put(dst, int(b>>63), sixteen, last, point)
}

// scaled returns k = ⌊log₁₀ 2^q⌋ and, for a c of 53 bits, c·2^q/10^k as whole and
// as fraction in units of 2^-64, and 2^q/10^k/2 in units of 2^-60. The true values
// are not below them, and less than 2 units above.
func scaled(c uint64, q int) (k int, whole, fraction, half uint64) {
	k = q * 1262611 >> 22
	h := q + -k*1741647>>19 + 1 // 2^q/10^k is 2^h times the power of ten as a fraction: h is 1 to 4
	g := &powers[maxK-k]
	c <<= h & 63
	whole, fraction = bits.Mul64(c, g.hi)
	low, _ := bits.Mul64(c, g.lo)
	fraction, carry := bits.Add64(fraction, low, 0)
	return k, whole + carry, fraction, g.hi >> ((5 - h) & 63)
}

// slowly is Float for every number.
func slowly(dst *[Size]byte, x float64) int {
	format := byte('f')
	if a := math.Abs(x); x != 0 && (a < 1e-6 || a >= 1e21) {
		format = 'e'
	}
	return len(strconv.AppendFloat(dst[:0], x, format, -1, 64))
}
