package vec

import "math"

// bsmResult is one line of outputs.
type bsmResult struct {
	price, delta, gamma, vega, theta, rho, carryRho, vanna, volga, charm, residual float64
}

// bsmEdge values an option outside the box, in any of the ways described at BSM.
// Such lines are few, so it is plain code in every tier.
func bsmEdge(s, k, t, v, r, q, w float64) bsmResult {
	if !(s > 0 && k > 0 && t >= 0 && v >= 0 && (w == 1 || w == -1) &&
		finite(s) && finite(k) && finite(t) && finite(v) && finite(r) && finite(q)) {
		return allNaN
	}
	sq := math.Sqrt(t)
	vs := float64(v * sq)
	qf, rf := saturate(Exp1((0-q)*t)), saturate(Exp1((0-r)*t))
	a, b := saturate(s*qf), saturate(k*rf)
	var o bsmResult
	if vs < certain {
		o = bsmCertain(a, b, qf, t, r, q, w)
	} else {
		m := LogRatio1(s, k) + saturate(saturate(r*t)-saturate(q*t))
		d := saturate(m / vs)
		d1, d2 := clampTail(d+float64(0.5*vs)), clampTail(d-float64(0.5*vs))
		an, bn := saturate(a*NormCDF1(w*d1)), saturate(b*NormCDF1(w*d2))
		n := saturate(qf * NormPDF1(d1)) // e^(−qT)·φ(d₁)
		o = bsmResult{
			price:    max(w*(an-bn), 0), // out here the difference can be rounding error alone
			delta:    saturate(w * saturate(qf*NormCDF1(w*d1))),
			gamma:    saturate(saturate(n/vs) / s),
			vega:     saturate(saturate(s*n) * sq),
			rho:      saturate(saturate(w*t) * bn),
			carryRho: saturate(saturate(-w*t) * an),
			vanna:    saturate(saturate(n*-d2) / v),
		}
		o.volga = saturate(saturate(o.vega*float64(d1*d2)) / v)
		decay := saturate(saturate(saturate(s*n)*v) / sq * -0.5)
		carry := float64(w * saturate(saturate(q*an)-saturate(r*bn)))
		o.theta = saturate(decay + carry)
		drift := saturate(saturate(saturate(d2*0.5)/t) - saturate(saturate(r-q)/vs))
		o.charm = saturate(saturate(q*o.delta) + saturate(n*drift))
	}
	o.residual = bsmResidual(s, v, r, q, o)
	return o
}

// certain bounds the σ√T below which 1/(σ√T) may overflow; the spread of the
// forward is then below the spacing of floats around it.
const certain = 0x1p-1000

// bsmCertain is the limit of no spread: the forward is what it is.
func bsmCertain(a, b, qf, t, r, q, w float64) bsmResult {
	switch {
	case a == b:
		w *= 0.5
	case (a > b) != (w > 0):
		return bsmResult{}
	}
	return bsmResult{
		price:    saturate(w * (a - b)),
		delta:    saturate(w * qf),
		theta:    saturate(w * saturate(saturate(q*a)-saturate(r*b))),
		rho:      saturate(saturate(w*t) * b),
		carryRho: saturate(saturate((0-w)*t) * a),
		charm:    saturate(saturate(w*q) * qf),
	}
}

// bsmResidual is the Residual of finished outputs, each term kept finite.
func bsmResidual(s, v, r, q float64, o bsmResult) float64 {
	e := saturate(o.theta + saturate(saturate(saturate(saturate(o.gamma*s)*s)*v)*v*0.5))
	e = saturate(e + saturate(saturate(r-q)*saturate(s*o.delta)))
	e = saturate(e + saturate((0-r)*o.price))
	return saturate(math.Abs(e) / max(math.Abs(o.price), float64(s*residualFloor), math.SmallestNonzeroFloat64))
}

// saturate keeps a finite number where a product has overflowed, so that no
// later Inf − Inf or 0·Inf can make a NaN of it, and turns −0 into +0.
func saturate(x float64) float64 {
	if x > math.MaxFloat64 {
		return math.MaxFloat64
	}
	if x < -math.MaxFloat64 {
		return -math.MaxFloat64
	}
	return float64(x) + 0 // not fused with the product x may be
}

// clampTail bounds d where both Φ and φ have long reached their limits.
func clampTail(d float64) float64 { return min(max(d, -1e6), 1e6) }

func finite(x float64) bool { return math.Abs(x) <= math.MaxFloat64 }

var allNaN = bsmResult{nan, nan, nan, nan, nan, nan, nan, nan, nan, nan, nan}

var nan = math.NaN()

// edge values line i, which is outside the box.
func (b *BSM) edge(want outputs, i int) {
	o := bsmEdge(b.Spot[i], b.Strike[i], b.Time[i], b.Vol[i], b.Rate[i], b.Yield[i], b.Sign[i])
	b.Price[i] = o.price
	if want >= coreOutputs {
		b.Delta[i], b.Gamma[i], b.Vega[i], b.Theta[i], b.Rho[i] = o.delta, o.gamma, o.vega, o.theta, o.rho
	}
	if want >= allOutputs {
		b.CarryRho[i], b.Vanna[i], b.Volga[i], b.Charm[i], b.Residual[i] = o.carryRho, o.vanna, o.volga, o.charm, o.residual
	}
}
