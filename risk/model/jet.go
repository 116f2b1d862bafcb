package model

import "math"

// number is what a formula is written over, once: as plain it gives a price, as
// jet the price with its sensitivities. Both take the same steps, so the price
// has the same bits either way.
//
// Every product is rounded before it is added to anything, which keeps a
// compiler from fusing the two; see package vec.
type number[N any] interface {
	value() float64
	constant(c float64) N // c, whatever the receiver
	plus(y N) N
	minus(y N) N
	times(y N) N
	scaled(c float64) N
	shifted(c float64) N
	// of1 is f at the receiver x, given f(x), f′(x) and f″(x).
	of1(f, d, dd float64) N
	// of2 is f at the receiver x and y, given its value and partial derivatives there.
	of2(y N, f, fx, fy, fxx, fxy, fyy float64) N
}

// plain is a number without derivatives.
type plain float64

func (x plain) value() float64                                      { return float64(x) }
func (x plain) constant(c float64) plain                            { return plain(c) }
func (x plain) plus(y plain) plain                                  { return x + y }
func (x plain) minus(y plain) plain                                 { return x - y }
func (x plain) times(y plain) plain                                 { return plain(float64(x * y)) }
func (x plain) scaled(c float64) plain                              { return plain(float64(float64(x) * c)) }
func (x plain) shifted(c float64) plain                             { return x + plain(c) }
func (x plain) of1(f, d, dd float64) plain                          { return plain(f) }
func (x plain) of2(y plain, f, fx, fy, fxx, fxy, fyy float64) plain { return plain(f) }

// jet is a number with those partial derivatives of the first and second order
// by spot S, volatility σ, time T, rate r and yield q that Greeks has a place for.
//
// Computes sums, products and chains of such numbers: a Taylor polynomial cut
// off after the orders kept, so derivatives are exact but for rounding.
// Accuracy: as the value, where the terms of a derivative do not cancel.
// Source: R. E. Wengert, A simple automatic derivative evaluation program,
// Comm. ACM 7 (1964).
type jet struct {
	v                float64 // the number
	s, vol, t, r, q  float64 // ∂/∂S, ∂/∂σ, ∂/∂T, ∂/∂r, ∂/∂q
	ss, svol, volvol float64 // ∂²/∂S², ∂²/∂S∂σ, ∂²/∂σ²
	st               float64 // ∂²/∂S∂T
}

func (x jet) value() float64         { return x.v }
func (x jet) constant(c float64) jet { return jet{v: c} }

func (x jet) plus(y jet) jet {
	return jet{
		v: x.v + y.v, s: x.s + y.s, vol: x.vol + y.vol, t: x.t + y.t, r: x.r + y.r, q: x.q + y.q,
		ss: x.ss + y.ss, svol: x.svol + y.svol, volvol: x.volvol + y.volvol, st: x.st + y.st,
	}
}

func (x jet) minus(y jet) jet {
	return jet{
		v: x.v - y.v, s: x.s - y.s, vol: x.vol - y.vol, t: x.t - y.t, r: x.r - y.r, q: x.q - y.q,
		ss: x.ss - y.ss, svol: x.svol - y.svol, volvol: x.volvol - y.volvol, st: x.st - y.st,
	}
}

func (x jet) times(y jet) jet {
	return jet{
		v:      float64(x.v * y.v),
		s:      math.FMA(x.v, y.s, float64(x.s*y.v)),
		vol:    math.FMA(x.v, y.vol, float64(x.vol*y.v)),
		t:      math.FMA(x.v, y.t, float64(x.t*y.v)),
		r:      math.FMA(x.v, y.r, float64(x.r*y.v)),
		q:      math.FMA(x.v, y.q, float64(x.q*y.v)),
		ss:     math.FMA(x.v, y.ss, math.FMA(float64(2*x.s), y.s, float64(x.ss*y.v))),
		svol:   math.FMA(x.v, y.svol, math.FMA(x.s, y.vol, math.FMA(x.vol, y.s, float64(x.svol*y.v)))),
		volvol: math.FMA(x.v, y.volvol, math.FMA(float64(2*x.vol), y.vol, float64(x.volvol*y.v))),
		st:     math.FMA(x.v, y.st, math.FMA(x.s, y.t, math.FMA(x.t, y.s, float64(x.st*y.v)))),
	}
}

func (x jet) scaled(c float64) jet {
	return jet{
		v: float64(x.v * c), s: float64(x.s * c), vol: float64(x.vol * c), t: float64(x.t * c), r: float64(x.r * c), q: float64(x.q * c),
		ss: float64(x.ss * c), svol: float64(x.svol * c), volvol: float64(x.volvol * c), st: float64(x.st * c),
	}
}

func (x jet) shifted(c float64) jet {
	x.v += c
	return x
}

// of1 is the chain rule: ∂²f(x)/∂a∂b = f′·x_ab + f″·x_a·x_b.
func (x jet) of1(f, d, dd float64) jet {
	ds, dvol := float64(dd*x.s), float64(dd*x.vol)
	return jet{
		v: f, s: float64(d * x.s), vol: float64(d * x.vol), t: float64(d * x.t), r: float64(d * x.r), q: float64(d * x.q),
		ss:     math.FMA(d, x.ss, float64(ds*x.s)),
		svol:   math.FMA(d, x.svol, float64(ds*x.vol)),
		volvol: math.FMA(d, x.volvol, float64(dvol*x.vol)),
		st:     math.FMA(d, x.st, float64(ds*x.t)),
	}
}

// of2 is the chain rule in two arguments. With ∂f_x = f_xx·x_a + f_xy·y_a and
// ∂f_y alike, ∂²f/∂a∂b = f_x·x_ab + f_y·y_ab + ∂f_x·x_b + ∂f_y·y_b.
func (x jet) of2(y jet, f, fx, fy, fxx, fxy, fyy float64) jet {
	fxs, fys := math.FMA(fxx, x.s, float64(fxy*y.s)), math.FMA(fxy, x.s, float64(fyy*y.s))
	fxv, fyv := math.FMA(fxx, x.vol, float64(fxy*y.vol)), math.FMA(fxy, x.vol, float64(fyy*y.vol))
	return jet{
		v:      f,
		s:      math.FMA(fx, x.s, float64(fy*y.s)),
		vol:    math.FMA(fx, x.vol, float64(fy*y.vol)),
		t:      math.FMA(fx, x.t, float64(fy*y.t)),
		r:      math.FMA(fx, x.r, float64(fy*y.r)),
		q:      math.FMA(fx, x.q, float64(fy*y.q)),
		ss:     math.FMA(fx, x.ss, math.FMA(fy, y.ss, math.FMA(fxs, x.s, float64(fys*y.s)))),
		svol:   math.FMA(fx, x.svol, math.FMA(fy, y.svol, math.FMA(fxs, x.vol, float64(fys*y.vol)))),
		volvol: math.FMA(fx, x.volvol, math.FMA(fy, y.volvol, math.FMA(fxv, x.vol, float64(fyv*y.vol)))),
		st:     math.FMA(fx, x.st, math.FMA(fy, y.st, math.FMA(fxs, x.t, float64(fys*y.t)))),
	}
}
