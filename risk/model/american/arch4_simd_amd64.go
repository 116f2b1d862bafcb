//go:build goexperiment.simd && amd64

package american

import (
	"simd/archsimd"
	"unsafe"
)

// What is particular to AVX2; arch8_simd_amd64.go is its counterpart.

const width4 = 4

type (
	float4 = archsimd.Float64x4
	lanes4 = [width4]float64
)

func load4(p *lanes4) float4      { return archsimd.LoadFloat64x4(p) }
func broadcast4(x float64) float4 { return archsimd.BroadcastFloat64x4(x) }

// vectors4 views a column as vectors.
func vectors4(s []float64) []lanes4 {
	return unsafe.Slice((*lanes4)(unsafe.Pointer(unsafe.SliceData(s))), len(s)/width4)
}
