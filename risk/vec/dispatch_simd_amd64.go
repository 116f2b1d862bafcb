//go:build goexperiment.simd && amd64

package vec

import (
	"math"
	"simd/archsimd"
)

// A switch at each entry, rather than a table of functions, lets the compiler see
// that no argument escapes: a caller's BSM stays on its stack.

func bestTier() tier {
	switch {
	case archsimd.X86.AVX512():
		return avx512
	case archsimd.X86.AVX2() && archsimd.X86.FMA():
		return avx2
	}
	return scalar
}

func (b *BSM) run(want outputs) {
	switch active {
	case avx512:
		b.run8(want)
	case avx2:
		b.run4(want)
	default:
		b.runGeneric(want, 0, len(b.Spot))
	}
}

func (q *quotes) invert() {
	switch active {
	case avx512:
		q.invert8()
	case avx2:
		q.invert4()
	default:
		q.invertGeneric()
	}
}

func expSlice(dst, x []float64) {
	switch active {
	case avx512:
		exp8(dst, x)
	case avx2:
		exp4(dst, x)
	default:
		expGeneric(dst, x)
	}
}

func logSlice(dst, x []float64) {
	switch active {
	case avx512:
		log8(dst, x)
	case avx2:
		log4(dst, x)
	default:
		logGeneric(dst, x)
	}
}

func logRatioSlice(dst, s, k []float64) {
	switch active {
	case avx512:
		logRatio8(dst, s, k)
	case avx2:
		logRatio4(dst, s, k)
	default:
		logRatioGeneric(dst, s, k)
	}
}

func normPDFSlice(dst, x []float64) {
	switch active {
	case avx512:
		normPDF8(dst, x)
	case avx2:
		normPDF4(dst, x)
	default:
		normPDFGeneric(dst, x)
	}
}

func normCDFSlice(dst, x []float64) {
	switch active {
	case avx512:
		normCDF8(dst, x)
	case avx2:
		normCDF4(dst, x)
	default:
		normCDFGeneric(dst, x)
	}
}

// edgeLines values those of lines lo to hi that are outside the box.
func (b *BSM) edgeLines(want outputs, lo, hi int) {
	for i := lo; i < hi; i++ {
		if !inBox(b.Spot[i], b.Strike[i], b.Time[i], b.Vol[i], b.Rate[i], b.Yield[i], b.Sign[i]) {
			b.edge(want, i)
		}
	}
}

// inImpliedBox reports whether the vector code covers a quote: forward, strike and p
// in [2^−128, 2^128), and not a case of its own.
func inImpliedBox(f, k, p float64) bool {
	from := ((math.Float64bits(f) - priceFrom) | (math.Float64bits(k) - priceFrom) | (math.Float64bits(p) - priceFrom)) & priceMask
	return from == 0 && (f != k || p >= float64(f*atStrike))
}
