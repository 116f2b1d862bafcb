package risk

import (
	"context"
	"fmt"
	"math"
	"testing"

	"nightbook/risk/market"
	"nightbook/schema"
)

// desk is a market and its dictionaries, built by hand.
type desk struct {
	t     *testing.T
	dicts *schema.Dicts
	raw   schema.Market
	cfg   schema.Config
}

// line is a position in words; zero values are absent.
type line struct {
	underlying, currency             string
	instrument, kind, payoff, style  schema.Choice // kind is call or put
	quantity, multiplier             float64
	strike, vol, entry               float64
	days                             int // to expiry
	payout, barrier, rebate, average float64
	barrierType, monitoring          schema.Choice
	start                            int // days to the start of the average
}

func newDesk(t *testing.T) *desk {
	day, _ := schema.DateOf(2026, 3, 31) // a Tuesday
	d := &desk{t: t, dicts: schema.NewDicts(), cfg: schema.Config{
		AsOf: schema.Moment{Day: day, Minute: schema.NoMinute}, ReportingCurrency: "EUR",
	}}
	d.raw.FX = []schema.FXRow{{Currency: "USD", Rate: 0.9}}
	return d
}

func (d *desk) rate(curve string, rate float64) {
	d.raw.Rates = append(d.raw.Rates, schema.RateRow{Curve: curve, Day: d.cfg.AsOf.Day + 365, Zero: rate, Discount: nan})
}

func (d *desk) underlying(name string, kind schema.Choice, currency string, price, yield, vol float64) {
	d.raw.Underlyings = append(d.raw.Underlyings, schema.UnderlyingRow{
		Name: name, Kind: kind, Currency: currency, Price: price, CarryYield: yield, Vol: vol, Lot: 1,
	})
}

func (d *desk) price(lines ...line) *schema.Batch {
	d.t.Helper()
	m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		d.t.Fatal(err)
	}
	b := d.batch(lines)
	e := NewEngine(m, d.dicts)
	e.Price(context.Background(), b, e.NewWorker())
	return b
}

func or(x, otherwise float64) float64 {
	if x == 0 {
		return otherwise
	}
	return x
}

func (d *desk) batch(lines []line) *schema.Batch {
	b := new(schema.Batch)
	b.Resize(len(lines))
	for i, l := range lines {
		b.Status[i], b.Line[i] = 0, int64(i+2)
		id := fmt.Sprintf("L%d", i)
		b.LineID.AppendString(id)
		b.Raw.AppendString(id + ",…")
		b.Book[i] = d.dicts.Books.Code("B")
		b.Underlying[i] = d.dicts.Underlyings.Code(l.underlying)
		b.Currency[i] = d.dicts.Currencies.Code(l.currency)
		b.Strategy[i], b.BarrierType[i], b.Monitoring[i] = 0, l.barrierType, l.monitoring
		b.Instrument[i], b.OptionType[i], b.Payoff[i], b.Exercise[i] = l.instrument, l.kind, l.payoff, l.style
		b.Quantity[i], b.Multiplier[i] = or(l.quantity, 1), or(l.multiplier, 1)
		b.Strike[i], b.Vol[i], b.EntryPrice[i] = or(l.strike, nan), or(l.vol, nan), or(l.entry, nan)
		b.Mark[i], b.Payout[i], b.Barrier[i], b.Rebate[i], b.AverageSoFar[i] = nan, or(l.payout, nan), or(l.barrier, nan), or(l.rebate, nan), or(l.average, nan)
		b.Expiry[i], b.ExpiryMinute[i], b.AverageStart[i] = schema.NoDate, schema.NoMinute, schema.NoDate
		if l.start != 0 {
			b.AverageStart[i] = d.cfg.AsOf.Day + schema.Date(l.start)
		}
		if l.days != 0 {
			b.Expiry[i] = d.cfg.AsOf.Day + schema.Date(l.days)
		}
	}
	return b
}

func option(underlying string, kind schema.Choice, strike float64, days int, vol float64) line {
	return line{underlying: underlying, instrument: schema.Option, payoff: schema.Vanilla, style: schema.European,
		kind: kind, strike: strike, days: days, vol: vol}
}

