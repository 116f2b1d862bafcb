//go:build goexperiment.simd && amd64

package vec

import (
	"math"
	"simd/archsimd"
	"unsafe"
)

// Quotes are gathered into full vectors, those with ordinary forwards, strikes and
// prices only, and go through the stages of impliedTotal a block at a time. After
// each evaluation the vectors whose lanes have all arrived drop out. A lane that has
// arrived before the others of its vector stays where it is, and what is computed
// again for it is the same.

// quoteScratch8 holds a block of quotes; line i is lane i%width8 of vector i/width8.
// See impliedTotal for the names.
type quoteScratch8 struct {
	f, k, t, p, side              [quoteVectors8]lanes8
	x, root, target, s, lo, hi    [quoteVectors8]lanes8
	h, z1, z2, m1, m2, d, g, next [quoteVectors8]lanes8
	live                          [quoteVectors8]byte // vectors with a lane that has not arrived
	line                          [blockLines]int     // of the slices
}

const quoteVectors8 = blockLines / width8

func (q *quotes) invert8() {
	if len(q.vol) < width8 {
		q.invertGeneric()
		return
	}
	var room [unsafe.Sizeof(quoteScratch8{}) + 64]byte
	sc := (*quoteScratch8)(aligned(unsafe.Pointer(&room)))
	for i := 0; i < len(q.vol); {
		var lines int
		var upper bool
		i, lines, upper = q.gather8(sc, i)
		n := (lines + width8 - 1) / width8
		sc.start(n, upper, consts8)
		sc.solve(n, consts8)
		sc.finish(n, consts8)
		for j, line := range sc.line[:lines] {
			q.vol[line], q.outcome[line] = sc.s[j/width8][j%width8], ImpliedOK
		}
	}
	archsimd.ClearAVXUpperBits()
}

// gather8 fills a block with lines from i on, and does those that no vector code
// covers by itself. It returns the first line it has not seen, the number of lines
// in the block, and whether one is to be solved for its distance from the bound.
func (q *quotes) gather8(sc *quoteScratch8, i int) (next, lines int, upper bool) {
	for ; i < len(q.vol) && lines < blockLines; i++ {
		f, k, t := q.forward[i], q.strike[i], q.time[i]
		p, side, o := impliedSide(f, k, t, q.price[i], q.sign[i])
		if o != ImpliedOK || !inImpliedBox(f, k, p) {
			q.set(i, p, side, o)
			continue
		}
		upper = upper || side < 0
		sc.put(lines, f, k, t, p, side)
		sc.line[lines] = i
		lines++
	}
	if lines > 0 {
		j, l := (lines-1)/width8, (lines-1)%width8
		for n := lines; n%width8 != 0; n++ {
			sc.put(n, sc.f[j][l], sc.k[j][l], sc.t[j][l], sc.p[j][l], sc.side[j][l])
		}
	}
	return i, lines, upper
}

func (sc *quoteScratch8) put(i int, f, k, t, p, side float64) {
	j, l := i/width8, i%width8
	sc.f[j][l], sc.k[j][l], sc.t[j][l], sc.p[j][l], sc.side[j][l] = f, k, t, p, side
}

// start sets x, root, target and the first bracket and s.
func (sc *quoteScratch8) start(n int, upper bool, c *table8) {
	for j := range n {
		logRatioOf8(load8(&sc.f[j]), load8(&sc.k[j]), c).AsUint64x8().Or(loadBits8(&c.signBit)).AsFloat64x8().Store(&sc.x[j])
	}
	inf := archsimd.BroadcastFloat64x8(math.Inf(1))
	for j := range n {
		load8(&sc.f[j]).Sqrt().Mul(load8(&sc.k[j]).Sqrt()).Store(&sc.root[j])
		load8(&c.zero).Store(&sc.lo[j])
		inf.Store(&sc.hi[j])
	}
	for j := range n {
		logRatioOf8(load8(&sc.p[j]), load8(&sc.root[j]), c).Store(&sc.target[j])
	}
	for j := range n {
		atm := load8(&sc.p[j]).Div(load8(&sc.root[j])).Mul(load8(&c.sqrt2Pi))
		width := load8(&c.zero).Sub(load8(&sc.x[j])).Max(atm.Mul(load8(&c.startFloor)))
		width.Store(&sc.s[j])
		logRatioOf8(load8(&c.one).Add(width.Div(atm)), load8(&c.one), c).Store(&sc.g[j])
	}
	for j := range n {
		l := load8(&sc.g[j])
		w := l.Sqrt()
		p := w.MulAdd(load8(&c.startP3), load8(&c.startP2)).MulAdd(w, load8(&c.startP1)).MulAdd(w, load8(&c.startP0))
		q := w.MulAdd(load8(&c.startQ4), load8(&c.startQ3)).MulAdd(w, load8(&c.startQ2)).MulAdd(w, load8(&c.startQ1)).MulAdd(w, load8(&c.one))
		load8(&sc.s[j]).Mul(q).Div(l.Mul(p)).Store(&sc.s[j])
	}
	for j := 0; upper && j < n; j++ {
		x := load8(&sc.x[j])
		z := x.MulAdd(load8(&c.negHalf), load8(&sc.target[j])).Sub(load8(&c.ln2)).Min(load8(&c.quantileMost))
		u := z.Mul(load8(&c.negTwo)).Sqrt()
		p := u.MulAdd(load8(&c.quantileP2), load8(&c.quantileP1)).MulAdd(u, load8(&c.quantileP0))
		q := u.MulAdd(load8(&c.quantileQ3), load8(&c.quantileQ2)).MulAdd(u, load8(&c.quantileQ1)).MulAdd(u, load8(&c.one))
		s := u.Sub(p.Div(q)).Mul(load8(&c.two)).Max(x.Mul(load8(&c.negTwo)).Sqrt()).Max(load8(&c.startLeast))
		load8(&sc.s[j]).Merge(s, load8(&sc.side[j]).Greater(load8(&c.zero))).Store(&sc.s[j])
	}
}

