//go:build goexperiment.simd && amd64

package american

import "simd/archsimd"

// The loops of newton_generic.go for eight lanes, in stages that keep their
// vectors in registers.

func (s *block) linearise8(last bool) {
	for i := range s.points {
		s.sides8(i)
		s.row8(i)
		if last {
			s.tangentSides8(i)
		}
	}
	archsimd.ClearAVXUpperBits()
}

// sides8 sets beta, cash and k, as pull, at the nodes of point i, and what follows
// from their sums.
func (s *block) sides8(i int) {
	as, bs, ivs := vectors8(s.a), vectors8(s.b), vectors8(s.invV)
	first, n, o := i*s.inner, s.inner, s.eq.n+i
	dms, densities, ratio, tails := vectors8(s.dm)[first:][:n], vectors8(s.density)[first:][:n], vectors8(s.ratio)[first:][:n], vectors8(s.tail)[first:][:n]
	betas, cashes, pull := vectors8(s.beta)[first:][:n], vectors8(s.cash)[first:][:n], vectors8(s.pull)[first:][:n]
	weight, density, invRoot := s.eq.weight[first:][:n], s.eq.density[first:][:n], s.eq.invRoot[first:][:n]
	low := broadcast8(1).Div(load8(&vectors8(s.ratio)[o]))
	var zero, asset, assetSlope, cash, cashSlope float8
	for j := range weight {
		dm, b, invV := load8(&dms[j]), load8(&bs[0]), load8(&ivs[0])
		g := broadcast8(density[j]).Mul(load8(&densities[j])).Mul(invV)
		e := broadcast8(weight[j]).Mul(low).Mul(load8(&tails[j]))
		beta := b.Mul(low.Mul(load8(&ratio[j]))).Mul(g)
		c := load8(&as[0]).MulAdd(g, zero.Sub(beta))
		k := c.Mul(dm).Mul(invV.Mul(broadcast8(invRoot[j])))
		beta.Store(&betas[j])
		c.Store(&cashes[j])
		k.Store(&pull[j])
		asset = b.MulAdd(e, asset)
		assetSlope = assetSlope.Add(beta)
		cash = cash.Add(c)
		cashSlope = cashSlope.Add(k)
	}
	omega := load8(&vectors8(s.density)[o]).Mul(broadcast8(invSqrt2Pi)).Mul(load8(&ivs[0]).Mul(broadcast8(s.eq.invRoot[o])))
	be := low.Mul(load8(&vectors8(s.tail)[o]))
	gain := be.Add(asset.Max(zero))
	loss := cash.Sub(asset.Min(zero))
	rho := gain.Div(loss)
	sigma := rho.Merge(broadcast8(1), load8(&bs[0]).Less(zero))
	gain.Store(&vectors8(s.top)[i])
	loss.Store(&vectors8(s.bottom)[i])
	rho.Store(&vectors8(s.rho)[i])
	sigma.Store(&vectors8(s.sigma)[i])
	slope := rho.MulAdd(cashSlope, sigma.MulAdd(assetSlope.Add(asset), omega.Add(be)))
	broadcast8(2).Mul(load8(&vectors8(s.h)[i])).Div(slope).Store(&vectors8(s.scale)[i])
}

// row8 sets row i of the matrix but for the tangents, and pull.
func (s *block) row8(i int) {
	first, n, row := i*s.inner, s.inner, s.points+sides
	betas, pull, hu := vectors8(s.beta)[first:][:n], vectors8(s.pull)[first:][:n], vectors8(s.hu)[first:][:n]
	rho, half := load8(&vectors8(s.rho)[i]), broadcast8(0.5)
	rest := load8(&vectors8(s.sigma)[i]).Sub(rho)
	for j := range pull {
		x := rho.MulAdd(load8(&pull[j]), rest.Mul(load8(&betas[j])))
		x.Mul(half).Div(load8(&hu[j])).Store(&pull[j])
	}
	sums := vectors8(s.sums)[:s.points+1]
	gather8(sums, pull, s.eq.spread[first*len(sums):][:n*len(sums)])
	m := vectors8(s.matrix)[i*row:][:row]
	scale := load8(&vectors8(s.scale)[i])
	var zero float8
	for k := range s.points {
		zero.Sub(scale.Mul(load8(&sums[k+1]))).Store(&m[k])
	}
	load8(&m[i]).Add(broadcast8(1)).Store(&m[i])
	scale.Mul(load8(&vectors8(s.top)[i])).Store(&m[s.points])
}

