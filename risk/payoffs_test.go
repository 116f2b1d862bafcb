package risk

import (
	"math"
	"testing"

	"nightbook/risk/market"
	"nightbook/schema"
)

// exotic returns an option of a payoff on U with terms that fit it.
func exotic(payoff, kind schema.Choice, days int) line {
	l := option("U", kind, 100, days, 0.25)
	l.payoff = payoff
	switch payoff {
	case schema.CashDigital:
		l.payout = 12
	case schema.Barrier:
		l.barrierType, l.barrier, l.rebate = schema.DownOut, 85, 3
	case schema.AsianGeometric, schema.AsianArithmetic:
		l.start, l.average = -20, 103
	}
	return l
}

// exoticDesk has U of a kind at 102, on a Tuesday.
func exoticDesk(t *testing.T, kind schema.Choice) *desk {
	d := newDesk(t)
	d.rate("EUR", 0.04)
	d.underlying("U", kind, "EUR", 102, 0.01, nan)
	return d
}

// What theta_cash_1d says is what the line is worth a day later at the same
// spot, volatility and rate: an average has by then moved towards the spot.
func TestEveryPayoffIsRevalued(t *testing.T) {
	for _, kind := range []schema.Choice{schema.Equity, schema.FX, schema.FuturePrice} {
		for payoff := schema.Vanilla; payoff <= schema.AsianArithmetic; payoff++ {
			for _, side := range []schema.Choice{schema.Call, schema.Put} {
				today := exoticDesk(t, kind)
				l := exotic(payoff, side, 60)
				b := today.price(l)
				if len(b.Rejects) > 0 {
					t.Fatal(b.Rejects)
				}
				tomorrow := exoticDesk(t, kind)
				tomorrow.cfg.AsOf.Day++
				l.days--
				if l.start != 0 {
					l.start--
					if payoff == schema.AsianArithmetic {
						l.average = (103*20 + 102) / 21.0
					} else {
						l.average = math.Exp((math.Log(103)*20 + math.Log(102)) / 21)
					}
				}
				after := tomorrow.price(l)
				want := after.Price[0] - b.Price[0]
				if got := b.Measures[schema.ThetaCash1D][0]; math.Abs(got-want) > 1e-11 || got == 0 {
					t.Errorf("%s %s on %s: theta_cash_1d %v, worth a day later %v", schema.Payoffs[payoff], schema.OptionTypes[side], schema.Kinds[kind], got, want)
				}
				// Theta a year is about what a day brings, 365 times.
				if theta := b.Theta[0]; math.Abs(theta-365*want) > 0.05*math.Abs(theta)+0.05 {
					t.Errorf("%s %s on %s: theta %v, 365 days of a day %v", schema.Payoffs[payoff], schema.OptionTypes[side], schema.Kinds[kind], theta, 365*want)
				}
			}
		}
	}
}

func TestPayoffsInTheirLimits(t *testing.T) {
	d := exoticDesk(t, schema.Index)
	vanilla := d.price(option("U", schema.Call, 100, 60, 0.25))
	with := func(change func(*line), payoff schema.Choice) line {
		l := option("U", schema.Call, 100, 60, 0.25)
		l.payoff = payoff
		change(&l)
		return l
	}
	barrier := func(kind schema.Choice, level float64) line {
		return with(func(l *line) { l.barrierType, l.barrier = kind, level }, schema.Barrier)
	}
	watched := barrier(schema.DownOut, 95)
	watched.monitoring = schema.Daily
	cash := with(func(l *line) { l.payout = 100 }, schema.CashDigital)
	b := d.price(
		with(func(l *line) { l.start = 60 }, schema.AsianArithmetic), // averages nothing but the last price
		with(func(l *line) { l.start = 60 }, schema.AsianGeometric),
		barrier(schema.DownOut, 1), barrier(schema.UpOut, 1e6), // too far to matter
		barrier(schema.DownIn, 95), barrier(schema.DownOut, 95), watched,
		barrier(schema.DownIn, 102), barrier(schema.UpIn, 101), // touched
		with(func(l *line) {}, schema.AssetDigital), cash,
	)
	if len(b.Rejects) > 0 {
		t.Fatal(b.Rejects)
	}
	near := func(what string, got, want float64) {
		t.Helper()
		if math.Abs(got-want) > 1e-11 {
			t.Errorf("%s: %v, want %v", what, got, want)
		}
	}
	v := vanilla.Price[0]
	near("Asian over a moment", b.Price[0], v)
	near("geometric Asian over a moment", b.Price[1], v)
	near("barrier far below", b.Price[2], v)
	near("barrier far above", b.Price[3], v)
	near("in and out", b.Price[4]+b.Price[5], v)
	near("vega of in and out", b.Vega[4]+b.Vega[5], vanilla.Vega[0])
	if !(b.Price[6] > b.Price[5] && b.Price[6] < v) {
		t.Errorf("watched daily %v, continuously %v", b.Price[6], b.Price[5])
	}
	near("touched from above", b.Price[7], v)
	near("touched from below", b.Price[8], v)
	near("asset less cash", b.Price[9]-b.Price[10], v)
	for i, want := range []schema.Choice{schema.ModelTurnbullWakeman, schema.ModelKemnaVorst, schema.ModelReinerRubinstein} {
		if got := b.Model[[]int{0, 1, 2}[i]]; got != want {
			t.Errorf("line %d: model %s", i, schema.Models[got])
		}
	}
}

