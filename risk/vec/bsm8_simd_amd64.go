//go:build goexperiment.simd && amd64

package vec

import (
	"simd/archsimd"
	"unsafe"
)

// The batch goes through short loops, one per stage, a block at a time: each loop
// is small enough to run without spilling registers, and what a block leaves
// between two stages stays in the first-level cache.

// scratch8 is what a block leaves between stages; an and bn take the place of
// a = S·e^(−qT) and b = K·e^(−rT). See bsmTerms for the names.
type scratch8 struct{ an, bn, d1, d2, rv, sq, hi, lo, x [blockLines / width8]lanes8 }

// columns8 views n vectors of a slice from line i on.
func columns8(s []float64, i, n int) []lanes8 {
	return unsafe.Slice((*lanes8)(unsafe.Pointer(&s[i : i+n*width8][0])), n)
}

func (b *BSM) run8(want outputs) {
	lines := len(b.Spot)
	if lines < width8 {
		b.runGeneric(want, 0, lines)
		return
	}
	var room [unsafe.Sizeof(scratch8{}) + 64]byte
	sc := (*scratch8)(aligned(unsafe.Pointer(&room)))
	for i := 0; i < lines; {
		if lines-i < width8 {
			i = lines - width8 // value some lines twice rather than the last few one by one
		}
		n := min(lines-i, blockLines) / width8
		if b.block8(sc, want, i, n) {
			b.edgeLines(want, i, i+n*width8)
		}
		i += n * width8
	}
	archsimd.ClearAVXUpperBits()
}

// block8 runs n vectors from line i on through the stages, and reports whether a
// line among them lies outside the box.
func (b *BSM) block8(sc *scratch8, want outputs, i, n int) bool {
	c := consts8
	s, k, t, v := columns8(b.Spot, i, n), columns8(b.Strike, i, n), columns8(b.Time, i, n), columns8(b.Vol, i, n)
	r, q, w := columns8(b.Rate, i, n), columns8(b.Yield, i, n), columns8(b.Sign, i, n)
	outside := outside8(s, k, t, v, r, q, w, c)
	discounted8(sc.an[:n], s, q, t, c)
	discounted8(sc.bn[:n], k, r, t, c)
	drifted8(sc.d1[:n], sc.d2[:n], s, k, t, r, q, c)
	distances8(sc, t, v, c)
	density8(sc, n, c)
	tail8(sc.an[:n], sc.d1[:n], sc.x[:n], w, c)
	tail8(sc.bn[:n], sc.d2[:n], sc.x[:n], w, c)
	if want == priceOnly {
		difference8(columns8(b.Price, i, n), sc.an[:n], sc.bn[:n])
		return outside
	}
	b.core8(sc, i, n, c)
	if want == allOutputs {
		b.further8(sc, i, n, c)
	}
	return outside
}

// discounted8 sets dst to p·e^(−rate·t).
func discounted8(dst, p, rate, t []lanes8, c *table8) {
	n := len(dst)
	p, rate, t = p[:n], rate[:n], t[:n]
	for j := range dst {
		zero, tv := load8(&c.zero), load8(&t[j])
		neg := zero.Sub(load8(&rate[j]))
		e := neg.Mul(tv)
		r, shifted := expReduce8(e, neg.MulAdd(tv, zero.Sub(e)), c)
		load8(&p[j]).Mul(scaleOnce8(expSum8(r, c), shifted, c)).Store(&dst[j])
	}
}

// outside8 reports whether a line is outside the box.
func outside8(s, k, t, v, r, q, w []lanes8, c *table8) bool {
	n := len(s)
	k, t, v, r, q, w = k[:n], t[:n], v[:n], r[:n], q[:n], w[:n]
	priceFrom, timeFrom := loadBits8(&c.priceFrom), loadBits8(&c.timeFrom)
	out := priceFrom.Xor(priceFrom)
	for j := range s {
		prices := load8(&s[j]).AsUint64x8().Sub(priceFrom).Or(load8(&k[j]).AsUint64x8().Sub(priceFrom)).And(loadBits8(&c.priceMask))
		times := load8(&t[j]).AsUint64x8().Sub(timeFrom).Or(load8(&v[j]).AsUint64x8().Sub(timeFrom)).And(loadBits8(&c.timeMask))
		rates := load8(&r[j]).AsUint64x8().Or(load8(&q[j]).AsUint64x8()).And(loadBits8(&c.rateMask))
		signs := load8(&w[j]).AsUint64x8().And(loadBits8(&c.absBits)).Xor(loadBits8(&c.oneBits))
		out = out.Or(prices.Or(times)).Or(rates.Or(signs))
	}
	return any8(out)
}

