package model

import (
	"math/rand/v2"
	"testing"
)

// One operation is one line.
func BenchmarkClosedForms(b *testing.B) {
	const n = 256
	rng := rand.New(rand.NewPCG(81, 82))
	var s, k, t, v, r, q, w, payout, start, average []float64
	var c BarrierTerms
	for range n {
		d := randomDeal(rng)
		s, k, t, v = append(s, d.s), append(k, d.k), append(t, d.t), append(v, d.v)
		r, q, w, payout = append(r, d.r), append(q, d.q), append(w, d.w), append(payout, d.payout)
		start, average = append(start, d.start), append(average, d.average)
		c.Barrier, c.Rebate, c.Interval = append(c.Barrier, d.barrier), append(c.Rebate, d.rebate), append(c.Interval, d.gap)
		c.Side, c.Knock = append(c.Side, d.side), append(c.Knock, d.knock)
	}
	g := newGreeks(n)
	for _, m := range []struct {
		name          string
		greeks, price func()
	}{
		{"bachelier", func() { Bachelier(g, s, k, t, v, r, w) }, func() { BachelierPrice(g.Price, s, k, t, v, r, w) }},
		{"cash digital", func() { CashDigital(g, s, k, payout, t, v, r, q, w) }, func() { CashDigitalPrice(g.Price, s, k, payout, t, v, r, q, w) }},
		{"asset digital", func() { AssetDigital(g, s, k, t, v, r, q, w) }, func() { AssetDigitalPrice(g.Price, s, k, t, v, r, q, w) }},
		{"barrier", func() { Barrier(g, &c, s, k, t, v, r, q, w) }, func() { BarrierPrice(g.Price, &c, s, k, t, v, r, q, w) }},
		{"geometric asian", func() { GeometricAsian(g, s, k, start, average, t, v, r, q, w) },
			func() { GeometricAsianPrice(g.Price, s, k, start, average, t, v, r, q, w) }},
		{"arithmetic asian", func() { ArithmeticAsian(g, s, k, start, average, t, v, r, q, w) },
			func() { ArithmeticAsianPrice(g.Price, s, k, start, average, t, v, r, q, w) }},
	} {
		for _, form := range []struct {
			name string
			run  func()
		}{{"greeks", m.greeks}, {"price", m.price}} {
			b.Run(m.name+"/"+form.name, func(b *testing.B) {
				b.ReportAllocs()
				for i := 0; i < b.N; i += n {
					form.run()
				}
			})
		}
	}
}