func TestExpiredPayoffs(t *testing.T) {
	d := exoticDesk(t, schema.Equity)
	over := func(payoff, kind schema.Choice, change func(*line)) line {
		l := exotic(payoff, kind, -2)
		if change != nil {
			change(&l)
		}
		return l
	}
	at := func(kind schema.Choice, level float64) func(*line) {
		return func(l *line) { l.barrierType, l.barrier = kind, level }
	}
	b := d.price(
		over(schema.CashDigital, schema.Call, nil), over(schema.CashDigital, schema.Put, nil),
		over(schema.AssetDigital, schema.Call, nil), over(schema.AssetDigital, schema.Put, nil),
		over(schema.Barrier, schema.Call, at(schema.DownOut, 85)), over(schema.Barrier, schema.Call, at(schema.UpOut, 101)),
		over(schema.Barrier, schema.Call, at(schema.DownIn, 85)), over(schema.Barrier, schema.Call, at(schema.UpIn, 101)),
		over(schema.AsianArithmetic, schema.Call, nil), over(schema.AsianGeometric, schema.Put, func(l *line) { l.average = 97 }),
	)
	if len(b.Rejects) > 0 {
		t.Fatal(b.Rejects)
	}
	for i, want := range []float64{12, 0, 102, 0, 2, 3, 3, 2, 3, 3} {
		if b.Status[i] != schema.Expired || math.Abs(b.Price[i]-want) > 1e-12 || b.Measures[schema.ThetaCash1D][i] != 0 {
			t.Errorf("line %d: %s, price %v, want %v; theta %v", i, schema.Statuses[b.Status[i]], b.Price[i], want, b.Measures[schema.ThetaCash1D][i])
		}
		for k, s := range greekColumns(&b.Results) {
			if x := (*s)[i]; x != x && k != 10 {
				t.Errorf("line %d: result %d is NaN", i, k)
			}
		}
	}
}

// Options on spreads: negative prices and strikes, volatility in units of the
// price, a surface in absolute moneyness, percent that does not apply.
func TestOptionsOnSpreads(t *testing.T) {
	d := newDesk(t)
	d.cfg.Vols.Percent = true
	d.rate("EUR", 0.03)
	d.underlying("G", schema.Spread, "EUR", -2, 0, 15)
	d.underlying("H", schema.Spread, "EUR", -2, 0, nan)
	for _, p := range [][2]float64{{-10, 18}, {-2, 15}, {10, 17}} {
		d.raw.Vols = append(d.raw.Vols, schema.VolRow{Underlying: "H", Day: d.cfg.AsOf.Day + 365, Minute: schema.NoMinute, Strike: p[0], Vol: p[1]})
	}
	own := option("G", schema.Call, -2, 365, 0.12) // 12 % in the file, brought to a decimal by the reader: 12 in units of the price
	b := d.price(own, option("G", schema.Call, -2, 365, 0), option("H", schema.Put, -10, 365, 0), option("H", schema.Put, -6, 365, 0), option("G", schema.Put, -2, -1, 0))
	if len(b.Rejects) > 0 {
		t.Fatal(b.Rejects)
	}
	// at the money the value is D·σ√T/√(2π)
	df := math.Exp(-0.03) / math.Sqrt(2*math.Pi)
	for i, want := range []float64{12 * df, 15 * df} {
		if math.Abs(b.Price[i]-want) > 1e-12 || b.Model[i] != schema.ModelBachelier || b.Forward[i] != -2 {
			t.Errorf("line %d: price %v, want %v; model %s", i, b.Price[i], want, schema.Models[b.Model[i]])
		}
	}
	if b.VolUsed[2] != 18 || !(b.VolUsed[3] > 15 && b.VolUsed[3] < 18) {
		t.Errorf("volatilities of the surface %v, %v", b.VolUsed[2], b.VolUsed[3])
	}
	if b.Status[4] != schema.Expired || b.Price[4] != 0 {
		t.Errorf("expired: %s, %v", schema.Statuses[b.Status[4]], b.Price[4])
	}
	if _, notes, err := market.New(&d.cfg, &d.raw, d.dicts); err != nil || len(notes) != 1 {
		t.Errorf("warnings %v, %v", notes, err)
	}
}
