package model

import (
	"math"

	"nightbook/risk/vec"
)

// Bachelier prices European calls (sign +1) and puts (sign −1) on a futures
// price or a spread of futures prices, which may be negative.
//
// Computes, with w the sign, d = (F−K)/(σ√T) and D = e^(−rT),
//
//	V     = D·(w(F−K)·Φ(w·d) + σ√T·φ(d)) = D·(max(w(F−K), 0) + σ√T·(φ(d) − |d|·Φ(−|d|)))
//	Delta = w·D·Φ(w·d)    Gamma = D·φ(d)/(σ√T)     Vega  = D·√T·φ(d)
//	Vanna = −D·φ(d)·d/σ   Volga = D·√T·φ(d)·d²/σ   Theta = r·V − D·φ(d)·σ/(2√T)
//	Rho   = −T·V          CarryRho = 0             Charm = r·Delta + D·φ(d)·d/(2T)
//
// The Residual is that of its own equation, |Θ + ½σ²Γ − rV| / max(|V|, 10⁻⁴·max(|F|, σ√T)).
// Shapes: all slices of one length.
// Units: F, K and V in one currency; T years; σ in units of the price per √year;
// r per year. Rho and CarryRho hold the futures price.
// Special cases: σ√T = 0, or no longer resolved beside F and K, gives
// D·max(w(F−K), 0) and its derivatives, at F = K the mean of the two sides. NaN
// in all results: an input NaN or infinite, T or σ < 0, |r|·T > 100, a sign other than ±1.
// Accuracy: out of the money 2e-15 of the price itself, far out plus d² ulp; in
// the money 1e-15 of D·|F−K|.
// Source: L. Bachelier, Théorie de la spéculation, 1900; F. Black 1976 for D.
func Bachelier(g *Greeks, future, strike, time, vol, rate, sign []float64) {
	for i, f := range future {
		k, t, v, r, w := strike[i], time[i], vol[i], rate[i], sign[i]
		if !validNormal(f, k, t, v, r, w) {
			g.refuse(i)
			continue
		}
		o := bachelier(f, k, t, v, r, w)
		price, delta, density := o.price(), o.delta(), o.density()
		var gamma, vanna, volga, decay, swing float64
		if !o.certain {
			gamma = density / o.spread
			turn := float64(density*o.d) / v
			vanna, volga = -turn, float64(float64(turn*o.d)*o.root)
			decay = float64(density*v) / float64(2*o.root)
			swing = float64(density*o.d) / float64(2*t)
		}
		theta := math.FMA(r, price, -decay)
		g.Price[i], g.Delta[i], g.Gamma[i] = price, delta+0, gamma
		g.Vega[i], g.Vanna[i], g.Volga[i] = float64(density*o.root), vanna+0, volga
		g.Theta[i], g.Charm[i] = theta+0, math.FMA(r, delta, swing)+0
		g.Rho[i], g.CarryRho[i] = 0-float64(t*price), 0
		e := math.FMA(float64(float64(0.5*v)*v), gamma, math.FMA(-r, price, theta))
		g.Residual[i] = math.Abs(e) / max(math.Abs(price), float64(1e-4*max(math.Abs(f), o.spread)), math.SmallestNonzeroFloat64)
	}
}

// BachelierPrice is Bachelier without the sensitivities.
func BachelierPrice(price, future, strike, time, vol, rate, sign []float64) {
	for i, f := range future {
		if !validNormal(f, strike[i], time[i], vol[i], rate[i], sign[i]) {
			price[i] = nan
			continue
		}
		o := bachelier(f, strike[i], time[i], vol[i], rate[i], sign[i])
		price[i] = o.price()
	}
}

func validNormal(f, k, t, v, r, w float64) bool {
	return isAmount(f) && isAmount(k) && isAmount(v) && v >= 0 && t >= 0 && t <= largestTime && isRate(r, t) && isSign(w)
}

// normalOption is what the results of one contract are made of.
type normalOption struct {
	discount, root, spread float64 // e^(−rT), √T, σ√T
	ahead, d               float64 // w·(F−K), (F−K)/(σ√T)
	sign                   float64
	certain                bool // no spread
}

func bachelier(f, k, t, v, r, w float64) normalOption {
	o := normalOption{discount: vec.Exp1(-float64(r * t)), root: math.Sqrt(t), ahead: w * (f - k), sign: w}
	o.spread = float64(v * o.root)
	if o.spread < max(float64(certainBelow*max(math.Abs(f), math.Abs(k))), 1/largestPrice) {
		o.certain = true
		return o
	}
	// where it is clamped φ(d) has long been 0
	o.d = min(max((f-k)/o.spread, -1e6), 1e6)
	return o
}

func (o *normalOption) price() float64 {
	v := max(o.ahead, 0)
	if !o.certain {
		v += float64(o.spread * lossPerSpread(math.Abs(o.d)))
	}
	return float64(o.discount * v)
}

func (o *normalOption) delta() float64 {
	switch {
	case !o.certain:
		return float64(float64(o.discount*o.sign) * vec.NormCDF1(float64(o.sign*o.d)))
	case o.ahead > 0:
		return float64(o.discount * o.sign)
	case o.ahead < 0:
		return 0
	}
	return float64(float64(o.discount*o.sign) * 0.5)
}

// density is e^(−rT)·φ(d).
func (o *normalOption) density() float64 {
	if o.certain {
		return 0
	}
	return float64(o.discount * vec.NormPDF1(o.d))
}

// lossPerSpread is φ(y) − y·Φ(−y) for y ≥ 0, the expected excess of a standard
// normal variable over y. Far out the two terms cancel, and e^(−y²/2) times a
// derivative of the Mills ratio takes their place.
func lossPerSpread(y float64) float64 {
	p := float64(vec.NormPDF1(y))
	if y < -tailFrom {
		return math.FMA(-y, vec.NormCDF1(-y), p)
	}
	_, d, _ := mills(y)
	return float64(-d*p) / invSqrt2Pi
}