// logRatioOf8 is LogRatio1 in its box, and for k = 1 at any normal number.
func logRatioOf8(s, k float8, c *table8) float8 {
	k2, n := alignBinades8(s, k, c)
	return n.MulAdd(load8(&c.ln2Hi), atanhSum8(s, k2, n, c))
}

// solve leaves the last s, its d and the step from it.
func (sc *quoteScratch8) solve(n int, c *table8) {
	live := sc.live[:n]
	for j := range live {
		live[j] = byte(j)
	}
	for step := 1; ; step++ {
		sc.arguments(live, c)
		tails8(&sc.m1, &sc.z1, live, c)
		tails8(&sc.m2, &sc.z2, live, c)
		sc.rising(live, c)
		sc.series(live, c)
		sc.residuals(live, c)
		sc.steps(live, c)
		if step == impliedSteps {
			return
		}
		if live = sc.advance(live, c); len(live) == 0 {
			return
		}
	}
}

// arguments sets h and those of the two tails; the series needs that of h alone.
func (sc *quoteScratch8) arguments(live []byte, c *table8) {
	for _, j := range live {
		j &= quoteVectors8 - 1
		x, s, side := load8(&sc.x[j]), load8(&sc.s[j]), load8(&sc.side[j])
		h, t := x.Div(s), s.Mul(load8(&c.half))
		h.Store(&sc.h[j])
		h.Merge(side.Mul(h.Add(t)), isSeries8(x, t, side, c)).Store(&sc.z1[j])
		h.Sub(t).Store(&sc.z2[j])
	}
}

// tails8 sets m to Φ(−|z|)·e^(z²/2).
func tails8(m, z *[quoteVectors8]lanes8, live []byte, c *table8) {
	for _, j := range live {
		j &= quoteVectors8 - 1
		mills8(abs8(load8(&z[j]), c).Min(load8(&c.millsEnd)), c).Store(&m[j])
	}
}

// rising turns m1 into Φ(z)·e^(z²/2) where z is positive.
func (sc *quoteScratch8) rising(live []byte, c *table8) {
	for _, j := range live {
		j &= quoteVectors8 - 1
		z := load8(&sc.z1[j])
		positive := z.Greater(load8(&c.zero))
		if positive.ToBits() == 0 {
			continue
		}
		r, t := expReduce8(z.Mul(z).Mul(load8(&c.half)).Min(load8(&c.expHighest)), load8(&c.zero), c)
		m := load8(&sc.m1[j])
		scale8(expSum8(r, c), t, c).Sub(m).Merge(m, positive).Store(&sc.m1[j])
	}
}

// series sets d.
func (sc *quoteScratch8) series(live []byte, c *table8) {
	for _, j := range live {
		j &= quoteVectors8 - 1
		side, m0 := load8(&sc.side[j]), load8(&sc.m1[j])
		d := m0.Sub(side.Mul(load8(&sc.m2[j])))
		t := load8(&sc.s[j]).Mul(load8(&c.half))
		if in := isSeries8(load8(&sc.x[j]), t, side, c); in.ToBits() != 0 {
			h := load8(&sc.h[j])
			m1 := h.MulAdd(m0, load8(&c.invSqrt2Pi))
			sum, power, tt := m1, load8(&c.one), t.Mul(t)
			for n := 0; n < len(c.reciprocals); n += 2 {
				m0 = h.MulAdd(m1, m0).Mul(load8(&c.reciprocals[n]))
				m1 = h.MulAdd(m0, m1).Mul(load8(&c.reciprocals[n+1]))
				power = power.Mul(tt)
				sum = power.MulAdd(m1, sum)
			}
			d = t.Mul(load8(&c.two)).Mul(sum).Merge(d, in)
		}
		d.Max(load8(&c.tailLeast)).Min(load8(&c.tailMost)).Store(&sc.d[j])
	}
}

