//go:build goexperiment.simd && amd64

package american

import "simd/archsimd"

// The loops of kernel_generic.go and start.go for eight lanes.

// interpolate8 takes four nodes at a time: their sums do not wait for one another,
// and there are registers for them. It writes as many rows as are packed, the room
// for which is there.
func (n *nodes) interpolate8(dst, f []float64) {
	from, packed := vectors8(f), n.packed
	to := vectors8(dst[:packedRows(n.n)*width8])
	for len(to) >= 4 {
		var x0, x1, x2, x3 float8
		for k := range from {
			v := load8(&from[k])
			w := (*[4]float64)(packed)
			packed = packed[4:]
			x0 = broadcast8(w[0]).MulAdd(v, x0)
			x1 = broadcast8(w[1]).MulAdd(v, x1)
			x2 = broadcast8(w[2]).MulAdd(v, x2)
			x3 = broadcast8(w[3]).MulAdd(v, x3)
		}
		x0.Store(&to[0])
		x1.Store(&to[1])
		x2.Store(&to[2])
		x3.Store(&to[3])
		to = to[4:]
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) decays8() {
	decay, b := vectors8(s.decay), vectors8(s.b)
	var zero float8
	for r, z := range s.eq.wait {
		zero.Sub(load8(&b[0]).Mul(broadcast8(z))).Store(&decay[r])
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) distances8() {
	a, v, invV, floor := vectors8(s.a), vectors8(s.v), vectors8(s.invV), vectors8(s.floor)
	hs, squares, hu := vectors8(s.h), vectors8(s.square), vectors8(s.hu)
	var zero float8
	least := load8(&floor[0]).Mul(load8(&floor[0]))
	for i := range s.points {
		square := load8(&squares[i+1])
		for j := i * s.inner; j < (i+1)*s.inner; j++ {
			least := least.Max(broadcast8(s.eq.early[j]).Mul(square))
			load8(&hu[j]).Max(least).Sqrt().Store(&hu[j])
		}
		zero.Store(&hu[s.eq.n+i])
	}
	ab := load8(&a[0]).Sub(load8(&vectors8(s.b)[0]))
	n := len(s.eq.wait)
	dms, density, ratio, tail := vectors8(s.dm)[:n], vectors8(s.density)[:n], vectors8(s.ratio)[:n], vectors8(s.tail)[:n]
	root, invRoot := s.eq.root[:n], s.eq.invRoot[:n]
	hu = hu[:n]
	lowest, half, negHalf := broadcast8(lowestExp), broadcast8(0.5), broadcast8(-0.5)
	i, left := 0, s.inner
	for r, z := range s.eq.wait {
		if r >= s.eq.n {
			i = r - s.eq.n
		} else if left == 0 {
			i, left = i+1, s.inner
		}
		left--
		diff := load8(&hs[i]).Sub(load8(&hu[r]))
		d := ab.MulAdd(broadcast8(z), zero.Sub(diff)).Mul(load8(&invV[0]).Mul(broadcast8(invRoot[r])))
		vz := load8(&v[0]).Mul(broadcast8(root[r]))
		dm := vz.MulAdd(negHalf, d)
		dm.Store(&dms[r])
		e := zero.Sub(load8(&a[0]).MulAdd(broadcast8(z), dm.Mul(half).Mul(dm)))
		e.Max(lowest).Store(&density[r])
		diff.Store(&ratio[r])
		dp := dm.Add(vz)
		dp.Max(zero.Sub(dp)).Store(&tail[r])
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) tails8() {
	n := len(s.eq.wait)
	dms, density, ratio, tail, decay := vectors8(s.dm)[:n], vectors8(s.density)[:n], vectors8(s.ratio)[:n], vectors8(s.tail)[:n], vectors8(s.decay)[:n]
	v := load8(&vectors8(s.v)[0])
	var zero float8
	for r, root := range s.eq.root {
		t := load8(&density[r]).Mul(load8(&ratio[r])).Mul(load8(&tail[r]))
		dp := v.MulAdd(broadcast8(root), load8(&dms[r]))
		load8(&decay[r]).Sub(t).Merge(t, dp.Greater(zero)).Store(&tail[r])
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) guess8() {
	f := &s.feature
	c, h := vectors8(f.coef), vectors8(s.h)
	third, rate, side, layer := vectors8(f.third), vectors8(f.rate), vectors8(f.side), vectors8(f.layer)
	var zero float8
	one := broadcast8(1)
	for i, log := range s.logRoot {
		log := broadcast8(log / 3)
		x := load8(&third[0]).Add(log).Max(broadcast8(leastWidth)).Min(broadcast8(mostWidth))
		y := load8(&rate[0]).Add(log).Max(broadcast8(leastDrift)).Min(broadcast8(mostDrift))
		m := load8(&layer[0]).Div(broadcast8(s.root[i]))
		z := m.Div(one.Add(m)).Merge(load8(&side[0]), load8(&layer[0]).Greater(zero))
		k, p := startTerms, zero
		for dx := startDegree; dx >= 0; dx-- {
			q := zero
			for dy := startDegree - dx; dy >= 0; dy-- {
				u := zero
				for range startDegree - dx - dy + 1 {
					k--
					u = u.MulAdd(z, load8(&c[k]))
				}
				q = q.MulAdd(y, u)
			}
			p = p.MulAdd(x, q)
		}
		p.Store(&h[i])
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) approach8() {
	h := vectors8(s.h)
	inv := load8(&vectors8(s.v)[0]).Div(load8(&vectors8(s.feature.reach)[0]))
	lowest := broadcast8(lowestExp)
	var zero float8
	for i, root := range s.root {
		x := load8(&h[i]).Mul(inv.Mul(broadcast8(root)))
		zero.Sub(x).Max(lowest).Store(&h[i])
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) arrive8() {
	hs, square := vectors8(s.h), vectors8(s.square)
	f := &s.feature
	reach, base, rise, floor := load8(&vectors8(f.reach)[0]), load8(&vectors8(f.base)[0]), load8(&vectors8(f.rise)[0]), load8(&vectors8(s.floor)[0])
	one, least := broadcast8(1), broadcast8(leastH)
	for i, root := range s.root {
		h := reach.MulAdd(one.Sub(load8(&hs[i])), base)
		h = h.Max(rise.MulAdd(broadcast8(root), floor)).Max(least)
		h.Store(&hs[i])
		h.Mul(h).Store(&square[i+1])
	}
	archsimd.ClearAVXUpperBits()
}
