package model

import (
	"math"

	"nightbook/risk/vec"
)

// market is what a lognormal formula is written over: spot, volatility, time to
// expiry, rate and yield.
type market[N number[N]] struct{ s, vol, t, r, q N }

func plainMarket(s, vol, t, r, q float64) market[plain] {
	return market[plain]{plain(s), plain(vol), plain(t), plain(r), plain(q)}
}

// jetMarket makes each input a variable to differentiate by.
func jetMarket(s, vol, t, r, q float64) market[jet] {
	return market[jet]{jet{v: s, s: 1}, jet{v: vol, vol: 1}, jet{v: t, t: 1}, jet{v: r, r: 1}, jet{v: q, q: 1}}
}

// jetFuture is jetMarket on a futures price: its yield is the rate, whatever the
// rate does, so that ∂/∂r holds the futures price and ∂/∂q is 0.
func jetFuture(s, vol, t, r float64) market[jet] {
	m := jetMarket(s, vol, t, r, r)
	m.q = m.r
	return m
}

// certainBelow bounds the σ√T from which on a spread is no longer resolved:
// logarithms of neighbouring prices differ by 2⁻⁵³. Below it the path of the
// price is taken as certain.
const certainBelow = 0x1p-60

// The range of inputs within which no step of a lognormal formula overflows.
const (
	largestPrice = 1e100 // and 1/largestPrice the smallest
	largestTime  = 1000
	largestVol   = 100
	largestRate  = 100 // of |r|·T and of |q|·T
)

// valid reports whether a contract makes sense and is within range: prices
// positive, time and volatility not negative, a sign of ±1.
func valid(s, k, t, vol, r, q, sign float64) bool {
	return isPrice(s) && isPrice(k) && t >= 0 && t <= largestTime && vol >= 0 && vol <= largestVol &&
		isRate(r, t) && isRate(q, t) && isSign(sign)
}

func isPrice(x float64) bool   { return x >= 1/largestPrice && x <= largestPrice }
func isAmount(x float64) bool  { return math.Abs(x) <= largestPrice }
func isRate(r, t float64) bool { return finite(r) && math.Abs(r*t) <= largestRate }
func isSign(x float64) bool    { return x == 1 || x == -1 }
func finite(x float64) bool    { return math.Abs(x) <= math.MaxFloat64 }

// spread is the value of σ√T.
func spread[N number[N]](m market[N]) float64 {
	return float64(m.vol.value() * math.Sqrt(m.t.value()))
}

// discounted is c·e^(−x·t).
func discounted[N number[N]](c, x, t N) N { return c.times(expOf(x.times(t).scaled(-1))) }

// black is the value of a European option, w·(f·Φ(w·d₁) − k·Φ(w·d₂)) with
// d₁,₂ = m/v ± ½v, on a lognormal forward f against a strike k, both
// discounted, m = ln(f/k), with standard deviation v of its logarithm.
//
// It is f·c(m, v), c = w·(Φ(w·d₁) − e^(−m)·Φ(w·d₂)), and k·c(m, v) with
// c = w·(e^m·Φ(w·d₁) − Φ(w·d₂)): the one whose exponential is below 1 is taken,
// and differentiated by hand. With e^(−m)·φ(d₂) = φ(d₁) the terms of order 1/v²
// cancel on paper.
func black[N number[N]](f, k, m, v N, w float64) N {
	mv, vv := m.value(), v.value()
	i := 1 / vv
	d := float64(mv * i)
	d1, d2 := d+float64(0.5*vv), d-float64(0.5*vv)
	n1, n2 := float64(w*vec.NormCDF1(float64(w*d1))), float64(w*vec.NormCDF1(float64(w*d2)))
	if mv > 0 {
		n2 = float64(n2 * vec.Exp1(-mv))
		p := float64(vec.NormPDF1(d1))
		pd := float64(float64(p*d1) * i)
		return f.times(m.of2(v, n1-n2, n2, p, float64(p*i)-n2, -pd, float64(pd*d2)))
	}
	n1 = float64(n1 * vec.Exp1(mv))
	p := float64(vec.NormPDF1(d2))
	pd := float64(float64(p*d2) * i)
	return k.times(m.of2(v, n1-n2, n1, p, float64(p*i)+n1, -pd, float64(pd*d1)))
}

// exchange is black without any spread: max(w·(f − k), 0). At f = k its value is
// 0 and its derivatives are the mean of the two sides.
func exchange[N number[N]](f, k N, w float64) N {
	x := f.minus(k).scaled(w)
	switch v := x.value(); {
	case v > 0:
		return x
	case v < 0:
		return x.constant(0)
	}
	return x.scaled(0.5)
}

// put writes contract i. Sums with 0 turn −0 into 0.
func (g *Greeks) put(i int, x jet) {
	g.Price[i] = x.v + 0
	g.Delta[i], g.Gamma[i] = x.s+0, x.ss+0
	g.Vega[i], g.Vanna[i], g.Volga[i] = x.vol+0, x.svol+0, x.volvol+0
	g.Theta[i], g.Charm[i] = 0-x.t, 0-x.st
	g.Rho[i], g.CarryRho[i] = x.r+0, x.q+0
	g.Residual[i] = nan
}

// putBalanced is put for a contract whose formula solves the Black–Scholes
// equation, with what rounding leaves of it.
func (g *Greeks) putBalanced(i int, x jet, s, vol, r, q float64) {
	g.put(i, x)
	sv := s * vol
	e := math.FMA(float64(float64(0.5*sv)*sv), x.ss, 0-x.t)
	e = math.FMA(r-q, float64(s*x.s), e)
	e = math.FMA(-r, x.v, e)
	g.Residual[i] = math.Abs(e) / max(math.Abs(x.v), float64(1e-4*s))
}

// refuse marks contract i as one that makes no sense.
func (g *Greeks) refuse(i int) {
	for _, s := range g.Slices() {
		(*s)[i] = nan
	}
}
