//go:build !(goexperiment.simd && amd64)

package vec

func millsSlice(dst, y []float64) { millsGeneric(dst, y) }
