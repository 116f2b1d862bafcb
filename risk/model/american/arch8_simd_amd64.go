//go:build goexperiment.simd && amd64

package american

import (
	"simd/archsimd"
	"unsafe"
)

// What is particular to AVX-512; arch4_simd_amd64.go is its counterpart.

const width8 = 8

type (
	float8 = archsimd.Float64x8
	lanes8 = [width8]float64
)

func load8(p *lanes8) float8      { return archsimd.LoadFloat64x8(p) }
func broadcast8(x float64) float8 { return archsimd.BroadcastFloat64x8(x) }

// vectors8 views a column as vectors.
func vectors8(s []float64) []lanes8 {
	return unsafe.Slice((*lanes8)(unsafe.Pointer(unsafe.SliceData(s))), len(s)/width8)
}
