package vec

// Mills sets dst to the Mills ratio of the normal distribution, Φ(−y)·e^(y²/2).
//
// Computes a rational function of y, the one NormCDF uses. A sum of terms
// e^(c − d²/2)·Mills(|d|) is how a product of a discount factor and a probability
// is had with one exponential. dst may be the very slice y, but must not overlap
// it otherwise. Units: none.
// Special cases: y above 1e15 is taken as 1e15; NaN or y < 0 is out of range.
// Accuracy: 6e-16 relative. Source: see NormCDF1.
func Mills(dst, y []float64) {
	checkPair(dst, y)
	millsSlice(dst, y)
}

func millsGeneric(dst, y []float64) {
	for i, y := range y {
		dst[i] = mills(min(y, millsEnd))
	}
}
