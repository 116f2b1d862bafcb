//go:build goexperiment.simd && amd64

package vec

import (
	"simd/archsimd"
	"unsafe"
)

// The scalar functions of exp.go, log.go and normal.go, lane by lane. Each is
// small enough to be inlined, which is why the exponential comes in two parts.

var (
	room8   [unsafe.Sizeof(table8{}) + 64]byte
	consts8 = (*table8)(aligned(unsafe.Pointer(&room8)))
)

func init() { consts8.fill() }

func load8(p *lanes8) float8       { return archsimd.LoadFloat64x8(p) }
func loadBits8(p *bitLanes8) bits8 { return archsimd.LoadUint64x8(p) }

func abs8(x float8, c *table8) float8 { return x.AsUint64x8().And(loadBits8(&c.absBits)).AsFloat64x8() }

// expReduce8 and expSum8 together are expReduced.
func expReduce8(hi, lo float8, c *table8) (r, t float8) {
	shift := load8(&c.roundShift)
	t = hi.MulAdd(load8(&c.log2E), shift)
	k := t.Sub(shift)
	return k.MulAdd(load8(&c.negLn2Hi), hi).Add(k.MulAdd(load8(&c.negLn2Lo), lo)), t
}

func expSum8(r float8, c *table8) float8 {
	z := r.Mul(r)
	even := z.MulAdd(load8(&c.expC10), load8(&c.expC8)).MulAdd(z, load8(&c.expC6)).MulAdd(z, load8(&c.expC4)).MulAdd(z, load8(&c.expC2))
	odd := z.MulAdd(load8(&c.expC11), load8(&c.expC9)).MulAdd(z, load8(&c.expC7)).MulAdd(z, load8(&c.expC5)).MulAdd(z, load8(&c.expC3))
	return odd.MulAdd(r, even).MulAdd(z, r).Add(load8(&c.one))
}

func scaleOnce8(p, t float8, c *table8) float8 {
	return p.Mul(t.AsUint64x8().ShiftAllLeft(52).Add(loadBits8(&c.oneBits)).AsFloat64x8())
}

// alignBinades8 is the first half of logRatio, atanhSum8 is atanhSum.
func alignBinades8(s, k float8, c *table8) (k2, n float8) {
	sb, kb := s.AsUint64x8(), k.AsUint64x8()
	e := sb.Sub(kb).Add(loadBits8(&c.halfBinade)).And(loadBits8(&c.exponentBits))
	n = e.Add(loadBits8(&c.biasBits)).ShiftAllRight(52).Add(loadBits8(&c.roundBits)).AsFloat64x8().Sub(load8(&c.roundShift))
	return kb.Add(e).AsFloat64x8(), n
}

func atanhSum8(s, k, n float8, c *table8) float8 {
	u := s.Sub(k).Div(s.Add(k))
	z := u.Mul(u)
	w := z.Mul(z)
	even := w.MulAdd(load8(&c.logC6), load8(&c.logC4)).MulAdd(w, load8(&c.logC2)).MulAdd(w, load8(&c.logC0))
	odd := w.MulAdd(load8(&c.logC7), load8(&c.logC5)).MulAdd(w, load8(&c.logC3)).MulAdd(w, load8(&c.logC1))
	sum := u.Mul(z).Mul(odd.MulAdd(z, even))
	return u.MulAdd(load8(&c.two), n.MulAdd(load8(&c.ln2Lo), sum))
}

// halfSquare8 returns −y²/2 in two parts, as gauss takes it.
func halfSquare8(y float8, c *table8) (hi, lo float8) {
	h := y.Mul(load8(&c.half)).Mul(y)
	return load8(&c.zero).Sub(h), y.Mul(load8(&c.negHalf)).MulAdd(y, h)
}

// millsTop8 over millsBottom8 is mills; z = y².
func millsTop8(y, z float8, c *table8) float8 {
	even := z.MulAdd(load8(&c.millsP10), load8(&c.millsP8)).MulAdd(z, load8(&c.millsP6)).MulAdd(z, load8(&c.millsP4)).MulAdd(z, load8(&c.millsP2)).MulAdd(z, load8(&c.millsP0))
	odd := z.MulAdd(load8(&c.millsP9), load8(&c.millsP7)).MulAdd(z, load8(&c.millsP5)).MulAdd(z, load8(&c.millsP3)).MulAdd(z, load8(&c.millsP1))
	return odd.MulAdd(y, even)
}

func millsBottom8(y, z float8, c *table8) float8 {
	even := z.MulAdd(load8(&c.millsQ10), load8(&c.millsQ8)).MulAdd(z, load8(&c.millsQ6)).MulAdd(z, load8(&c.millsQ4)).MulAdd(z, load8(&c.millsQ2)).MulAdd(z, load8(&c.millsQ0))
	odd := z.MulAdd(load8(&c.millsQ11), load8(&c.millsQ9)).MulAdd(z, load8(&c.millsQ7)).MulAdd(z, load8(&c.millsQ5)).MulAdd(z, load8(&c.millsQ3)).MulAdd(z, load8(&c.millsQ1))
	return odd.MulAdd(y, even)
}

func mills8(y float8, c *table8) float8 {
	z := y.Mul(y)
	return millsTop8(y, z, c).Div(millsBottom8(y, z, c))
}
