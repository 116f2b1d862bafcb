package aggregate

import (
	"math"
	"math/bits"
)

// Sum is an exact accumulator of doubles.
//
// Computes the sum of any number (below 2⁶³) of finite doubles without error;
// Round rounds it once, to nearest, ties to even. Sums are commutative and
// associative: adding in any order, and merging partial sums in any order,
// give the same bits.
// Special cases: NaN makes the sum NaN, an infinity makes it that infinity,
// both infinities NaN; a sum of nothing is +0, as is an exact zero; a sum
// beyond the largest double is an infinity.
// Source: R. M. Neal, Fast exact summation using small and large
// superaccumulators, arXiv:1505.05571 (2015), the small one: the 2,098 bits from
// the smallest subnormal to the largest double in overlapping 64-bit chunks, 32
// bits apart, so that carries are propagated only once in a while.
type Sum struct {
	chunk   [chunks]int64
	left    int32   // additions until carries must be propagated
	special float64 // the sum of the infinities and NaNs met
}

const (
	chunkBits = 32
	chunks    = 67      // 67·32 bits: exponents 0 … 2046, 53 bits of mantissa, and room for the carries
	headroom  = 1 << 10 // a chunk takes this many addends of under 2^53 before it can overflow
)

// Add adds x.
func (s *Sum) Add(x float64) {
	u := math.Float64bits(x)
	exp := int(u >> 52 & 0x7ff)
	m := int64(u & (1<<52 - 1))
	switch exp {
	case 0x7ff:
		s.special += x
		return
	case 0:
		if m == 0 {
			return
		}
		exp = 1
	default:
		m |= 1 << 52
	}
	if s.left == 0 {
		s.carry()
	}
	s.left--
	at, shift := exp>>5, uint(exp&31)
	low := m << shift & (1<<chunkBits - 1)
	high := m >> (chunkBits - shift)
	if int64(u) < 0 {
		low, high = -low, -high
	}
	s.chunk[at] += low
	s.chunk[at+1] += high
}

// Merge adds the sum t.
func (s *Sum) Merge(t *Sum) {
	s.special += t.special
	s.carry()
	c := *t
	c.carry()
	for i, v := range c.chunk {
		s.chunk[i] += v
	}
	s.left -= 2 // a carried chunk is below 2^33, less than two addends
}

// carry brings every chunk but the last into [0, 2^32).
func (s *Sum) carry() {
	s.left = headroom
	var c int64
	for i := range s.chunk {
		v := s.chunk[i] + c
		if i == chunks-1 {
			s.chunk[i] = v
			return
		}
		c = v >> chunkBits // floor
		s.chunk[i] = v & (1<<chunkBits - 1)
	}
}

// Round returns the sum, rounded once.
func (s *Sum) Round() float64 {
	if s.special != 0 { // NaN included
		return s.special
	}
	c := *s
	c.carry()
	negative := c.chunk[chunks-1] < 0
	if negative {
		for i := range c.chunk {
			c.chunk[i] = -c.chunk[i]
		}
		c.carry()
	}
	top := chunks - 1
	for top >= 0 && c.chunk[top] == 0 {
		top--
	}
	if top < 0 {
		return 0
	}
	h := uint64(c.chunk[top])
	length := bits.Len64(h) // the top chunk may exceed 32 bits only when it is the last
	bit := top*chunkBits + length - 1
	x := assemble(c.window(bit), bit)
	if negative {
		return -x
	}
	return x
}

// window returns the 64 bits of c from its highest bit down, the lowest of them
// set if any bit below is. Bit b of the number has weight 2^(b − 1075).
func (c *Sum) window(bit int) uint64 {
	var m uint64
	sticky := false
	low := bit - 63
	for i := range c.chunk {
		v := uint64(c.chunk[i])
		if v == 0 {
			continue
		}
		at := i*chunkBits - low // where the chunk's bit 0 falls in the window
		switch {
		case at >= 0:
			m |= v << uint(at)
		case at > -64:
			m |= v >> uint(-at)
			sticky = sticky || v<<uint(64+at) != 0
		default:
			sticky = true
		}
	}
	if sticky {
		m |= 1 // below the rounding bit, as at least 11 bits are dropped
	}
	return m
}

// assemble rounds m·2^(bit−63), in units of 2^−1075, to a double.
func assemble(m uint64, bit int) float64 {
	exp := bit - 52 // biased exponent of a normal number whose highest bit is bit
	drop := 11      // bits of m below the mantissa
	if exp < 1 {    // subnormal: fewer mantissa bits; bit >= 1, so drop < 64
		drop += 1 - exp
		exp = 0
	}
	q := m >> uint(drop)
	rest := m << uint(64-drop)
	if rest > 1<<63 || rest == 1<<63 && q&1 == 1 {
		q++
	}
	if exp == 0 {
		return math.Float64frombits(q) // a carry into 2^52 makes it normal, as it should
	}
	if q == 1<<53 {
		q, exp = q>>1, exp+1
	}
	if exp >= 0x7ff {
		return math.Inf(1)
	}
	return math.Float64frombits(uint64(exp)<<52 | q&(1<<52-1))
}
