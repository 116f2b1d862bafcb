package vec

// The slice forms: dst[i] = f(x[i]), with the bits of the scalar forms. dst may be
// the very slice x, but must not overlap it otherwise. Lengths must agree.

// Exp sets dst to eˣ; see Exp1.
func Exp(dst, x []float64) {
	checkPair(dst, x)
	expSlice(dst, x)
}

// Log sets dst to ln x; see Log1.
func Log(dst, x []float64) {
	checkPair(dst, x)
	logSlice(dst, x)
}

// LogRatio sets dst to ln(s/k); see LogRatio1. dst may be s or k.
func LogRatio(dst, s, k []float64) {
	checkPair(dst, s)
	checkPair(dst, k)
	logRatioSlice(dst, s, k)
}

// NormPDF sets dst to φ(x); see NormPDF1.
func NormPDF(dst, x []float64) {
	checkPair(dst, x)
	normPDFSlice(dst, x)
}

// NormCDF sets dst to Φ(x); see NormCDF1.
func NormCDF(dst, x []float64) {
	checkPair(dst, x)
	normCDFSlice(dst, x)
}

func checkPair(dst, x []float64) {
	if len(dst) != len(x) {
		panic(lengthMismatch)
	}
}