// drifted8 sets m to ln(s/k) + (r−q)·t, and lost to what rounding has taken from it.
func drifted8(m, lost, s, k, t, r, q []lanes8, c *table8) {
	n := len(m)
	lost, s, k, t, r, q = lost[:n], s[:n], k[:n], t[:n], r[:n], q[:n]
	for j := range m {
		sv := load8(&s[j])
		k2, e := alignBinades8(sv, load8(&k[j]), c)
		rest := atanhSum8(sv, k2, e, c)
		rest = load8(&r[j]).Sub(load8(&q[j])).MulAdd(load8(&t[j]), rest)
		sum := e.MulAdd(load8(&c.ln2Hi), rest)
		sum.Store(&m[j])
		rest.Sub(e.MulAdd(load8(&c.negLn2Hi), sum)).Store(&lost[j])
	}
}

// distances8 sets sq and rv, turns d1 and d2 from what drifted8 has left there into
// d₁ and d₂, and sets hi and lo to −y²/2 for the nearer of the two, x to the price
// that goes with it.
func distances8(sc *scratch8, t, v []lanes8, c *table8) {
	n := len(t)
	v = v[:n]
	a, b, d1, d2, rv, sq, hi, lo, x := sc.an[:n], sc.bn[:n], sc.d1[:n], sc.d2[:n], sc.rv[:n], sc.sq[:n], sc.hi[:n], sc.lo[:n], sc.x[:n]
	for j := range t {
		tv, vv, zero := load8(&t[j]), load8(&v[j]), load8(&c.zero)
		root := tv.Sqrt()
		root.Store(&sq[j])
		vs := vv.Mul(root)
		inv := load8(&c.one).Div(vs)
		inv.Store(&rv[j])
		halfVar, negVS := vv.Mul(vv.Mul(load8(&c.half))), zero.Sub(vs)
		vsLost := zero.Sub(root).MulAdd(root, tv).MulAdd(halfVar.Mul(inv), vv.MulAdd(root, negVS))
		m := load8(&d1[j])
		d := m.Mul(inv)
		lost := d.MulAdd(negVS, m).Add(load8(&d2[j]))
		e1, e2 := vs.MulAdd(load8(&c.half), d), vs.MulAdd(load8(&c.negHalf), d)
		e1.Store(&d1[j])
		e2.Store(&d2[j])
		first := d.LessEqual(zero)
		load8(&a[j]).Merge(load8(&b[j]), first).Store(&x[j])
		y, side := e1.Merge(e2, first), load8(&c.half).Merge(load8(&c.negHalf), first)
		lost = vsLost.MulAdd(d.MulAdd(load8(&c.negTwo), y), lost).MulAdd(inv, vs.MulAdd(side, d.Sub(y)))
		y = y.Min(load8(&c.gaussEnd)).Max(load8(&c.negGaussEnd))
		half := y.Mul(load8(&c.negHalf))
		e := half.Mul(y)
		e.Store(&hi[j])
		zero.Sub(y).MulAdd(lost, half.MulAdd(y, zero.Sub(e))).Store(&lo[j])
	}
}

// density8 turns x into √(2π)·S·e^(−qT)·φ(d₁).
func density8(sc *scratch8, n int, c *table8) {
	hi, lo, x := sc.hi[:n], sc.lo[:n], sc.x[:n]
	for j := range x {
		r, t := expReduce8(load8(&hi[j]), load8(&lo[j]), c)
		scale8(expSum8(r, c), t, c).Mul(load8(&x[j])).Store(&x[j])
	}
}

// tail8 turns p, a discounted price, into w·p·Φ(w·d).
func tail8(p, d, x, w []lanes8, c *table8) {
	n := len(p)
	d, x, w = d[:n], x[:n], w[:n]
	for j := range p {
		dv, sign, pv, zero := load8(&d[j]), load8(&w[j]), load8(&p[j]), load8(&c.zero)
		y := abs8(dv, c)
		z := y.Mul(y)
		tail := load8(&x[j]).Mul(millsTop8(y, z, c).Div(millsBottom8(y, z, c)))
		tail = pv.Sub(tail).Merge(tail, sign.Mul(dv).Greater(zero))
		sign.MulAdd(tail, zero).Store(&p[j])
	}
}

