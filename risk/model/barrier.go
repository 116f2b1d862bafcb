package model

import (
	"math"

	"nightbook/risk/vec"
)

// BarrierTerms are the columns that make barrier options of European ones.
type BarrierTerms struct {
	Barrier  []float64 // the price H at which the option comes to life or dies
	Rebate   []float64 // paid if it dies, at the touch, or if it never lived, at expiry
	Interval []float64 // years between observations of the price, 0 if it is watched without a break
	Side     []float64 // +1 for a barrier above the price (up), −1 for one below (down)
	Knock    []float64 // +1 for options that come to life (in), −1 for those that die (out)
}

// Barrier prices European calls (sign +1) and puts (sign −1) that come to life or
// die when the spot price touches a barrier.
//
// Computes, for a spot on the living side, the discounted expectation over paths
// that have or have not touched: with μ = (r − q − ½σ²)/σ² and the names of the
// source, for a strike on the living side (φη = 1 for a call down or a put up)
//
//	φη = 1:  in C + E  out A − C + F    φη = −1: in B − C + D + E  out A − B + C − D + F
//
// and for a strike beyond the barrier
//
//	φη = 1:  in A − B + D + E  out B − D + F    φη = −1: in A + E  out F.
//
// A is the vanilla option, B the same where it ends beyond the barrier, C and D
// their images (H/S)^(2μ)·V(H²/S), E the rebate at expiry and F that at the touch.
// A price looked at every Δ years only is taken to be watched without a break at
// the barrier H·e^(±0.5826·σ√Δ), further away; vega, vanna and volga move it along.
// Shapes: all slices of one length.
// Units: S, K, H, rebate and V in one currency; T and Δ years; σ per √year; r and
// q per year.
// Special cases: a spot at or beyond H has touched it: an option that dies is
// worth its rebate, without any sensitivity, an option that comes to life is the
// vanilla option. σ√T = 0 lets the spot run along its forward.
// NaN in all results: an input NaN or infinite, S, K or H not within 10^±50, T not
// within 0 … 1000, σ not within 0 … 100, Δ not within 0 … 10, |r|·T or |q|·T above
// 100, |rebate| above 10^50, a sign, side or knock other than ±1. NaN in
// Residual: an option that has died.
// Accuracy: the price within 1e-14 of S + K + rebate for ordinary contracts; see
// the tables of internal/ref/closed_forms for the sensitivities.
// Source: E. Reiner & M. Rubinstein, Breaking down the barriers, Risk 4 (1991);
// M. Broadie, P. Glasserman & S. Kou, A continuity correction for discrete
// barrier options, Mathematical Finance 7 (1997).
func Barrier(g *Greeks, c *BarrierTerms, spot, strike, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		t, v, r, q := time[i], vol[i], rate[i], yield[i]
		o := c.contract(i, strike[i], sign[i])
		switch {
		case !valid(s, o.strike, t, v, r, q, o.sign) || !o.valid():
			g.refuse(i)
		case o.touched(s) && !o.in:
			g.put(i, jet{v: o.rebate})
		default:
			g.putBalanced(i, barrier(jetMarket(s, v, t, r, q), o), s, v, r, q)
		}
	}
}

// BarrierPrice is Barrier without the sensitivities.
func BarrierPrice(price []float64, c *BarrierTerms, spot, strike, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		t, v, r, q := time[i], vol[i], rate[i], yield[i]
		o := c.contract(i, strike[i], sign[i])
		switch {
		case !valid(s, o.strike, t, v, r, q, o.sign) || !o.valid():
			price[i] = nan
		case o.touched(s) && !o.in:
			price[i] = o.rebate
		default:
			price[i] = barrier(plainMarket(s, v, t, r, q), o).value()
		}
	}
}

// BarrierOnFuture is Barrier on a futures price: q = r, and Rho holds the futures
// price, so that CarryRho is 0. For the price alone, BarrierPrice with the rate
// as yield.
func BarrierOnFuture(g *Greeks, c *BarrierTerms, future, strike, time, vol, rate, sign []float64) {
	for i, f := range future {
		t, v, r := time[i], vol[i], rate[i]
		o := c.contract(i, strike[i], sign[i])
		switch {
		case !valid(f, o.strike, t, v, r, r, o.sign) || !o.valid():
			g.refuse(i)
		case o.touched(f) && !o.in:
			g.put(i, jet{v: o.rebate})
		default:
			g.putBalanced(i, barrier(jetFuture(f, v, t, r), o), f, v, r, r)
		}
	}
}

// MonitoringBarrier sets dst to the barriers that, watched without a break, stand
// for those observed every interval years: H·e^(side·β·σ√Δ).
// Source: Broadie, Glasserman & Kou 1997.
func MonitoringBarrier(dst, barrier, vol, interval, side []float64) {
	for i, h := range barrier {
		dst[i] = h * vec.Exp1(float64(monitoringShift(interval[i], side[i])*vol[i]))
	}
}

// monitoringShift is the logarithm of the shift of a barrier, per unit of volatility.
func monitoringShift(interval, side float64) float64 {
	return float64(side * float64(monitoringBeta*math.Sqrt(interval)))
}

const monitoringBeta = 0.58259715793901067020517716749189 // −ζ(½)/√(2π)

// largestInterval keeps the shift in range, with largestVol.
const largestInterval = 10

// barrierOption is one contract.
type barrierOption struct {
	strike, sign, barrier, rebate float64
	interval, side                float64
	knock                         float64
	in                            bool
}

func (c *BarrierTerms) contract(i int, strike, sign float64) barrierOption {
	return barrierOption{strike: strike, sign: sign, barrier: c.Barrier[i], rebate: c.Rebate[i],
		interval: c.Interval[i], side: c.Side[i], knock: c.Knock[i], in: c.Knock[i] > 0}
}

func (o *barrierOption) valid() bool {
	return isPrice(o.barrier) && isAmount(o.rebate) && o.interval >= 0 && o.interval <= largestInterval && isSign(o.side) && isSign(o.knock)
}

func (o *barrierOption) touched(spot float64) bool { return float64(o.side*(spot-o.barrier)) >= 0 }
