//go:build !(goexperiment.simd && amd64)

package shortest

func put(dst *[Size]byte, sign int, sixteen, last uint64, point int) int {
	return place(dst, sign, sixteen, last, point)
}
