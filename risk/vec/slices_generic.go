package vec

func expGeneric(dst, x []float64) {
	for i, x := range x {
		dst[i] = Exp1(x)
	}
}

func logGeneric(dst, x []float64) {
	for i, x := range x {
		dst[i] = Log1(x)
	}
}

func logRatioGeneric(dst, s, k []float64) {
	for i, s := range s {
		dst[i] = LogRatio1(s, k[i])
	}
}

func normPDFGeneric(dst, x []float64) {
	for i, x := range x {
		dst[i] = NormPDF1(x)
	}
}

func normCDFGeneric(dst, x []float64) {
	for i, x := range x {
		dst[i] = NormCDF1(x)
	}
}
