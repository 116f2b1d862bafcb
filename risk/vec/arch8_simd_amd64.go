//go:build goexperiment.simd && amd64

package vec

import "simd/archsimd"

// What is particular to AVX-512; arch4_simd_amd64.go is its counterpart.

const width8 = 8

type (
	float8    = archsimd.Float64x8
	bits8     = archsimd.Uint64x8
	mask8     = archsimd.Mask64x8
	lanes8    = [width8]float64
	bitLanes8 = [width8]uint64
)

// scale8 returns p·2^k for any integer k, rounded once; see scaleTwice.
func scale8(p, t float8, c *table8) float8 { return p.Scale(t.Sub(load8(&c.roundShift))) }

// any8 reports whether any bit is set.
func any8(x bits8) bool { return !x.GetLo().Or(x.GetHi()).IsZero() }
