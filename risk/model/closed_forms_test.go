package model

import (
	"encoding/binary"
	"fmt"
	"hash/fnv"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"nightbook/risk/vec"
)

// deal is one contract of any closed-form model.
type deal struct {
	s, k, t, v, r, q, w               float64
	payout                            float64 // digitals
	barrier, rebate, gap, side, knock float64 // barriers; gap between observations
	start, average                    float64 // averages
}

// set changes the input that a reference table calls name.
func (d *deal) set(name string, x float64) bool {
	in, ok := map[string]*float64{"spot": &d.s, "future": &d.s, "strike": &d.k, "time": &d.t, "vol": &d.v, "rate": &d.r,
		"yield": &d.q, "sign": &d.w, "payout": &d.payout, "barrier": &d.barrier, "rebate": &d.rebate, "interval": &d.gap,
		"side": &d.side, "knock": &d.knock, "start": &d.start, "average": &d.average}[name]
	if ok {
		*in = x
	}
	return ok
}

func one(x float64) []float64 { return []float64{x} }

// closedForm is a model as these tests call it: both of its functions, and
// what is true of it.
type closedForm struct {
	name     string
	greeks   func(*Greeks, deal)
	price    func([]float64, deal)
	onFuture bool // there is no yield
	balanced bool // it solves the Black–Scholes equation
	// unit is what the accuracy of a price is measured by
	unit func(deal) float64
}

