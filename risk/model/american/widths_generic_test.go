//go:build !(goexperiment.simd && amd64)

package american

func widths() []int { return []int{1} }
