//go:build goexperiment.simd && amd64

package parquet

import (
	"math"
	"math/bits"
	"simd/archsimd"
)

// rangeOf is rangeOfGeneric, eight values at a time. In place of a NaN stands what
// was found before: the smaller of a number and a NaN is either of them, as the
// compiler pleases.
func rangeOf(values []float64) (low, high float64, nulls int) {
	if len(values) < 16 || !archsimd.X86.AVX2() {
		return rangeOfGeneric(values)
	}
	lowA, highA := archsimd.BroadcastFloat64x4(math.Inf(1)), archsimd.BroadcastFloat64x4(math.Inf(-1))
	lowB, highB := lowA, highA
	for ; len(values) >= 8; values = values[8:] {
		a, b := archsimd.LoadFloat64x4((*[4]float64)(values)), archsimd.LoadFloat64x4((*[4]float64)(values[4:]))
		inA, inB := a.Equal(a), b.Equal(b)
		switch in := inA.ToBits() | inB.ToBits()<<4; in {
		case 0xff:
			lowA, highA = lowA.Min(a), highA.Max(a)
			lowB, highB = lowB.Min(b), highB.Max(b)
		case 0:
			nulls += 8
		default:
			nulls += 8 - bits.OnesCount8(in)
			lowA, highA = lowA.Min(a.Merge(lowA, inA)), highA.Max(a.Merge(highA, inA))
			lowB, highB = lowB.Min(b.Merge(lowB, inB)), highB.Max(b.Merge(highB, inB))
		}
	}
	var lows, highs [4]float64
	lowA.Min(lowB).Store(&lows)
	highA.Max(highB).Store(&highs)
	archsimd.ClearAVXUpperBits()
	low, high, n := rangeOfGeneric(values)
	for i := range lows {
		low, high = min(low, lows[i]), max(high, highs[i])
	}
	return low, high, nulls + n
}
