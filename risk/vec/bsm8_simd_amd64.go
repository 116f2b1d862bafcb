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
type scratch8 struct{ an, bn, d1, d2, rv, sq, x [blockLines / width8]lanes8 }

// columns8 views lines i to i+lines of a slice as vectors.
func columns8(s []float64, i, lines int) []lanes8 {
	return unsafe.Slice((*lanes8)(unsafe.Pointer(&s[i : i+lines][0])), lines/width8)
}

func (b *BSM) run8(want outputs) {
	n := len(b.Spot)
	if n < width8 {
		b.runGeneric(want, 0, n)
		return
	}
	var room [unsafe.Sizeof(scratch8{}) + 64]byte
	sc := (*scratch8)(aligned(unsafe.Pointer(&room)))
	for i := 0; i < n; {
		if n-i < width8 {
			i = n - width8 // value some lines twice rather than the last few one by one
		}
		lines := min(n-i, blockLines) &^ (width8 - 1)
		if b.block8(sc, want, i, lines) {
			b.edgeLines(want, i, i+lines)
		}
		i += lines
	}
	archsimd.ClearAVXUpperBits()
}

// block8 runs one block and reports whether a line in it lies outside the box.
func (b *BSM) block8(sc *scratch8, want outputs, i, lines int) bool {
	c := consts8
	s, k, t, v := columns8(b.Spot, i, lines), columns8(b.Strike, i, lines), columns8(b.Time, i, lines), columns8(b.Vol, i, lines)
	r, q, w := columns8(b.Rate, i, lines), columns8(b.Yield, i, lines), columns8(b.Sign, i, lines)
	discounted8(sc.an[:], s, q, t, c)
	discounted8(sc.bn[:], k, r, t, c)
	outside := distances8(sc, s, k, t, v, r, q, w, c)
	density8(sc, len(s), c)
	tail8(sc.an[:], sc.d1[:], sc.x[:], w, c)
	tail8(sc.bn[:], sc.d2[:], sc.x[:], w, c)
	price := columns8(b.Price, i, lines)
	if want == priceOnly {
		prices8(sc, price)
		return outside
	}
	delta, gamma, vega := columns8(b.Delta, i, lines), columns8(b.Gamma, i, lines), columns8(b.Vega, i, lines)
	theta, rho := columns8(b.Theta, i, lines), columns8(b.Rho, i, lines)
	core8(sc, s, t, v, r, q, price, delta, gamma, vega, theta, rho, c)
	if want == allOutputs {
		second8(sc, s, t, v, r, q, delta, columns8(b.CarryRho, i, lines), columns8(b.Vanna, i, lines), columns8(b.Volga, i, lines), columns8(b.Charm, i, lines), c)
		residual8(s, v, r, q, price, delta, gamma, theta, columns8(b.Residual, i, lines), c)
	}
	return outside
}

// discounted8 sets dst to p·e^(−rate·t).
func discounted8(dst, p, rate, t []lanes8, c *table8) {
	n := len(p)
	dst, rate, t = dst[:n], rate[:n], t[:n]
	for j := range p {
		tm := load8(&t[j])
		neg := load8(&c.zero).Sub(load8(&rate[j]))
		e := neg.Mul(tm)
		red, shifted := expReduce8(e, neg.MulAdd(tm, load8(&c.zero).Sub(e)), c)
		load8(&p[j]).Mul(scaleOnce8(expSum8(red, c), shifted, c)).Store(&dst[j])
	}
}

// distances8 sets d1, d2, rv and sq, and reports whether any line is outside the box.
func distances8(sc *scratch8, s, k, t, v, r, q, w []lanes8, c *table8) bool {
	n := len(s)
	k, t, v, r, q, w = k[:n], t[:n], v[:n], r[:n], q[:n], w[:n]
	d1, d2, rv, sq := sc.d1[:n], sc.d2[:n], sc.rv[:n], sc.sq[:n]
	out := loadBits8(&c.oneBits)
	out = out.Xor(out)
	for j := range s {
		sv, kv, tv, vv, rt, qt := load8(&s[j]), load8(&k[j]), load8(&t[j]), load8(&v[j]), load8(&r[j]), load8(&q[j])
		root := tv.Sqrt()
		root.Store(&sq[j])
		vs := vv.Mul(root)
		inv := load8(&c.one).Div(vs)
		inv.Store(&rv[j])
		k2, e := alignBinades8(sv, kv, c)
		m := e.MulAdd(load8(&c.ln2Hi), rt.Sub(qt).MulAdd(tv, atanhSum8(sv, k2, e, c)))
		d := m.Mul(inv)
		d = d.MulAdd(load8(&c.zero).Sub(vs), m).MulAdd(inv, d)
		vs.MulAdd(load8(&c.half), d).Store(&d1[j])
		vs.MulAdd(load8(&c.negHalf), d).Store(&d2[j])
		prices := sv.AsUint64x8().Sub(loadBits8(&c.priceFrom)).Or(kv.AsUint64x8().Sub(loadBits8(&c.priceFrom))).And(loadBits8(&c.priceMask))
		times := tv.AsUint64x8().Sub(loadBits8(&c.timeFrom)).Or(vv.AsUint64x8().Sub(loadBits8(&c.timeFrom))).And(loadBits8(&c.timeMask))
		rates := rt.AsUint64x8().Or(qt.AsUint64x8()).And(loadBits8(&c.rateMask))
		signs := load8(&w[j]).AsUint64x8().And(loadBits8(&c.absBits)).Xor(loadBits8(&c.oneBits))
		out = out.Or(prices.Or(times)).Or(rates.Or(signs))
	}
	return any8(out)
}

