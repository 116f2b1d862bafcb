//go:build !(goexperiment.simd && amd64)

package parquet

func rangeOf(values []float64) (low, high float64, nulls int) { return rangeOfGeneric(values) }
