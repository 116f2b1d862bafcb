package vec

import "math"

// Parts of the binary64 format.
const (
	signBit      = 1 << 63
	absBits      = signBit - 1
	oneBits      = 1023 << 52 // bits of 1.0
	exponentBits = 0xFFF << 52
	binade       = 1 << 52 // one step of the exponent
)

// selectFloat returns a if c, else b. The compiler turns the mask into
// arithmetic; a branch on the side of the strike would be mispredicted half the
// time.
func selectFloat(c bool, a, b float64) float64 {
	var m uint64
	if c {
		m = 1
	}
	m = -m
	x, y := math.Float64bits(a), math.Float64bits(b)
	return math.Float64frombits(y ^ (x^y)&m)
}
