//go:build goexperiment.simd && amd64

package vec

import "simd/archsimd"

// The slice forms. A vector with a lane outside the region the vector code
// covers goes to the scalar code as a whole, and so does the rest of a slice.

func exp8(dst, x []float64) {
	c, i := consts8, 0
	for ; i+width8 <= len(x); i += width8 {
		xv := load8((*lanes8)(x[i:]))
		if any8(beyond8(xv, &c.hugeFrom, c)) {
			expGeneric(dst[i:i+width8], x[i:i+width8])
			continue
		}
		r, t := expReduce8(xv, load8(&c.zero), c)
		scaleOnce8(expSum8(r, c), t, c).Store((*lanes8)(dst[i:]))
	}
	archsimd.ClearAVXUpperBits()
	expGeneric(dst[i:], x[i:])
}

func log8(dst, x []float64) {
	c, i := consts8, 0
	one := load8(&c.one)
	for ; i+width8 <= len(x); i += width8 {
		xv := load8((*lanes8)(x[i:]))
		if any8(outsideLog8(xv, one, c)) {
			logGeneric(dst[i:i+width8], x[i:i+width8])
			continue
		}
		k2, n := alignBinades8(xv, one, c)
		n.MulAdd(load8(&c.ln2Hi), atanhSum8(xv, k2, n, c)).Store((*lanes8)(dst[i:]))
	}
	archsimd.ClearAVXUpperBits()
	logGeneric(dst[i:], x[i:])
}

func logRatio8(dst, s, k []float64) {
	c, i := consts8, 0
	for ; i+width8 <= len(s); i += width8 {
		sv, kv := load8((*lanes8)(s[i:])), load8((*lanes8)(k[i:]))
		if any8(outsideLog8(sv, kv, c)) {
			logRatioGeneric(dst[i:i+width8], s[i:i+width8], k[i:i+width8])
			continue
		}
		k2, n := alignBinades8(sv, kv, c)
		n.MulAdd(load8(&c.ln2Hi), atanhSum8(sv, k2, n, c)).Store((*lanes8)(dst[i:]))
	}
	archsimd.ClearAVXUpperBits()
	logRatioGeneric(dst[i:], s[i:], k[i:])
}

func normPDF8(dst, x []float64) {
	c, i := consts8, 0
	for ; i+width8 <= len(x); i += width8 {
		xv := load8((*lanes8)(x[i:]))
		if any8(beyond8(xv, &c.tailFrom, c)) {
			normPDFGeneric(dst[i:i+width8], x[i:i+width8])
			continue
		}
		gauss8(abs8(xv, c), c).Mul(load8(&c.invSqrt2Pi)).Store((*lanes8)(dst[i:]))
	}
	archsimd.ClearAVXUpperBits()
	normPDFGeneric(dst[i:], x[i:])
}

func normCDF8(dst, x []float64) {
	c, i := consts8, 0
	for ; i+width8 <= len(x); i += width8 {
		xv := load8((*lanes8)(x[i:]))
		if any8(beyond8(xv, &c.tailFrom, c)) {
			normCDFGeneric(dst[i:i+width8], x[i:i+width8])
			continue
		}
		y := abs8(xv, c)
		tail := gauss8(y, c).Mul(mills8(y, c))
		load8(&c.one).Sub(tail).Merge(tail, xv.Greater(load8(&c.zero))).Store((*lanes8)(dst[i:]))
	}
	archsimd.ClearAVXUpperBits()
	normCDFGeneric(dst[i:], x[i:])
}

// gauss8 is gauss for y < 32, where e^(−y²/2) is a normal number.
func gauss8(y float8, c *table8) float8 {
	hi, lo := halfSquare8(y, c)
	r, t := expReduce8(hi, lo, c)
	return scaleOnce8(expSum8(r, c), t, c)
}

// beyond8 is not zero where |x| is not below the power of two from stands for.
func beyond8(x float8, from *bitLanes8, c *table8) bits8 {
	return x.AsUint64x8().And(loadBits8(&c.absBits)).Add(loadBits8(from)).And(loadBits8(&c.signBit))
}

// outsideLog8 is not zero where inLogBox is false.
func outsideLog8(s, k float8, c *table8) bits8 {
	from := loadBits8(&c.logFrom)
	return s.AsUint64x8().Sub(from).Or(k.AsUint64x8().Sub(from)).And(loadBits8(&c.logMask))
}
