//go:build goexperiment.simd && amd64

package vec

import "unsafe"

// aligned returns the first address at or after p that is a multiple of 64: a
// 64-byte load that straddles two cache lines costs twice.
func aligned(p unsafe.Pointer) unsafe.Pointer { return unsafe.Add(p, -uintptr(p)&63) }

// spread fills a table entry.
func spread[T any](lanes []T, c T) {
	for i := range lanes {
		lanes[i] = c
	}
}

// Constants that are plain literals in the scalar code.
const (
	zero     = 0.0
	half     = 0.5
	negHalf  = -0.5
	one      = 1.0
	two      = 2.0
	negTwo   = -2.0
	negThree = -3.0
	negLn2Hi = -ln2Hi
	negLn2Lo = -ln2Lo

	negQuarter  = -0.25
	negGaussEnd = -gaussEnd
)

// Adding these to the bits of |x| sets the sign bit from a power of two upwards,
// NaN included: 2^9 for an exponent, 2^5 for a distance from the mean.
const (
	hugeFrom = (2048 - 1023 - 9) << 52
	tailFrom = (2048 - 1023 - 5) << 52
)

// blockLines is how many options pass through the stages together; its scratch
// and columns then take some 27 kB.
const blockLines = 128