// Values from E. G. Haug, The Complete Guide to Option Pricing Formulas, 2nd
// ed., 2007, from memory, reproduced; times that are whole days of 365.
func TestEachKindGetsItsModel(t *testing.T) {
	for _, c := range []struct {
		name     string
		kind     schema.Choice
		spot     float64
		r, q     float64
		l        line
		model    schema.Choice
		price    float64
		decimals int
	}{
		{"Merton", schema.Index, 100, 0.10, 0.05, option("", schema.Put, 95, 0, 0.20), schema.ModelBSM, 2.4648, 4},
		{"Black76", schema.FuturePrice, 19, 0.10, 0, option("", schema.Call, 19, 0, 0.28), schema.ModelBlack76, 1.7011, 4},
		{"GarmanKohlhagen", schema.FX, 1.56, 0.06, 0.08, option("", schema.Call, 1.60, 0, 0.12), schema.ModelGarmanKohlhagen, 0.0291, 4},
	} {
		d := newDesk(t)
		d.rate("EUR", c.r)
		d.underlying("U", c.kind, "EUR", c.spot, c.q, nan)
		c.l.underlying = "U"
		// half a year, three quarters: to the minute, so that T is exact
		d.cfg.AsOf.Minute = 0
		minutes := 365 * 24 * 60 / 2
		if c.name == "Black76" {
			minutes = 365 * 24 * 60 * 3 / 4
		}
		m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
		if err != nil {
			t.Fatal(err)
		}
		b := d.batch([]line{c.l})
		b.Expiry[0], b.ExpiryMinute[0] = d.cfg.AsOf.Day+schema.Date(minutes/1440), int16(minutes%1440)
		e := NewEngine(m, d.dicts)
		e.Price(context.Background(), b, e.NewWorker())
		if b.Status[0] != schema.Priced || b.Model[0] != c.model {
			t.Errorf("%s: status %s, model %s, %v", c.name, schema.Statuses[b.Status[0]], schema.Models[b.Model[0]], b.Rejects)
			continue
		}
		if got := b.Price[0]; math.Abs(got-c.price) > 0.5*math.Pow(10, -float64(c.decimals)) {
			t.Errorf("%s: price %v, want %v", c.name, got, c.price)
		}
		if b.Residual[0] > 1e-12 || b.Residual[0] != b.Residual[0] {
			t.Errorf("%s: pde_residual %v", c.name, b.Residual[0])
		}
	}
}

func TestRhoOfFuturesOptionHoldsTheFuture(t *testing.T) {
	price := func(r float64) *schema.Batch {
		d := newDesk(t)
		d.rate("EUR", r)
		d.underlying("F", schema.FuturePrice, "EUR", 100, 0, 0.3)
		return d.price(option("F", schema.Call, 90, 200, 0))
	}
	const h = 1e-5
	up, mid, down := price(0.03+h), price(0.03), price(0.03-h)
	if fd, rho := (up.Price[0]-down.Price[0])/(2*h), mid.Rho[0]; math.Abs(fd-rho) > 1e-7*math.Abs(rho) {
		t.Errorf("rho %v, by differences %v", rho, fd)
	}
	if mid.CarryRho[0] != 0 || mid.Carry[0] != 0.03 || mid.Forward[0] != 100 {
		t.Errorf("carry_rho %v, carry %v, forward %v", mid.CarryRho[0], mid.Carry[0], mid.Forward[0])
	}
}

