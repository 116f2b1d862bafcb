//go:build goexperiment.simd && amd64

package shortest

import (
	"encoding/binary"
	"math/bits"
	"simd/archsimd"
)

// vectors is whether the processor has what placeVector takes. Tests change it.
var vectors = archsimd.X86.AVX2()

func put(dst *[Size]byte, sign int, sixteen, last uint64, point int) int {
	if vectors {
		return placeVector(dst, sign, sixteen, last, point)
	}
	return place(dst, sign, sixteen, last, point)
}

// placeVector is place, with the sixteen digits in one register.
func placeVector(dst *[Size]byte, sign int, sixteen, last uint64, point int) int {
	high := sixteen / 1e8
	digits := sixteenDigits(high, sixteen-1e8*high)
	n := bits.Len16(^digits.Equal(archsimd.Uint8x16{}).ToBits())
	if last != 0 {
		n = 17
	}
	ascii := digits.Add(archsimd.LoadUint8x16(&byte0))
	dst[0] = '-'
	text := dst[sign&1:]
	if -6 < point && point <= 0 { // 0.00125
		binary.LittleEndian.PutUint64(text, leading)
		text = text[(2-point)&7:]
		ascii.Store((*[16]byte)(text))
		text[16] = byte(last + '0')
		return sign + 2 - point + n
	}
	exponent := point - 1
	if uint(exponent) >= 15 {
		point = 1
	}
	// All digits one byte on, and then those before the point where they belong.
	ascii.Store((*[16]byte)(text[1:]))
	text[17] = byte(last + '0')
	with := &points[point&15]
	digits.PermuteOrZero(archsimd.LoadInt8x16(&with.from)).Add(archsimd.LoadUint8x16(&with.plus)).Store((*[16]byte)(text))
	n++
	if uint(exponent) < 15 { // 12.5
		return sign + n
	}
	if n == 2 { // 5e-07
		n = 1
	}
	return sign + n + putExponent(text[n&31:], exponent)
}

// The factors of sixteenDigits: to load them from memory takes an instruction
// each, to make them three.
var (
	per1e4 = [4]uint32{109951163, 0, 109951163} // 2^40/1e4, rounded up
	e4     = [4]uint32{1e4, 0, 1e4}
	per100 = eightOf(5243) // 2^19/100, rounded up
	per8   = eightOf(1 << 13)
	e2     = eightOf(100)
	per10  = eightOf(6554) // 2^16/10, rounded up
	e1     = eightOf(10)
	byte0  = [16]uint8{'0', '0', '0', '0', '0', '0', '0', '0', '0', '0', '0', '0', '0', '0', '0', '0'}
)

func eightOf(x uint16) [8]uint16 { return [8]uint16{x, x, x, x, x, x, x, x} }

// sixteenDigits returns the digits of high and of low, each below 1e8, as the
// bytes 0 to 9: eight does the same for one of them.
func sixteenDigits(high, low uint64) archsimd.Uint8x16 {
	x := archsimd.Uint64x2{}.SetElem(0, high).SetElem(1, low)
	q := x.AsUint32x4().MulEvenWiden(archsimd.LoadUint32x4(&per1e4)).ShiftAllRight(40)
	r := x.Sub(q.AsUint32x4().MulEvenWiden(archsimd.LoadUint32x4(&e4)))
	four := q.Or(r.ShiftAllLeft(32)).AsUint16x8()
	q2 := four.MulHigh(archsimd.LoadUint16x8(&per100)).MulHigh(archsimd.LoadUint16x8(&per8))
	r2 := four.Sub(q2.Mul(archsimd.LoadUint16x8(&e2)))
	two := q2.Or(r2.AsUint32x4().ShiftAllLeft(16).AsUint16x8())
	q3 := two.MulHigh(archsimd.LoadUint16x8(&per10))
	r3 := two.Sub(q3.Mul(archsimd.LoadUint16x8(&e1)))
	return q3.Or(r3.ShiftAllLeft(8)).AsUint8x16()
}

// points says, for a point behind so many digits, which digit each of the first
// 16 bytes is, or none, and what is added to it.
var points = func() (list [16]struct {
	from [16]int8
	plus [16]uint8
}) {
	for point := range list {
		for i := range 16 {
			from, plus := i, byte('0')
			switch {
			case i == point:
				from, plus = -1, '.'
			case i > point:
				from--
			}
			list[point].from[i], list[point].plus[i] = int8(from), plus
		}
	}
	return list
}()