// gather8 sets sums[k] to Σ_j pull[j]·weights[j·len(sums) + k].
func gather8(sums, pull []lanes8, weights []float64) {
	n := len(sums)
	k := 0
	for ; k+4 <= n; k += 4 {
		var x0, x1, x2, x3 float8
		for j := range pull {
			v := load8(&pull[j])
			w := (*[4]float64)(weights[j*n+k:])
			x0 = v.MulAdd(broadcast8(w[0]), x0)
			x1 = v.MulAdd(broadcast8(w[1]), x1)
			x2 = v.MulAdd(broadcast8(w[2]), x2)
			x3 = v.MulAdd(broadcast8(w[3]), x3)
		}
		to := sums[k:][:4]
		x0.Store(&to[0])
		x1.Store(&to[1])
		x2.Store(&to[2])
		x3.Store(&to[3])
	}
	for ; k < n; k++ {
		var x float8
		for j := range pull {
			x = load8(&pull[j]).MulAdd(broadcast8(weights[j*n+k]), x)
		}
		x.Store(&sums[k])
	}
}

// tangentSides8 sets the right-hand sides of the tangents in row i, for which
// sums[0] is the weight of H at expiry, and pull is no longer k.
func (s *block) tangentSides8(i int) {
	first, n, o, row := i*s.inner, s.inner, s.eq.n+i, s.points+sides
	dms, densities, ratio, tails := vectors8(s.dm)[first:][:n], vectors8(s.density)[first:][:n], vectors8(s.ratio)[first:][:n], vectors8(s.tail)[first:][:n]
	betas, cashes := vectors8(s.beta)[first:][:n], vectors8(s.cash)[first:][:n]
	weight, density, invRoot, wait := s.eq.weight[first:][:n], s.eq.density[first:][:n], s.eq.invRoot[first:][:n], s.eq.wait[first:][:n]
	b, invV := vectors8(s.b), vectors8(s.invV)
	one := broadcast8(1)
	low := one.Div(load8(&vectors8(s.ratio)[o]))
	var zero, assetA, assetB, cashA, cashB float8
	for j := range weight {
		z := broadcast8(wait[j])
		iv := load8(&invV[0])
		g := broadcast8(density[j]).Mul(load8(&densities[j])).Mul(iv)
		e := broadcast8(weight[j]).Mul(low).Mul(load8(&tails[j]))
		c := load8(&cashes[j])
		k := c.Mul(load8(&dms[j])).Mul(iv.Mul(broadcast8(invRoot[j])))
		beta := load8(&betas[j])
		assetA = beta.MulAdd(z, assetA)
		assetB = e.MulAdd(zero.Sub(load8(&b[0])).MulAdd(z, one), zero.Sub(beta).MulAdd(z, assetB))
		cashA = zero.Sub(c.Add(k)).MulAdd(z, cashA.Add(g))
		cashB = k.MulAdd(z, zero.Sub(low.Mul(load8(&ratio[j]))).MulAdd(g, cashB))
	}
	var assetV, cashV float8
	v, minusOne, roots := load8(&vectors8(s.v)[0]), broadcast8(-1), s.eq.root[first:][:n]
	for j, root := range roots {
		dm, vz := load8(&dms[j]), v.Mul(broadcast8(root))
		assetV = zero.Sub(load8(&betas[j]).Mul(vz)).MulAdd(dm, assetV)
		cashV = load8(&cashes[j]).MulAdd(dm.MulAdd(dm.Add(vz), minusOne), cashV)
	}
	iv := load8(&invV[0])
	omega := load8(&vectors8(s.density)[o]).Mul(broadcast8(invSqrt2Pi)).Mul(iv.Mul(broadcast8(s.eq.invRoot[o])))
	be := low.Mul(load8(&vectors8(s.tail)[o]))
	sigma, minusRho := load8(&vectors8(s.sigma)[i]), zero.Sub(load8(&vectors8(s.rho)[i]))
	t := broadcast8(s.eq.wait[o])
	ra := minusRho.MulAdd(cashA, sigma.MulAdd(assetA, omega.Mul(t)))
	rb := minusRho.MulAdd(cashB, sigma.MulAdd(assetB, zero.Sub(t.Mul(omega.Add(be)))))
	dm := load8(&vectors8(s.dm)[o])
	rv := minusRho.MulAdd(cashV, sigma.Mul(assetV)).MulAdd(iv, zero.Sub(omega.Mul(broadcast8(s.eq.root[o])).Mul(dm)))
	expiry, scale := load8(&vectors8(s.sums)[0]), load8(&vectors8(s.scale)[i])
	m := vectors8(s.matrix)[i*row+s.points+1:][:3]
	scale.Mul(expiry.MulAdd(load8(&vectors8(s.floorA)[0]), ra)).Store(&m[0])
	scale.Mul(expiry.MulAdd(load8(&vectors8(s.floorB)[0]), rb)).Store(&m[1])
	scale.Mul(rv).Store(&m[2])
}