func TestLinearInstruments(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.02)
	d.rate("USD", 0.04)
	d.underlying("S", schema.Equity, "EUR", 50, 0.01, nan)
	d.underlying("F", schema.FuturePrice, "USD", 200, 0, nan)
	b := d.price(
		line{underlying: "S", instrument: schema.Stock, quantity: -3, multiplier: 1},
		line{underlying: "F", instrument: schema.Future, quantity: 2, multiplier: 10, entry: 190},
		line{underlying: "F", instrument: schema.Future, quantity: 2, multiplier: 10},
		line{underlying: "S", instrument: schema.Forward, quantity: 1, strike: 48, days: 365},
		line{underlying: "F", instrument: schema.Forward, quantity: 1, strike: 190, days: 365},
		line{underlying: "USD", instrument: schema.Cash, quantity: 1000},
		line{underlying: "eur", currency: "EUR", instrument: schema.Cash, quantity: 7},
	)
	if len(b.Rejects) > 0 {
		t.Fatal(b.Rejects)
	}
	fwd := 50*math.Exp(-0.01) - 48*math.Exp(-0.02)
	fwdF := 10 * math.Exp(-0.04)
	for _, c := range []struct {
		what      string
		got, want float64
	}{
		{"stock value", b.Measures[schema.Value][0], -150}, {"stock delta_cash", b.Measures[schema.DeltaCash][0], -150},
		{"stock theta", b.Measures[schema.ThetaCash1D][0], 0},
		{"future value", b.Measures[schema.Value][1], 200}, {"future delta_cash", b.Measures[schema.DeltaCash][1], 4000},
		{"future delta_cash_base", b.MeasuresInBase[schema.DeltaCash][1], 3600},
		{"future at its price", b.Measures[schema.Value][2], 0}, {"its exposure", b.Measures[schema.DeltaCash][2], 4000},
		{"future rho", b.Measures[schema.RhoCash1BP][1], 0},
		{"forward", b.Price[3], fwd}, {"forward delta", b.Delta[3], math.Exp(-0.01)},
		{"forward rho", b.Rho[3], 48 * math.Exp(-0.02)}, {"forward theta", b.Theta[3], 0.01*50*math.Exp(-0.01) - 0.02*48*math.Exp(-0.02)},
		{"forward next day", b.Measures[schema.ThetaCash1D][3], 50*math.Exp(-0.01*364/365) - 48*math.Exp(-0.02*364/365) - fwd},
		{"forward on future", b.Price[4], fwdF}, {"its rho", b.Rho[4], -fwdF}, {"its theta", b.Theta[4], 0.04 * fwdF},
		{"cash", b.Measures[schema.Value][5], 1000}, {"cash in base", b.MeasuresInBase[schema.Value][5], 900},
		{"cash delta", b.Measures[schema.DeltaCash][5], 0}, {"own cash", b.MeasuresInBase[schema.Value][6], 7},
	} {
		if math.Abs(c.got-c.want) > 1e-12*max(1, math.Abs(c.want)) {
			t.Errorf("%s = %v, want %v", c.what, c.got, c.want)
		}
	}
	for i := range b.N {
		if !math.IsNaN(b.Residual[i]) {
			t.Errorf("line %d has a pde_residual", i)
		}
	}
}

func TestThetaIsARevaluation(t *testing.T) {
	d := newDesk(t)
	d.cfg.AsOf.Day += 3 // Friday 3 April
	d.rate("EUR", 0.03)
	d.underlying("U", schema.Equity, "EUR", 100, 0, 0.25)
	b := d.price(option("U", schema.Call, 105, 30, 0), option("U", schema.Call, 105, 29, 0), option("U", schema.Call, 105, 27, 0),
		option("U", schema.Put, 105, 1, 0))
	if got, want := b.Measures[schema.ThetaCash1D][0], b.Price[1]-b.Price[0]; got != want {
		t.Errorf("theta_cash_1d %v, revaluation %v", got, want)
	}
	if got, want := b.Measures[schema.ThetaCash1BD][0], b.Price[2]-b.Price[0]; got != want { // Monday
		t.Errorf("theta_cash_1bd %v, revaluation %v", got, want)
	}
	if got, want := b.Measures[schema.ThetaCash1BD][3], 5-b.Price[3]; math.Abs(got-want) > 1e-14 { // past expiry: the payoff
		t.Errorf("theta_cash_1bd past expiry %v, want %v", got, want)
	}
}

func TestExpiredLines(t *testing.T) {
	d := newDesk(t)
	d.underlying("U", schema.Equity, "EUR", 100, 0, nan) // neither curve nor volatility is needed
	b := d.price(option("U", schema.Call, 90, -5, 0), option("U", schema.Put, 90, -5, 0), option("U", schema.Put, 110, -1, 0), option("U", schema.Call, 100, -1, 0),
		line{underlying: "U", instrument: schema.Forward, strike: 96, days: -1})
	for i, want := range [][2]float64{{10, 1}, {0, 0}, {10, -1}, {0, 0}, {4, 1}} {
		if b.Status[i] != schema.Expired || b.Model[i] != schema.ModelPayoff || b.Price[i] != want[0] || b.Delta[i] != want[1] || b.Measures[schema.ThetaCash1D][i] != 0 {
			t.Errorf("line %d: %s, price %v, delta %v, theta %v; want expired, %v", i, schema.Statuses[b.Status[i]], b.Price[i], b.Delta[i], b.Measures[schema.ThetaCash1D][i], want)
		}
	}
}