func isSeries8(x, t, side float8, c *table8) mask8 {
	return t.LessEqual(load8(&c.taylorFrom)).And(x.GreaterEqual(load8(&c.taylorWidth))).And(side.Greater(load8(&c.zero)))
}

// residuals sets g.
func (sc *quoteScratch8) residuals(live []byte, c *table8) {
	for _, j := range live {
		j &= quoteVectors8 - 1
		l := logRatioOf8(load8(&sc.d[j]), load8(&c.one), c)
		_, _, a := squares8(load8(&sc.h[j]), load8(&sc.s[j]), c)
		l.Sub(a).Sub(load8(&sc.target[j])).Store(&sc.g[j])
	}
}

// steps narrows the bracket, and sets next.
func (sc *quoteScratch8) steps(live []byte, c *table8) {
	for _, j := range live {
		j &= quoteVectors8 - 1
		s, g := load8(&sc.s[j]), load8(&sc.g[j])
		below := load8(&sc.side[j]).Mul(g).Less(load8(&c.zero))
		s.Merge(load8(&sc.lo[j]), below).Store(&sc.lo[j])
		load8(&sc.hi[j]).Merge(s, below).Store(&sc.hi[j])
		sc.householder(int(j), c).Store(&sc.next[j])
	}
	for _, j := range live {
		j &= quoteVectors8 - 1
		next, lo, hi := load8(&sc.next[j]), load8(&sc.lo[j]), load8(&sc.hi[j])
		inside := next.GreaterEqual(lo).And(next.LessEqual(hi))
		middle := load8(&sc.s[j]).Mul(load8(&c.two)).Min(lo.Add(hi).Mul(load8(&c.half)))
		next.Merge(middle, inside).Store(&sc.next[j])
	}
}

func squares8(h, s float8, c *table8) (hh, tt, a float8) {
	t := s.Mul(load8(&c.half))
	hh, tt = h.Mul(h), t.Mul(t)
	return hh, tt, hh.Add(tt).Mul(load8(&c.half))
}

// householder returns what a step from s leads to.
func (sc *quoteScratch8) householder(j int, c *table8) float8 {
	one, zero, s := load8(&c.one), load8(&c.zero), load8(&sc.s[j])
	hh, tt, _ := squares8(load8(&sc.h[j]), s, c)
	inverse := load8(&sc.d[j]).Mul(load8(&sc.side[j]).Mul(load8(&c.sqrt2Pi))).Div(s)
	e := one.Div(inverse)
	u := hh.Sub(tt).Sub(e)
	v := u.MulAdd(u.Sub(e), hh.MulAdd(load8(&c.negThree), zero.Sub(tt)))
	n := zero.Sub(load8(&sc.g[j])).Mul(inverse)
	up := n.Mul(load8(&c.half)).MulAdd(u, one)
	down := n.MulAdd(n.Mul(load8(&c.sixth)).MulAdd(v, u), one)
	return s.MulAdd(n.Mul(up).Div(down), s)
}

// advance moves the lanes whose step was not small, and returns the vectors that
// have some.
func (sc *quoteScratch8) advance(live []byte, c *table8) []byte {
	far := live[:0]
	for _, j := range live {
		j &= quoteVectors8 - 1
		s, next := load8(&sc.s[j]), load8(&sc.next[j])
		moves := abs8(next.Sub(s), c).Greater(s.Mul(load8(&c.closeEnough)))
		if moves.ToBits() == 0 {
			continue
		}
		next.Merge(s, moves).Store(&sc.s[j])
		far = append(far, j)
	}
	return far
}

// finish is polish, and turns s into the volatility.
func (sc *quoteScratch8) finish(n int, c *table8) {
	a, polished := &sc.m1, &sc.m2
	for j := range n {
		_, _, half := squares8(load8(&sc.h[j]), load8(&sc.s[j]), c)
		half.Store(&a[j])
		r, t := expReduce8(load8(&c.zero).Sub(half).Max(load8(&c.expLowest)), load8(&c.zero), c)
		load8(&sc.d[j]).Mul(load8(&sc.root[j])).Mul(scale8(expSum8(r, c), t, c)).Store(&sc.g[j])
	}
	for j := range n {
		r := load8(&sc.g[j]).Div(load8(&sc.p[j])).Sub(load8(&c.one))
		minus := load8(&c.zero).Sub(r)
		r.Mul(minus.MulAdd(minus.MulAdd(r.MulAdd(load8(&c.negQuarter), load8(&c.third)), load8(&c.half)), load8(&c.one))).Store(&sc.g[j])
	}
	for j := range n {
		sc.householder(j, c).Store(&polished[j])
	}
	for j := range n {
		s := load8(&sc.next[j]).Merge(load8(&polished[j]), load8(&a[j]).Greater(load8(&c.nearLimit)))
		s.Div(load8(&sc.t[j]).Sqrt()).Store(&sc.s[j])
	}
}
