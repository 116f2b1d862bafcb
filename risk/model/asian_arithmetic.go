package model

// ArithmeticAsian prices European calls (sign +1) and puts (sign −1) on the
// arithmetic average of the spot price, taken without a break from start years
// from now until expiry. Once start is below 0, average is that of the time
// elapsed; before, it is not looked at.
//
// Computes the value as if the average of the time left, M, were lognormal with
// its true first two moments. With ω the share of the window still to come, τ the
// years until it begins or 0, l those left of it, A the average so far, b = r − q,
//
//	E[M]         = S·e^(bτ)·exp[0, bl]
//	E[M²]/E[M]²  = e^(σ²τ)·exp[0, bl, 2bl+σ²l]/exp[0, bl, 2bl] = e^(v²)
//	V = e^(−rT)·w(ω·E[M]·Φ(w·d₁) − K′·Φ(w·d₂)),  K′ = K − (1−ω)·A
//
// where exp[…] are divided differences of the exponential, so that neither b = 0
// nor a small σ is a special case, and d₁,₂ = ln(ω·E[M]/K′)/v ± ½v. Where K′ ≤ 0
// exercise is certain: V = e^(−rT)·(ω·E[M] − K′) for a call, 0 for a put.
//
// Theta and Charm are the change with all dates fixed, the spot unchanged and the
// average growing by it: in terms of A held, ∂V/∂t + (S−A)/(time elapsed)·∂V/∂A.
// The true value solves the Black–Scholes equation with them. This one does where
// it is exact, and has a Residual there: K′ ≤ 0, no spread, or a window of no
// length, which is a vanilla option. Elsewhere Residual is NaN, and Theta jumps
// when the window begins, because the assumption becomes another one.
// Shapes, units, special cases: as GeometricAsian; NaN also for σ²T above 250.
// Accuracy: of the formula, 1e-14 of S + K for ordinary contracts. Of the
// assumption, for K within a standard deviation of the forward, 0.01 % of S at
// σ√T = 0.1, 0.1 % at 0.3, 1 % at 0.8; see TestArithmeticAsianError.
// Source: S. M. Turnbull & L. M. Wakeman, A quick algorithm for pricing European
// average options, J. Financial and Quantitative Analysis 26 (1991); E. Levy,
// Pricing European average rate currency options, J. International Money and
// Finance 11 (1992), for two moments alone.
func ArithmeticAsian(g *Greeks, spot, strike, start, average, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		k, t, v, r, q, w := strike[i], time[i], vol[i], rate[i], yield[i], sign[i]
		if !valid(s, k, t, v, r, q, w) || !validWindow(start[i], average[i], t) || !momentsInRange(t, v) {
			g.refuse(i)
			continue
		}
		x, exact := arithmeticAsian(jetMarket(s, v, t, r, q), k, start[i], average[i], w)
		if exact {
			g.putBalanced(i, x, s, v, r, q)
		} else {
			g.put(i, x)
		}
	}
}

// ArithmeticAsianPrice is ArithmeticAsian without the sensitivities.
func ArithmeticAsianPrice(price, spot, strike, start, average, time, vol, rate, yield, sign []float64) {
	for i, s := range spot {
		k, t, v, r, q, w := strike[i], time[i], vol[i], rate[i], yield[i], sign[i]
		if !valid(s, k, t, v, r, q, w) || !validWindow(start[i], average[i], t) || !momentsInRange(t, v) {
			price[i] = nan
			continue
		}
		x, _ := arithmeticAsian(plainMarket(s, v, t, r, q), k, start[i], average[i], w)
		price[i] = x.value()
	}
}

// ArithmeticAsianOnFuture is ArithmeticAsian on a futures price: q = r, and Rho
// holds the futures price, so that CarryRho is 0. For the price alone,
// ArithmeticAsianPrice with the rate as yield.
func ArithmeticAsianOnFuture(g *Greeks, future, strike, start, average, time, vol, rate, sign []float64) {
	for i, f := range future {
		k, t, v, r, w := strike[i], time[i], vol[i], rate[i], sign[i]
		if !valid(f, k, t, v, r, r, w) || !validWindow(start[i], average[i], t) || !momentsInRange(t, v) {
			g.refuse(i)
			continue
		}
		x, exact := arithmeticAsian(jetFuture(f, v, t, r), k, start[i], average[i], w)
		if exact {
			g.putBalanced(i, x, f, v, r, r)
		} else {
			g.put(i, x)
		}
	}
}

// momentsInRange keeps the second moment, e^(σ²T) and more, within a float64.
func momentsInRange(t, vol float64) bool { return vol*vol*t <= 250 }

func arithmeticAsian[N number[N]](m market[N], strike, start, average, w float64) (value N, exact bool) {
	win := newWindow(m, start)
	carry := m.r.minus(m.q)
	growth := carry.times(win.left)
	mean := m.s.times(expOf(carry.times(win.ahead))).times(meanGrowthOf(growth)).times(win.share)
	left := win.fixed(average, m.s.value()).scaled(-1).shifted(strike) // K′
	discount := expOf(m.r.times(m.t).scaled(-1))
	f, k := mean.times(discount), left.times(discount)
	if left.value() <= 0 {
		if w < 0 {
			return value.constant(0), true
		}
		return f.minus(k), true
	}
	variance := m.vol.times(m.vol)
	v2 := variance.times(win.ahead).plus(log1pOf(spreadOf(growth, variance.times(win.left))))
	if v2.value() < certainBelow*certainBelow {
		return exchange(f, k, w), true
	}
	return black(f, k, logRatioOf(mean, left), sqrtOf(v2), w), win.left.value() == 0
}

// meanGrowthOf is exp[0, x] = (eˣ − 1)/x, the average of e^(bu) over a window with x = b·l.
func meanGrowthOf[N number[N]](x N) N {
	e, d, dd := meanGrowth(x.value())
	return x.of1(e, d, dd)
}

// spreadOf is E[M²]/E[M]² − 1 of an average M over a window that begins now, for
// x = b·l and z = σ²·l: exp[0, x, 2x+z]/exp[0, x, 2x] − 1, which is
// z·exp[0, x, 2x, 2x+z] over ½·exp[0, x]².
func spreadOf[N number[N]](x, z N) N {
	d, dx, dz, dzz := momentDifference(x.value(), z.value())
	// x depends on neither S nor σ, so its own second derivatives meet zeros only
	moment := x.of2(z, d, dx, dz, 0, 0, dzz)
	mean := invOf(meanGrowthOf(x))
	return z.times(moment).times(mean).times(mean).scaled(2)
}