// density8 sets x to √(2π)·S·e^(−qT)·φ(d₁), from the smaller distance.
func density8(sc *scratch8, n int, c *table8) {
	a, b, d1, d2, x := sc.an[:n], sc.bn[:n], sc.d1[:n], sc.d2[:n], sc.x[:n]
	for j := range a {
		y1, y2 := abs8(load8(&d1[j]), c), abs8(load8(&d2[j]), c)
		hi, lo := halfSquare8(y1.Min(y2).Min(load8(&c.gaussEnd)), c)
		r, t := expReduce8(hi, lo, c)
		first := y1.LessEqual(y2)
		scale8(expSum8(r, c), t, c).Mul(load8(&a[j]).Merge(load8(&b[j]), first)).Store(&x[j])
	}
}

// tail8 turns p, a discounted price, into w·p·Φ(w·d).
func tail8(p, d, x, w []lanes8, c *table8) {
	n := len(w)
	p, d, x = p[:n], d[:n], x[:n]
	for j := range w {
		dv, sign, pv := load8(&d[j]), load8(&w[j]), load8(&p[j])
		y := abs8(dv, c)
		z := y.Mul(y)
		tail := load8(&x[j]).Mul(millsTop8(y, z, c).Div(millsBottom8(y, z, c)))
		zero := load8(&c.zero)
		tail = pv.Sub(tail).Merge(tail, sign.Mul(dv).Greater(zero))
		sign.MulAdd(tail, zero).Store(&p[j])
	}
}

func prices8(sc *scratch8, price []lanes8) {
	an, bn := sc.an[:len(price)], sc.bn[:len(price)]
	for j := range price {
		load8(&an[j]).Sub(load8(&bn[j])).Store(&price[j])
	}
}

func core8(sc *scratch8, s, t, v, r, q, price, delta, gamma, vega, theta, rho []lanes8, c *table8) {
	n := len(s)
	t, v, r, q = t[:n], v[:n], r[:n], q[:n]
	price, delta, gamma, vega, theta, rho = price[:n], delta[:n], gamma[:n], vega[:n], theta[:n], rho[:n]
	sa, sb, srv, ssq, sx := sc.an[:n], sc.bn[:n], sc.rv[:n], sc.sq[:n], sc.x[:n]
	for j := range s {
		zero := load8(&c.zero)
		an, bn, x := load8(&sa[j]), load8(&sb[j]), load8(&sx[j]).Mul(load8(&c.invSqrt2Pi))
		rs := load8(&c.one).Div(load8(&s[j]))
		g := x.Mul(load8(&srv[j]))
		an.Sub(bn).Store(&price[j])
		an.Mul(rs).Store(&delta[j])
		g.Mul(rs).Mul(rs).Store(&gamma[j])
		x.Mul(load8(&ssq[j])).Store(&vega[j])
		vv := load8(&v[j])
		decay := g.MulAdd(zero.Sub(vv.Mul(vv.Mul(load8(&c.half)))), zero)
		load8(&q[j]).MulAdd(an, zero.Sub(load8(&r[j])).MulAdd(bn, decay)).Store(&theta[j])
		load8(&t[j]).Mul(bn).Store(&rho[j])
	}
}

// second8 sets the remaining derivatives.
func second8(sc *scratch8, s, t, v, r, q, delta, carryRho, vanna, volga, charm []lanes8, c *table8) {
	n := len(s)
	t, v, r, q, delta, carryRho, vanna, volga, charm = t[:n], v[:n], r[:n], q[:n], delta[:n], carryRho[:n], vanna[:n], volga[:n], charm[:n]
	sa, srv, ssq, sx, sd1, sd2 := sc.an[:n], sc.rv[:n], sc.sq[:n], sc.x[:n], sc.d1[:n], sc.d2[:n]
	for j := range s {
		zero := load8(&c.zero)
		rs := load8(&c.one).Div(load8(&s[j]))
		rv, tv, d2, vv, qt := load8(&srv[j]), load8(&t[j]), load8(&sd2[j]), load8(&v[j]), load8(&q[j])
		g := load8(&sx[j]).Mul(load8(&c.invSqrt2Pi)).Mul(rv)
		gs := g.Mul(rs)
		zero.Sub(tv).MulAdd(load8(&sa[j]), zero).Store(&carryRho[j])
		gs.Mul(load8(&ssq[j])).MulAdd(zero.Sub(d2), zero).Store(&vanna[j])
		g.Mul(tv).MulAdd(load8(&sd1[j]).Mul(d2), zero).Store(&volga[j])
		drift := d2.Mul(vv.Mul(vv.Mul(load8(&c.half)))).MulAdd(rv, qt.Sub(load8(&r[j])))
		qt.MulAdd(load8(&delta[j]), gs.MulAdd(drift, zero)).Store(&charm[j])
	}
}

func residual8(s, v, r, q, price, delta, gamma, theta, residual []lanes8, c *table8) {
	n := len(s)
	v, r, q, price, delta, gamma, theta, residual = v[:n], r[:n], q[:n], price[:n], delta[:n], gamma[:n], theta[:n], residual[:n]
	for j := range s {
		sv, vv, rt, p := load8(&s[j]), load8(&v[j]), load8(&r[j]), load8(&price[j])
		e := vv.Mul(vv.Mul(load8(&c.half))).MulAdd(load8(&gamma[j]).Mul(sv).Mul(sv), load8(&theta[j]))
		e = rt.Sub(load8(&q[j])).MulAdd(sv.Mul(load8(&delta[j])), e)
		e = load8(&c.zero).Sub(rt).MulAdd(p, e)
		abs8(e, c).Div(abs8(p, c).Max(sv.Mul(load8(&c.residualFloor)))).Store(&residual[j])
	}
}
