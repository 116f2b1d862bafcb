package pde_test

import (
	"testing"

	"nightbook/risk/model/pde"
)

// Lines a second of one core, each with all sensitivities, an error estimate and
// the exercise boundary.
func BenchmarkSolve(b *testing.B) {
	four := []pde.Dividend{{Time: .1, Amount: 1}, {Time: .35, Amount: 1}, {Time: .6, Amount: 1}, {Time: .85, Amount: 1}}
	flat := func(c pde.Chain, n int) pde.Chain {
		for i := range n {
			c.Strike = append(c.Strike, 80+2*float64(i))
			c.Vol = append(c.Vol, .25)
		}
		return c
	}
	one := pde.Chain{Spot: 100, Time: 1, Rate: .05, Yield: .01, Sign: -1, American: true}
	cash := one
	cash.Dividends = four
	call := cash
	call.Sign = 1
	european := cash
	european.American = false
	for _, c := range []struct {
		name      string
		chain     pde.Chain
		lines     int
		tolerance float64
	}{
		{"american", one, 1, 0},
		{"american/1e-4", one, 1, 1e-4},
		{"four_dividends/european", european, 1, 1e-4},
		{"four_dividends/put", cash, 1, 1e-4},
		{"four_dividends/call", call, 1, 1e-4},
		{"four_dividends/call/2e-5", call, 1, 2e-5},
		{"four_dividends/20_strikes", call, 20, 1e-4},
		{"20_strikes", one, 20, 1e-4},
		{"20_strikes/2e-5", one, 20, 2e-5},
	} {
		b.Run(c.name, func(b *testing.B) {
			s := pde.Solver{Tolerance: c.tolerance}
			var r pde.Results
			chain := flat(c.chain, c.lines)
			b.ReportAllocs()
			for b.Loop() {
				s.Solve(&chain, &r)
			}
			b.ReportMetric(float64(c.lines*b.N)/b.Elapsed().Seconds(), "lines/s")
			for i, e := range r.Error {
				if r.Status[i] != pde.Held && r.Status[i] != pde.Exercised || e > max(c.tolerance, 1e-4)*chain.Spot {
					b.Fatalf("line %d: status %v, error %v", i, r.Status[i], e)
				}
			}
		})
	}
}

// Lines a second of one core where 20 strikes of one expiry, type and volatility
// share their sweeps, tolerance 1e-4 of the spot; and as 20 chains of one.
func BenchmarkStrip20(b *testing.B) {
	four := []pde.Dividend{{Time: .1, Amount: 1}, {Time: .35, Amount: 1}, {Time: .6, Amount: 1}, {Time: .85, Amount: 1}}
	for _, c := range []struct {
		name     string
		sign     float64
		american bool
		dividend []pde.Dividend
	}{
		{"european", 1, false, four},
		{"put", -1, true, four},
		{"call", 1, true, four},
		{"no_dividends", -1, true, nil},
	} {
		chain := pde.Chain{Spot: 100, Time: 1, Rate: .05, Yield: .01, Sign: c.sign, American: c.american, Dividends: c.dividend}
		for i := range 20 {
			chain.Strike, chain.Vol = append(chain.Strike, 80+2*float64(i)), append(chain.Vol, .25)
		}
		s := pde.Solver{Tolerance: 1e-4}
		var r pde.Results
		b.Run(c.name+"/strip", func(b *testing.B) {
			for b.Loop() {
				s.Solve(&chain, &r)
			}
			b.ReportMetric(float64(20*b.N)/b.Elapsed().Seconds(), "lines/s")
		})
		b.Run(c.name+"/alone", func(b *testing.B) {
			one := chain
			for b.Loop() {
				for i := range chain.Strike {
					one.Strike, one.Vol = chain.Strike[i:i+1], chain.Vol[i:i+1]
					s.Solve(&one, &r)
				}
			}
			b.ReportMetric(float64(20*b.N)/b.Elapsed().Seconds(), "lines/s")
		})
	}
}

// Prices alone beside all results: lines a second of 10 shares with two dividends,
// each with 40 American options of one expiry, of one volatility or of a smile.
func BenchmarkPrices(b *testing.B) {
	for _, c := range []struct {
		name string
		skew float64
	}{{"flat", 0}, {"smile", .1}} {
		l := new(pde.Lines)
		for share := range 10 {
			spot, vol := 40+10*float64(share), .18+.01*float64(share)
			for i := range 40 {
				z := -2 + .2*float64(i/2)
				l.Spot, l.Strike, l.Time = append(l.Spot, spot), append(l.Strike, spot*(1+.7*z*vol)), append(l.Time, .5)
				l.Vol, l.Rate, l.Yield = append(l.Vol, vol*(1-c.skew*z)), append(l.Rate, .03), append(l.Yield, .005)
				l.Sign, l.American = append(l.Sign, float64(1-2*(i%2))), append(l.American, true)
				l.Dividends = append(l.Dividends, []pde.Dividend{{Time: .15, Amount: .01 * spot}, {Time: .4, Amount: .01 * spot}})
			}
		}
		var s pde.Solver
		var r pde.Results
		price := make([]float64, len(l.Spot))
		for _, form := range []struct {
			name string
			run  func()
		}{{"all", func() { s.SolveLines(l, &r) }}, {"prices", func() { s.Prices(l, price) }}} {
			b.Run(c.name+"/"+form.name, func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					form.run()
				}
				b.ReportMetric(float64(len(price)*b.N)/b.Elapsed().Seconds(), "lines/s")
			})
		}
	}
}
