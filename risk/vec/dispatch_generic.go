//go:build !(goexperiment.simd && amd64)

package vec

// Without vector code there is one tier.

func bestTier() tier { return scalar }

func expSlice(dst, x []float64)         { expGeneric(dst, x) }
func logSlice(dst, x []float64)         { logGeneric(dst, x) }
func logRatioSlice(dst, s, k []float64) { logRatioGeneric(dst, s, k) }
func normPDFSlice(dst, x []float64)     { normPDFGeneric(dst, x) }
func normCDFSlice(dst, x []float64)     { normCDFGeneric(dst, x) }

func (q *quotes) invert() { q.invertGeneric() }

func (b *BSM) run(want outputs) { b.runGeneric(want, 0, len(b.Spot)) }
