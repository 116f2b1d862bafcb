//go:build goexperiment.simd && amd64

package vec

import "simd/archsimd"

// What is particular to AVX2; arch8_simd_amd64.go is its counterpart.

const width4 = 4

type (
	float4    = archsimd.Float64x4
	bits4     = archsimd.Uint64x4
	mask4     = archsimd.Mask64x4
	lanes4    = [width4]float64
	bitLanes4 = [width4]uint64
)

// scale4 returns p·2^k for any integer k, rounded once; see scaleTwice.
func scale4(p, t float4, c *table4) float4 {
	shift, ones := load4(&c.roundShift), loadBits4(&c.oneBits)
	h := t.Sub(shift).MulAdd(load4(&c.half), shift)
	tb, hb := t.AsUint64x4(), h.AsUint64x4()
	return p.Mul(hb.ShiftAllLeft(52).Add(ones).AsFloat64x4()).Mul(tb.Sub(hb).ShiftAllLeft(52).Add(ones).AsFloat64x4())
}

// any4 reports whether any bit is set.
func any4(x bits4) bool { return !x.IsZero() }
