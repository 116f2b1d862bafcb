//go:build goexperiment.simd && amd64

package american

// widths are those this machine can run, the scalar form first.
func widths() []int {
	switch lanes() {
	case width8:
		return []int{1, width4, width8}
	case width4:
		return []int{1, width4}
	}
	return []int{1}
}
