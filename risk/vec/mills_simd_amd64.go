//go:build goexperiment.simd && amd64

package vec

import "simd/archsimd"

func millsSlice(dst, y []float64) {
	i := 0
	switch active {
	case avx512:
		c, end := consts8, archsimd.BroadcastFloat64x8(millsEnd)
		for ; i+width8 <= len(y); i += width8 {
			mills8(load8((*lanes8)(y[i:])).Min(end), c).Store((*lanes8)(dst[i:]))
		}
		archsimd.ClearAVXUpperBits()
	case avx2:
		c, end := consts4, archsimd.BroadcastFloat64x4(millsEnd)
		for ; i+width4 <= len(y); i += width4 {
			mills4(load4((*lanes4)(y[i:])).Min(end), c).Store((*lanes4)(dst[i:]))
		}
		archsimd.ClearAVXUpperBits()
	}
	millsGeneric(dst[i:], y[i:])
}
