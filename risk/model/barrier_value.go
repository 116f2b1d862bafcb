package model

import "nightbook/risk/vec"

// barrier values one contract of Barrier that has not died.
func barrier[N number[N]](m market[N], o barrierOption) N {
	switch {
	case o.touched(m.s.value()):
		return vanilla(m, o.strike, o.sign)
	case spread(m) < certainBelow:
		return certainBarrier(m, o)
	}
	p := newBarrierParts(m, o)
	living := p.living()
	var value N
	switch along := o.sign*-o.side > 0; {
	case o.in && along && living:
		value = p.strikeImage()
	case o.in && along:
		value = p.vanilla().minus(p.beyond()).plus(p.barrierImage())
	case o.in && living:
		value = p.beyond().minus(p.strikeImage()).plus(p.barrierImage())
	case o.in:
		value = p.vanilla()
	case along && living:
		value = p.vanilla().minus(p.strikeImage())
	case along:
		value = p.beyond().minus(p.barrierImage())
	case living:
		value = p.vanilla().minus(p.beyond()).plus(p.strikeImage()).minus(p.barrierImage())
	default:
		value = value.constant(0)
	}
	if o.rebate == 0 {
		return value
	}
	if o.in {
		return value.plus(p.untouched().scaled(o.rebate))
	}
	return value.plus(p.touch().scaled(o.rebate))
}

// vanilla is the European option under market m.
func vanilla[N number[N]](m market[N], strike, w float64) N {
	f := discounted(m.s, m.q, m.t)
	k := expOf(m.r.times(m.t).scaled(-1)).scaled(strike)
	if spread(m) < certainBelow {
		return exchange(f, k, w)
	}
	moneyness := logOf(m.s, strike).plus(m.r.minus(m.q).times(m.t))
	return black(f, k, moneyness, m.vol.times(sqrtOf(m.t)), w)
}

// certainBarrier lets the spot run along its forward: it touches the barrier at
// ln(H/S)/(r−q), or never.
func certainBarrier[N number[N]](m market[N], o barrierOption) N {
	carry := m.r.minus(m.q)
	way := logOf(m.s, o.barrier).minus(m.vol.scaled(monitoringShift(o.interval, o.side))).scaled(-1) // ln(H/S)
	touches := o.side*(float64(carry.value()*m.t.value())-way.value()) >= 0
	switch {
	case o.in == touches:
		return vanilla(m, o.strike, o.sign)
	case o.in:
		return expOf(m.r.times(m.t).scaled(-1)).scaled(o.rebate)
	}
	return expOf(m.r.times(way).times(invOf(carry)).scaled(-1)).scaled(o.rebate)
}

// barrierParts are what the parts of a barrier option have in common. Distances
// between prices are logarithms in units of σ√T, d as d₂ of the Black–Scholes
// formula for a strike at H.
type barrierParts[N number[N]] struct {
	market[N]
	option barrierOption

	shift, barrier    N // ln of what the interval adds to the barrier; the barrier with it
	sd, inv           N // σ√T, 1/(σ√T)
	height, drift     N // ln(S/H), (r−q−½σ²)T
	d, image          N // height + drift; −height + drift, that of H²/S
	discount, carried N // −rT, −qT
	imageExponent     N // ln (H/S)^(2μ)
	tameExponent      N // −rT − ½d²
}

func newBarrierParts[N number[N]](m market[N], o barrierOption) barrierParts[N] {
	p := barrierParts[N]{market: m, option: o}
	p.shift = m.vol.scaled(monitoringShift(o.interval, o.side))
	p.barrier = expOf(p.shift).scaled(o.barrier)
	p.sd = m.vol.times(sqrtOf(m.t))
	p.inv = invOf(p.sd)
	p.height = logOf(m.s, o.barrier).minus(p.shift).times(p.inv)
	p.discount = m.r.times(m.t).scaled(-1)
	p.carried = m.q.times(m.t).scaled(-1)
	p.drift = p.carried.minus(p.discount).times(p.inv).minus(p.sd.scaled(0.5))
	p.d = p.drift.plus(p.height)
	p.image = p.drift.minus(p.height)
	p.imageExponent = p.height.times(p.drift).scaled(-2)
	p.tameExponent = p.discount.minus(p.d.times(p.d).scaled(0.5))
	return p
}

// living reports whether the strike is on the side of the barrier on which the
// option lives.
func (p *barrierParts[N]) living() bool {
	x := vec.LogRatio1(p.option.strike, p.option.barrier) - p.shift.value()
	return x == 0 || x > 0 == (p.option.side < 0)
}

// vanilla is A.
func (p *barrierParts[N]) vanilla() N { return vanilla(p.market, p.option.strike, p.option.sign) }

// beyond is B, w·(S·e^(−qT)·Φ(w·(d+σ√T)) − K·e^(−rT)·Φ(w·d)).
func (p *barrierParts[N]) beyond() N {
	w := p.option.sign
	asset := expOf(p.carried).times(p.s).times(cdfOf(p.d.plus(p.sd).scaled(w)))
	cash := expOf(p.discount).times(cdfOf(p.d.scaled(w))).scaled(p.option.strike)
	return asset.minus(cash).scaled(w)
}

// strikeImage is C and barrierImage D: the image (H/S)^(2μ)·V(H²/S) of a vanilla
// option, and of one whose payoff ends at the barrier. Their legs end where the
// option dies, so what (H/S)^(2μ) gains the tails lose: d being that of the
// spot itself, (H/S)^(2μ)·φ(image of d) = φ(d)·e^(−2·ln(H/S)·ln(H/K)/(σ²T)).
func (p *barrierParts[N]) strikeImage() N {
	k := p.shift.scaled(-1).shifted(vec.LogRatio1(p.option.strike, p.option.barrier)).times(p.inv) // ln(K/H)
	d := p.d.minus(k)
	tame := p.discount.minus(d.times(d).scaled(0.5)).minus(p.height.times(k).scaled(2))
	moneyness := p.height.plus(k).times(p.sd).scaled(-1)
	asset, cash := p.imageLegs(moneyness, p.image.minus(k), tame)
	return asset.minus(cash).scaled(float64(p.option.sign * p.option.strike))
}

func (p *barrierParts[N]) barrierImage() N {
	moneyness := p.height.times(p.sd).scaled(-1)
	asset, cash := p.imageLegs(moneyness, p.image, p.tameExponent)
	return asset.times(p.barrier).minus(cash.scaled(p.option.strike)).scaled(p.option.sign)
}

// imageLegs returns the images of an asset digital, in units of its strike, and
// of a cash digital. Moneyness is that of the image of the spot.
func (p *barrierParts[N]) imageLegs(moneyness, d, tame N) (asset, cash N) {
	asset = leg(moneyness.plus(p.carried).plus(p.imageExponent), tame, d.plus(p.sd).scaled(-p.option.side))
	return asset, p.cashImage(d, tame)
}

func (p *barrierParts[N]) cashImage(d, tame N) N {
	return leg(p.discount.plus(p.imageExponent), tame, d.scaled(-p.option.side))
}

// untouched is E for a rebate of 1: paid at expiry if the barrier never was touched.
func (p *barrierParts[N]) untouched() N {
	alive := expOf(p.discount).times(cdfOf(p.d.scaled(-p.option.side)))
	return alive.minus(p.cashImage(p.image, p.tameExponent))
}

// touch is F for a rebate of 1: paid at the touch.
func (p *barrierParts[N]) touch() N {
	w := -p.option.side
	return firstTouch(p.height.scaled(w), p.drift.scaled(w), p.discount, p.tameExponent)
}