func TestVolatilityPrecedence(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.underlying("both", schema.Equity, "EUR", 100, 0, 0.4)
	d.underlying("flat", schema.Equity, "EUR", 100, 0, 0.4)
	d.raw.Vols = []schema.VolRow{{Underlying: "both", Day: d.cfg.AsOf.Day + 50, Minute: schema.NoMinute, Strike: 100, Vol: 0.2}}
	b := d.price(option("both", schema.Call, 100, 50, 0.1), option("both", schema.Call, 100, 50, 0), option("flat", schema.Call, 100, 50, 0), option("both", schema.Call, 100, 500, 0))
	for i, want := range []struct {
		vol  float64
		from schema.Choice
	}{{0.1, schema.VolFromLine}, {0.2, schema.VolFromSurface}, {0.4, schema.VolFromUnderlying}, {0.2, schema.VolFromSurface}} {
		if math.Abs(b.VolUsed[i]-want.vol) > 1e-15 || b.VolSource[i] != want.from {
			t.Errorf("line %d: vol %v from %s", i, b.VolUsed[i], schema.VolSources[b.VolSource[i]])
		}
	}
	var codes []schema.NoteCode
	for _, n := range b.Notes {
		codes = append(codes, n.Code)
	}
	if fmt.Sprint(codes) != "[curve_flat_end surface_flat_end vol_fallback]" {
		t.Errorf("warnings %v", b.Notes)
	}
}

func TestPricingAllocatesNothingPerLine(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.underlying("U", schema.Equity, "EUR", 100, 0.01, 0.2)
	d.underlying("F", schema.FuturePrice, "EUR", 100, 0, 0.2)
	lines := make([]line, schema.BatchRows)
	for i := range lines {
		lines[i] = option([]string{"U", "F"}[i%2], schema.Call+schema.Choice(i/2%2), 80+float64(i%40), 1+i%300, 0)
	}
	m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		t.Fatal(err)
	}
	e, b := NewEngine(m, d.dicts), d.batch(lines)
	w := e.NewWorker()
	allocs := testing.AllocsPerRun(5, func() {
		clear(b.Status)
		b.Notes = b.Notes[:0]
		e.Price(context.Background(), b, w)
	})
	if len(b.Rejects) > 0 {
		t.Fatal(b.Rejects[0])
	}
	if allocs > 100 { // a few slice headers a batch
		t.Errorf("%v allocations for %d lines", allocs, b.N)
	}
}

func BenchmarkPrice(bench *testing.B) {
	d := newDesk(&testing.T{})
	d.rate("EUR", 0.03)
	d.underlying("U", schema.Equity, "EUR", 100, 0.01, nan)
	for days := 30; days < 400; days += 30 {
		for k := 60.0; k < 150; k += 5 {
			d.raw.Vols = append(d.raw.Vols, schema.VolRow{Underlying: "U", Day: d.cfg.AsOf.Day + schema.Date(days), Minute: schema.NoMinute, Strike: k, Vol: 0.2 + (k-100)*(k-100)/1e5})
		}
	}
	lines := make([]line, schema.BatchRows)
	for i := range lines {
		lines[i] = option("U", schema.Call+schema.Choice(i%2), 70+float64(i%60), 30+(i*37)%330, 0)
	}
	m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		bench.Fatal(err)
	}
	e, b := NewEngine(m, d.dicts), d.batch(lines)
	w := e.NewWorker()
	for bench.Loop() {
		clear(b.Status)
		b.Notes = b.Notes[:0]
		e.Price(context.Background(), b, w)
	}
	bench.ReportMetric(float64(bench.Elapsed().Nanoseconds())/float64(bench.N)/schema.BatchRows, "ns/line")
}