func (s *block) eliminate8(last bool) {
	n, row := s.points, s.points+sides
	used := n + 1
	if last {
		used = row
	}
	matrix, top := vectors8(s.matrix), vectors8(s.top)
	for i := range n {
		m := &matrix[i*row+n]
		load8(m).Mul(load8(&top[i])).Store(m)
	}
	one := broadcast8(1)
	var zero float8
	for p := range n {
		pivot := matrix[p*row:][:used]
		inv := one.Div(load8(&pivot[p]))
		inv.Store(&pivot[p])
		pivot = pivot[p+1:]
		for r := p + 1; r < n; r++ {
			m := matrix[r*row+p:][:len(pivot)+1]
			f := zero.Sub(load8(&m[0]).Mul(inv))
			f.Store(&m[0])
			m = m[1:][:len(pivot)]
			for k := range pivot {
				f.MulAdd(load8(&pivot[k]), load8(&m[k])).Store(&m[k])
			}
		}
	}
	s.substitute8(s.step, n)
	if last {
		load8(&vectors8(s.floorA)[0]).Store(&vectors8(s.tangent[0])[0])
		load8(&vectors8(s.floorB)[0]).Store(&vectors8(s.tangent[1])[0])
		zero.Store(&vectors8(s.tangent[2])[0])
		for k := range s.tangent {
			s.substitute8(s.tangent[k][width8:], n+1+k)
		}
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) substitute8(to []float64, side int) {
	n, row := s.points, s.points+sides
	matrix, x := vectors8(s.matrix), vectors8(to)[:n]
	var zero float8
	for i := n - 1; i >= 0; i-- {
		m := matrix[i*row:][:row]
		sum := load8(&m[side])
		for k := i + 1; k < n; k++ {
			sum = zero.Sub(load8(&m[k])).MulAdd(load8(&x[k]), sum)
		}
		sum.Mul(load8(&m[i])).Store(&x[i])
	}
}

func (s *block) advance8() {
	floor := load8(&vectors8(s.floor)[0])
	least := floor.Mul(floor).Max(broadcast8(leastH * leastH))
	step, square, h := vectors8(s.step), vectors8(s.square), vectors8(s.h)
	for i := range step {
		x := load8(&square[i+1]).Add(load8(&step[i])).Max(least)
		x.Store(&square[i+1])
		x.Sqrt().Store(&h[i])
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) bend8() {
	for i := range s.points {
		s.bendPoint8(i)
	}
	archsimd.ClearAVXUpperBits()
}

func (s *block) bendPoint8(i int) {
	first, n, o := i*s.inner, s.inner, s.eq.n+i
	dms, tails, hus := vectors8(s.dm)[first:][:n], vectors8(s.tail)[first:][:n], vectors8(s.hu)[first:][:n]
	betas, cashes, pull := vectors8(s.beta)[first:][:n], vectors8(s.cash)[first:][:n], vectors8(s.pull)[first:][:n]
	weight, root, invRoot := s.eq.weight[first:][:n], s.eq.root[first:][:n], s.eq.invRoot[first:][:n]
	v, b, iv := vectors8(s.v), vectors8(s.b), vectors8(s.invV)
	lows, his := vectors8(s.sums)[0:1], vectors8(s.sums)[1:2] // at hand for the loop

	var zero float8
	low := broadcast8(1).Div(load8(&vectors8(s.ratio)[o]))
	low.Store(&lows[0])
	half := broadcast8(0.5)
	hi := load8(&vectors8(s.tangent[2])[i+1]).Mul(half).Div(load8(&vectors8(s.h)[i]))
	hi.Store(&his[0])
	w, dm, invV := broadcast8(s.eq.root[o]), load8(&vectors8(s.dm)[o]), load8(&iv[0])
	inv := broadcast8(s.eq.invRoot[o])
	omega := load8(&vectors8(s.density)[o]).Mul(broadcast8(invSqrt2Pi)).Mul(invV.Mul(inv))
	dp := load8(&v[0]).MulAdd(w, dm)
	dmDot := zero.Sub(hi).MulAdd(inv, zero.Sub(dp)).Mul(invV)
	dpDot := dmDot.Add(w)
	bend := dm.Mul(dmDot).MulAdd(dpDot, hi.MulAdd(dpDot, dmDot.Add(dpDot).Mul(invV)))
	q := hi.Mul(hi).MulAdd(low.Mul(load8(&vectors8(s.tail)[o])), zero.Sub(omega.Mul(load8(&v[0]).Mul(w)).Mul(bend)))
	for j := range weight {
		hi, invV := load8(&his[0]), load8(&iv[0])
		dm, rt := load8(&dms[j]), broadcast8(root[j])
		vz := load8(&v[0]).Mul(rt)
		half := half.Div(load8(&hus[j]))
		hu := load8(&pull[j]).Mul(half)
		dmDot := hu.Sub(hi).MulAdd(broadcast8(invRoot[j]), zero.Sub(dm.Add(vz))).Mul(invV)
		dpDot := dmDot.Add(rt)
		sum := dmDot.Add(dpDot).Mul(invV)
		e := broadcast8(weight[j]).Mul(load8(&lows[0])).Mul(load8(&tails[j]))
		q = load8(&b[0]).Mul(e).MulAdd(hi.Mul(hi), q)
		beta := load8(&betas[j])
		q = zero.Sub(beta.Mul(vz)).MulAdd(hi.Add(dm.MulAdd(dmDot, hu)).MulAdd(dpDot, sum), q)
		gamma := zero.Sub(dm).MulAdd(dmDot, zero.Sub(invV))
		gammaDot := dm.MulAdd(sum, zero.Sub(dmDot).MulAdd(dmDot, invV.Mul(invV)))
		square := hu.Mul(hu)
		q = beta.MulAdd(zero.Sub(hu.Add(hu)).MulAdd(gamma, square), q)
		c := load8(&cashes[j])
		q = zero.Sub(c).MulAdd(gamma.MulAdd(gamma, gammaDot), q)
		k := c.Mul(dm).Mul(invV.Mul(broadcast8(invRoot[j])))
		q = zero.Sub(half.Add(half)).MulAdd(k.Mul(square), q)
	}
	hi = load8(&his[0])
	load8(&vectors8(s.scale)[i]).MulAdd(q, broadcast8(2).Mul(hi.Mul(hi))).Store(&vectors8(s.bent)[i])
}

func (s *block) resolve8() {
	n, row := s.points, s.points+sides
	matrix, bent := vectors8(s.matrix), vectors8(s.bent)[:n]
	for i := range n {
		m := matrix[i*row:][:row]
		x := load8(&bent[i])
		for p := range i {
			x = load8(&m[p]).MulAdd(load8(&bent[p]), x)
		}
		x.Store(&bent[i])
		x.Store(&m[n])
	}
	var zero float8
	zero.Store(&vectors8(s.second)[0])
	s.substitute8(s.second[width8:], n)
	archsimd.ClearAVXUpperBits()
}