// difference8 sets dst to x − y: the price, where nothing else is wanted.
func difference8(dst, x, y []lanes8) {
	n := len(dst)
	x, y = x[:n], y[:n]
	for j := range dst {
		load8(&x[j]).Sub(load8(&y[j])).Store(&dst[j])
	}
}

// core8 sets the outputs of Core, as coreGeneric does.
func (b *BSM) core8(sc *scratch8, i, n int, c *table8) {
	s, t, v, r, q := columns8(b.Spot, i, n), columns8(b.Time, i, n), columns8(b.Vol, i, n), columns8(b.Rate, i, n), columns8(b.Yield, i, n)
	price, delta, gamma := columns8(b.Price, i, n), columns8(b.Delta, i, n), columns8(b.Gamma, i, n)
	vega, theta, rho := columns8(b.Vega, i, n), columns8(b.Theta, i, n), columns8(b.Rho, i, n)
	san, sbn, srv, ssq, sx := sc.an[:n], sc.bn[:n], sc.rv[:n], sc.sq[:n], sc.x[:n]
	for j := range n {
		zero, vv := load8(&c.zero), load8(&v[j])
		an, bn, x := load8(&san[j]), load8(&sbn[j]), load8(&sx[j]).Mul(load8(&c.invSqrt2Pi))
		rs := load8(&c.one).Div(load8(&s[j]))
		g := x.Mul(load8(&srv[j]))
		an.Sub(bn).Store(&price[j])
		an.Mul(rs).Store(&delta[j])
		g.Mul(rs).Mul(rs).Store(&gamma[j])
		x.Mul(load8(&ssq[j])).Store(&vega[j])
		decay := g.MulAdd(zero.Sub(vv.Mul(vv.Mul(load8(&c.half)))), zero)
		load8(&q[j]).MulAdd(an, zero.Sub(load8(&r[j])).MulAdd(bn, decay)).Store(&theta[j])
		load8(&t[j]).Mul(bn).Store(&rho[j])
	}
}

// further8 sets what All gives beyond Core, as allGeneric does.
func (b *BSM) further8(sc *scratch8, i, n int, c *table8) {
	s, t, v, r, q := columns8(b.Spot, i, n), columns8(b.Time, i, n), columns8(b.Vol, i, n), columns8(b.Rate, i, n), columns8(b.Yield, i, n)
	price, delta, gamma, theta := columns8(b.Price, i, n), columns8(b.Delta, i, n), columns8(b.Gamma, i, n), columns8(b.Theta, i, n)
	carryRho, vanna, volga := columns8(b.CarryRho, i, n), columns8(b.Vanna, i, n), columns8(b.Volga, i, n)
	charm, residual := columns8(b.Charm, i, n), columns8(b.Residual, i, n)
	san, srv, ssq, sx, sd1, sd2 := sc.an[:n], sc.rv[:n], sc.sq[:n], sc.x[:n], sc.d1[:n], sc.d2[:n]
	for j := range n {
		zero, sv, tv, vv, rt, qt := load8(&c.zero), load8(&s[j]), load8(&t[j]), load8(&v[j]), load8(&r[j]), load8(&q[j])
		rs := load8(&c.one).Div(sv)
		rv, d2 := load8(&srv[j]), load8(&sd2[j])
		g := load8(&sx[j]).Mul(load8(&c.invSqrt2Pi)).Mul(rv)
		gs := g.Mul(rs)
		zero.Sub(tv).MulAdd(load8(&san[j]), zero).Store(&carryRho[j])
		gs.Mul(load8(&ssq[j])).MulAdd(zero.Sub(d2), zero).Store(&vanna[j])
		g.Mul(tv).MulAdd(load8(&sd1[j]).Mul(d2), zero).Store(&volga[j])
		halfVar, dv, pv := vv.Mul(vv.Mul(load8(&c.half))), load8(&delta[j]), load8(&price[j])
		qt.MulAdd(dv, gs.MulAdd(d2.Mul(halfVar).MulAdd(rv, qt.Sub(rt)), zero)).Store(&charm[j])
		e := halfVar.MulAdd(load8(&gamma[j]).Mul(sv).Mul(sv), load8(&theta[j]))
		e = zero.Sub(rt).MulAdd(pv, rt.Sub(qt).MulAdd(sv.Mul(dv), e))
		abs8(e, c).Div(abs8(pv, c).Max(sv.Mul(load8(&c.residualFloor)))).Store(&residual[j])
	}
}