var closedForms = []closedForm{
	{"bachelier",
		func(g *Greeks, d deal) { Bachelier(g, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.w)) },
		func(p []float64, d deal) {
			BachelierPrice(p, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.w))
		},
		true, true, func(d deal) float64 { return d.v * math.Sqrt(d.t) }},
	{"cash digital",
		func(g *Greeks, d deal) {
			CashDigital(g, one(d.s), one(d.k), one(d.payout), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		func(p []float64, d deal) {
			CashDigitalPrice(p, one(d.s), one(d.k), one(d.payout), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		false, true, func(d deal) float64 { return d.payout }},
	{"cash digital on a future",
		func(g *Greeks, d deal) {
			CashDigitalOnFuture(g, one(d.s), one(d.k), one(d.payout), one(d.t), one(d.v), one(d.r), one(d.w))
		},
		func(p []float64, d deal) {
			CashDigitalPrice(p, one(d.s), one(d.k), one(d.payout), one(d.t), one(d.v), one(d.r), one(d.r), one(d.w))
		},
		true, true, func(d deal) float64 { return d.payout }},
	{"asset digital",
		func(g *Greeks, d deal) {
			AssetDigital(g, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		func(p []float64, d deal) {
			AssetDigitalPrice(p, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		false, true, func(d deal) float64 { return d.s }},
	{"asset digital on a future",
		func(g *Greeks, d deal) {
			AssetDigitalOnFuture(g, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.w))
		},
		func(p []float64, d deal) {
			AssetDigitalPrice(p, one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.r), one(d.w))
		},
		true, true, func(d deal) float64 { return d.s }},
	{"barrier",
		func(g *Greeks, d deal) {
			Barrier(g, d.terms(), one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		func(p []float64, d deal) {
			BarrierPrice(p, d.terms(), one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		false, true, deal.sum},
	{"barrier on a future",
		func(g *Greeks, d deal) {
			BarrierOnFuture(g, d.terms(), one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.w))
		},
		func(p []float64, d deal) {
			BarrierPrice(p, d.terms(), one(d.s), one(d.k), one(d.t), one(d.v), one(d.r), one(d.r), one(d.w))
		},
		true, true, deal.sum},
	{"geometric asian",
		func(g *Greeks, d deal) {
			GeometricAsian(g, one(d.s), one(d.k), one(d.start), one(d.average), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		func(p []float64, d deal) {
			GeometricAsianPrice(p, one(d.s), one(d.k), one(d.start), one(d.average), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		false, true, deal.sum},
	{"geometric asian on a future",
		func(g *Greeks, d deal) {
			GeometricAsianOnFuture(g, one(d.s), one(d.k), one(d.start), one(d.average), one(d.t), one(d.v), one(d.r), one(d.w))
		},
		func(p []float64, d deal) {
			GeometricAsianPrice(p, one(d.s), one(d.k), one(d.start), one(d.average), one(d.t), one(d.v), one(d.r), one(d.r), one(d.w))
		},
		true, true, deal.sum},
	{"arithmetic asian",
		func(g *Greeks, d deal) {
			ArithmeticAsian(g, one(d.s), one(d.k), one(d.start), one(d.average), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		func(p []float64, d deal) {
			ArithmeticAsianPrice(p, one(d.s), one(d.k), one(d.start), one(d.average), one(d.t), one(d.v), one(d.r), one(d.q), one(d.w))
		},
		false, false, deal.sum},
	{"arithmetic asian on a future",
		func(g *Greeks, d deal) {
			ArithmeticAsianOnFuture(g, one(d.s), one(d.k), one(d.start), one(d.average), one(d.t), one(d.v), one(d.r), one(d.w))
		},
		func(p []float64, d deal) {
			ArithmeticAsianPrice(p, one(d.s), one(d.k), one(d.start), one(d.average), one(d.t), one(d.v), one(d.r), one(d.r), one(d.w))
		},
		true, false, deal.sum},
}

// terms are the columns of a barrier option.
func (d deal) terms() *BarrierTerms {
	return &BarrierTerms{Barrier: one(d.barrier), Rebate: one(d.rebate), Interval: one(d.gap), Side: one(d.side), Knock: one(d.knock)}
}

// sum is what changes hands in an option that ends in the money.
func (d deal) sum() float64 { return d.s + d.k + d.rebate }

func closedFormNamed(t *testing.T, name string) *closedForm {
	t.Helper()
	for i := range closedForms {
		if closedForms[i].name == name {
			return &closedForms[i]
		}
	}
	t.Fatalf("no closed form %q", name)
	return nil
}

// randomDeal is an ordinary contract: days to years, a few standard deviations
// around the spot. It has the same bits on every machine.
func randomDeal(rng *rand.Rand) deal {
	between := func(a, b float64) float64 { return a + float64((b-a)*rng.Float64()) }
	side := func() float64 { return float64(1 - 2*rng.IntN(2)) }
	d := deal{s: 100, t: vec.Exp1(between(-4, 2)), v: vec.Exp1(between(-3, 0)),
		r: between(-0.03, 0.12), q: between(-0.03, 0.1), w: side(), payout: between(0, 200)}
	spread := d.v * math.Sqrt(d.t)
	d.k = 100 * vec.Exp1(spread*(between(-2, 2)+between(-2, 2)))
	d.side, d.knock = side(), side()
	d.barrier = 100 * vec.Exp1(d.side*spread*between(0.02, 3))
	d.rebate = float64(rng.IntN(2)) * between(0, 20)
	d.gap = float64(rng.IntN(2)) * d.t * between(0, 0.1)
	d.start = d.t * between(-0.8, 0.8)
	d.average = 100 * vec.Exp1(spread*between(-1, 1))
	return d
}

// deal is what a random deal is for a model: the normal one takes volatility
// in units of the price, and knows negative prices.
func (f *closedForm) deal(d deal) deal {
	if f.name == "bachelier" {
		d.v *= d.s
		d.s, d.k = d.s-110, d.k-110
	}
	if f.onFuture {
		d.q = 0
	}
	return d
}

func TestClosedPriceIsThatOfTheGreeks(t *testing.T) {
	rng := rand.New(rand.NewPCG(21, 22))
	for _, f := range closedForms {
		g, p := newGreeks(1), one(0)
		for range 2000 {
			d := f.deal(randomDeal(rng))
			f.greeks(g, d)
			f.price(p, d)
			if g.Price[0] != p[0] {
				t.Fatalf("%s of %+v: %v with sensitivities, %v without", f.name, d, g.Price[0], p[0])
			}
		}
	}
}

// Every sensitivity is the derivative of the price, by differences.
func TestClosedSensitivitiesAreDerivatives(t *testing.T) {
	rng := rand.New(rand.NewPCG(23, 24))
	for _, f := range closedForms {
		g, moved := newGreeks(1), newGreeks(1)
		for range 1000 {
			d := f.deal(randomDeal(rng))
			spread := d.v * math.Sqrt(d.t)
			if f.name != "bachelier" {
				spread *= d.s
			}
			hs, hv, ht, hr := 1e-3*spread, 1e-3*d.v, 1e-3*d.t, 1e-3*min(1, spread/d.t/100)
			// fourth-order central differences of result i along one input
			diff := func(i int, move func(*deal, float64), h float64) float64 {
				at := func(x float64) float64 {
					e := d
					move(&e, x*h)
					f.greeks(moved, e)
					return (*moved.Slices()[i])[0]
				}
				return (8*(at(1)-at(-1)) - (at(2) - at(-2))) / (12 * h)
			}
			bySpot := func(e *deal, h float64) { e.s += h }
			byVol := func(e *deal, h float64) { e.v += h }
			if math.Abs(d.start) < 5*ht {
				d.start = 0.1 * d.t // off the moment at which the window begins
			}
			byTime := func(e *deal, h float64) { f.later(e, -h) }
			byRate := func(e *deal, h float64) { e.r += h }
			byYield := func(e *deal, h float64) { e.q += h }
			f.greeks(g, d)
			units := f.units(d)
			for result, want := range map[int]float64{
				1: diff(0, bySpot, hs), 2: diff(1, bySpot, hs),
				3: diff(0, byVol, hv), 4: -diff(0, byTime, ht),
				5: diff(0, byRate, hr), 6: diff(0, byYield, hr),
				7: diff(1, byVol, hv), 8: diff(3, byVol, hv), 9: -diff(1, byTime, ht),
			} {
				got := (*g.Slices()[result])[0]
				if !(math.Abs(got-want) <= 1e-8*max(units[result], math.Abs(want))) {
					t.Fatalf("%s %s of %+v = %v, by differences %v", f.name, greekNames[result], d, got, want)
				}
			}
		}
	}
}

// later lets time pass with the spot unchanged, and the average grow by it.
func (f *closedForm) later(d *deal, dt float64) {
	elapsed := -d.start
	d.t -= dt
	d.start -= dt
	switch {
	case elapsed < 0:
	case strings.HasPrefix(f.name, "geometric"):
		d.average = math.Exp((elapsed*math.Log(d.average) + dt*math.Log(d.s)) / (elapsed + dt))
	case strings.HasPrefix(f.name, "arithmetic"):
		d.average = (elapsed*d.average + dt*d.s) / (elapsed + dt)
	}
}

func TestClosedResidual(t *testing.T) {
	rng := rand.New(rand.NewPCG(25, 26))
	for _, f := range closedForms {
		g := newGreeks(1)
		worst := 0.0
		for range 20000 {
			d := f.deal(randomDeal(rng))
			f.greeks(g, d)
			if f.balanced && !(g.Residual[0] <= 1e-9) {
				t.Fatalf("%s of %+v: residual %v", f.name, d, g.Residual[0])
			}
			if f.balanced {
				worst = max(worst, g.Residual[0])
			}
		}
		t.Logf("%s: largest residual %.2g", f.name, worst)
	}
}

// Contracts at the ends of the range get numbers, whatever they are worth.
func TestClosedExtremes(t *testing.T) {
	prices := []float64{1e-50, 0.01, 100, 100 * (1 + 0x1p-52), 101, 1e50}
	times := []float64{0, 1e-300, 1e-12, 1.0 / 365, 1, 30}
	vols := []float64{0, 1e-300, 1e-17, 1e-4, 0.2, 3, 100}
	rates := []float64{-3, -0.01, 0, 0.05, 3}
	rng := rand.New(rand.NewPCG(27, 28))
	for _, f := range closedForms {
		g := newGreeks(1)
		for range 40000 {
			pick := func(s []float64) float64 { return s[rng.IntN(len(s))] }
			d := randomDeal(rng)
			d.s, d.k, d.barrier, d.average = pick(prices), pick(prices), pick(prices), pick(prices)
			d.t, d.v, d.r, d.q = pick(times), pick(vols), pick(rates), pick(rates)
			d.start = pick([]float64{-1, -1e-9, 0, 0.5 * d.t, d.t})
			d.gap = pick([]float64{0, 1.0 / 365, min(d.t, 10)})
			if strings.HasPrefix(f.name, "arithmetic") {
				d.v = min(d.v, 2.8) // σ²T up to 250
			}
			f.greeks(g, d)
			for i := range f.results(d) {
				if x := (*g.Slices()[i])[0]; math.IsNaN(x) || math.IsInf(x, 0) && i == 0 {
					t.Fatalf("%s %s of %+v = %v", f.name, greekNames[i], d, x)
				}
			}
		}
	}
}

// results is how many results of a deal are numbers: not the residual, where
// there is none.
func (f *closedForm) results(d deal) int {
	if !f.balanced || strings.HasPrefix(f.name, "barrier") && d.knock < 0 && d.side*(d.s-d.barrier) >= 0 {
		return 10
	}
	return 11
}

// What makes no sense is NaN in every result.
func TestClosedRefusals(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	rng := rand.New(rand.NewPCG(29, 30))
	for _, f := range closedForms {
		g, p := newGreeks(1), one(0)
		for _, c := range []struct {
			in string
			xs []float64
		}{
			{"spot", []float64{nan, inf, -inf}},
			{"strike", []float64{nan, inf, -inf}},
			{"time", []float64{nan, inf, -1e-9}},
			{"vol", []float64{nan, inf, -0.1}},
			{"rate", []float64{nan, inf, -inf, 1e9}},
			{"sign", []float64{nan, 0, 2, -1.5}},
		} {
			for _, x := range c.xs {
				d := f.deal(randomDeal(rng))
				d.set(c.in, x)
				f.greeks(g, d)
				f.price(p, d)
				for i := range greekNames {
					if y := (*g.Slices()[i])[0]; !math.IsNaN(y) || !math.IsNaN(p[0]) {
						t.Errorf("%s with %s %v: %s %v, price alone %v", f.name, c.in, x, greekNames[i], y, p[0])
					}
				}
			}
		}
	}
}

// The same bits on every machine, at every level of the instruction set: no
// compiler fuses a product with a sum that the source does not. What the bits
// are follows from package vec, too; whoever changes a step on purpose takes
// the new hash from here.
func TestClosedBits(t *testing.T) {
	want := map[string]string{
		"bachelier":                    "f4fdfc90b43b8f89",
		"cash digital":                 "35625d1f1c9600d0",
		"cash digital on a future":     "f97d3c8169754ef9",
		"asset digital":                "899a160b6df1c64b",
		"asset digital on a future":    "461693b2fc249c8a",
		"barrier":                      "0a8c0c91e01a38df",
		"barrier on a future":          "d2277967fecb8336",
		"geometric asian":              "b34704dba8139d31",
		"geometric asian on a future":  "ab1f4b1148acfa1d",
		"arithmetic asian":             "ba151b37ddf53b88",
		"arithmetic asian on a future": "407dd4d68473e6bb",
	}
	for _, f := range closedForms {
		rng := rand.New(rand.NewPCG(31, 32))
		h := fnv.New64a()
		g := newGreeks(1)
		for range 4000 {
			f.greeks(g, f.deal(randomDeal(rng)))
			for _, s := range g.Slices() {
				var b [8]byte
				binary.LittleEndian.PutUint64(b[:], math.Float64bits((*s)[0]))
				h.Write(b[:])
			}
		}
		if got := fmt.Sprintf("%016x", h.Sum64()); got != want[f.name] {
			t.Errorf("%s: results hash to %q, not %q", f.name, got, want[f.name])
		}
	}
}
