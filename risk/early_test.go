package risk

import (
	"context"
	"errors"
	"math"
	"testing"

	"nightbook/risk/instrument"
	"nightbook/risk/market"
	"nightbook/schema"
)

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %v, want %v ± %v", what, got, want, tolerance)
	}
}

func (l line) american() line {
	l.style = schema.American
	return l
}

// American puts of F. A. Longstaff and E. S. Schwartz, Valuing American Options
// by Simulation, Review of Financial Studies 14 (2001), table 1, column "finite
// difference": K 40, r 6 %, exercise at 50 dates a year, which is worth up to a
// cent less than at any time. Recalled from memory.
func TestAmericanAgainstLongstaffSchwartz(t *testing.T) {
	for _, c := range []struct {
		spot, vol float64
		years     int
		price     float64
	}{
		{36, .2, 1, 4.478}, {36, .2, 2, 4.840}, {36, .4, 1, 7.101}, {36, .4, 2, 8.508},
		{40, .2, 1, 2.314}, {40, .2, 2, 2.885}, {40, .4, 1, 5.312}, {40, .4, 2, 6.920},
		{44, .2, 1, 1.110}, {44, .2, 2, 1.690}, {44, .4, 1, 3.948}, {44, .4, 2, 5.647},
	} {
		d := newDesk(t)
		d.rate("EUR", 0.06)
		d.underlying("U", schema.Equity, "EUR", c.spot, 0, nan)
		b := d.price(option("U", schema.Put, 40, 365*c.years, c.vol).american())
		if got := b.Price[0]; got < c.price-0.001 || got > c.price+0.015 {
			t.Errorf("S %v, vol %v, %d years: %v, table %v", c.spot, c.vol, c.years, got, c.price)
		}
		if b.Model[0] != schema.ModelBoundaryIntegral || b.Setting[0] != schema.Standard || !(b.Boundary[0] < c.spot) || b.ExerciseNow[0] || b.Residual[0] > 1e-3 {
			t.Errorf("model %s, setting %s, boundary %v, exercise now %v, residual %v", schema.Models[b.Model[0]], schema.Settings[b.Setting[0]], b.Boundary[0], b.ExerciseNow[0], b.Residual[0])
		}
	}
}

func TestAmericanCallThatIsNeverExercised(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.underlying("U", schema.Equity, "EUR", 100, 0, nan)
	l := option("U", schema.Call, 90, 200, 0.3)
	b := d.price(l, l.american())
	for k, c := range greekColumns(&b.Results) {
		if (*c)[0] != (*c)[1] {
			t.Errorf("result %d: European %v, American %v", k, (*c)[0], (*c)[1])
		}
	}
	if !math.IsNaN(b.Boundary[1]) || b.ExerciseNow[1] {
		t.Errorf("boundary %v, exercise now %v", b.Boundary[1], b.ExerciseNow[1])
	}
}

func TestAmericanPastItsBoundary(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.05)
	d.underlying("U", schema.Equity, "EUR", 50, 0, nan)
	d.underlying("F", schema.FuturePrice, "EUR", 50, 0, nan)
	b := d.price(option("U", schema.Put, 100, 200, 0.2).american(), option("F", schema.Call, 20, 200, 0.2).american())
	for i, want := range []struct{ price, delta float64 }{{50, -1}, {30, 1}} {
		if !b.ExerciseNow[i] || b.Price[i] != want.price || b.Delta[i] != want.delta || b.Gamma[i] != 0 || b.Rho[i] != 0 || b.Measures[schema.ThetaCash1D][i] != 0 {
			t.Errorf("line %d: now %v, price %v, delta %v, theta %v", i, b.ExerciseNow[i], b.Price[i], b.Delta[i], b.Measures[schema.ThetaCash1D][i])
		}
		if w := orientations[b.OptionType[i]]; w*b.Boundary[i] > w*50 {
			t.Errorf("line %d: boundary %v, spot 50", i, b.Boundary[i])
		}
	}
}

// Of kind future, rho holds the futures price: it is the derivative of a price
// whose rate moves both discounting and yield.
func TestRhoOfAmericanFuturesOptionHoldsTheFuture(t *testing.T) {
	price := func(r float64) *schema.Batch {
		d := newDesk(t)
		d.rate("EUR", r)
		d.underlying("F", schema.FuturePrice, "EUR", 100, 0, nan)
		return d.price(option("F", schema.Put, 105, 300, 0.3).american())
	}
	const h = 1e-3
	up, mid, down := price(0.04+h), price(0.04), price(0.04-h)
	near(t, "rho", mid.Rho[0], (up.Price[0]-down.Price[0])/(2*h), 1e-2)
	if mid.CarryRho[0] != 0 || mid.Model[0] != schema.ModelBoundaryIntegral {
		t.Errorf("carry_rho %v, model %s", mid.CarryRho[0], schema.Models[mid.Model[0]])
	}
}

// With q < r < 0 a put has two boundaries: it is priced by finite differences.
func TestAmericanBeyondTheIntegral(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", -0.01)
	d.underlying("U", schema.Equity, "EUR", 100, -0.04, nan)
	l := option("U", schema.Put, 110, 365, 0.15)
	b := d.price(l, l.american(), option("U", schema.Call, 100, 365, 0.15).american())
	if b.Model[1] != schema.ModelFiniteDifferences || b.Setting[1] != 0 || !(b.PriceError[1] <= 2e-5*100) || b.Price[1] < b.Price[0] || b.Price[1] < 10 {
		t.Errorf("model %s, price %v ± %v, European %v", schema.Models[b.Model[1]], b.Price[1], b.PriceError[1], b.Price[0])
	}
	if !math.IsNaN(b.DividendsPV[1]) || b.Model[2] != schema.ModelBoundaryIntegral {
		t.Errorf("dividends_pv %v, model of the call %s", b.DividendsPV[1], schema.Models[b.Model[2]])
	}
	later := l.american()
	later.days = 364
	near(t, "theta_cash_1d", b.Measures[schema.ThetaCash1D][1], d.price(later).Price[0]-b.Price[1], 0)
}

// payingDesk has a share at 100 that pays 2 on days 40 and 130.
func payingDesk(t *testing.T) *desk {
	d := newDesk(t)
	d.rate("EUR", 0.04)
	d.underlying("U", schema.Equity, "EUR", 100, 0.01, nan)
	for _, day := range []schema.Date{-9, 0, 40, 130} {
		d.raw.Dividends = append(d.raw.Dividends, schema.DividendRow{Underlying: "U", ExDate: d.cfg.AsOf.Day + day, Amount: 2})
	}
	return d
}

// Put and call parity with the forward of the same dividends, and the forward
// from the cash-and-carry argument.
func TestDividendsParityAndForward(t *testing.T) {
	for _, convention := range []schema.Choice{schema.Piecewise, schema.Escrowed} {
		d := payingDesk(t)
		d.cfg.Models.Dividends = convention
		q := d.raw.Underlyings[0].CarryYield
		call, put := option("U", schema.Call, 95, 200, 0.25), option("U", schema.Put, 95, 200, 0.25)
		b := d.price(call, put, line{underlying: "U", instrument: schema.Forward, strike: 95, days: 200})
		if len(b.Rejects) > 0 {
			t.Fatal(b.Rejects)
		}
		const T = 200. / 365
		const r = 0.04
		forward := 100 * math.Exp((r-q)*T)
		pv := 0.
		for _, day := range []float64{40, 130} {
			forward -= 2 * math.Exp((r-q)*(T-day/365))
			pv += 2 * math.Exp(-r*day/365)
		}
		near(t, "forward", b.Forward[0], forward, 1e-12)
		near(t, "dividends_pv", b.DividendsPV[0], pv, 1e-12)
		near(t, "forward contract", b.Price[2], math.Exp(-r*T)*(forward-95), 1e-12)
		mesh := b.PriceError[0] + b.PriceError[1]
		if math.IsNaN(mesh) { // there is none
			mesh = 0
		}
		near(t, "parity", b.Price[0]-b.Price[1], b.Price[2], mesh+1e-6)
		for k, c := range greekColumns(&b.Results) {
			if k == 0 || k == 10 { // parity holds for the sensitivities to spot, rate, yield and time too
				continue
			}
			near(t, "parity of sensitivity", (*c)[0]-(*c)[1], (*c)[2], 3e-4*100)
		}
		if want := []schema.Choice{0, schema.ModelFiniteDifferences, schema.ModelBSM}[convention]; b.Model[0] != want || b.DividendModel[0] != convention || b.Model[2] != schema.ModelDiscountedForward {
			t.Errorf("models %s and %s, dividends %s", schema.Models[b.Model[0]], schema.Models[b.Model[2]], schema.DividendModels[b.DividendModel[0]])
		}
	}
}

// The sensitivities of a forward with dividends are those of its price.
func TestForwardWithDividendsByDifferences(t *testing.T) {
	price := func(spot, r, q float64, days int) *schema.Batch {
		d := payingDesk(t)
		d.raw.Rates[0].Zero, d.raw.Underlyings[0].Price, d.raw.Underlyings[0].CarryYield = r, spot, q
		return d.price(line{underlying: "U", instrument: schema.Forward, strike: 95, days: days})
	}
	b := price(100, 0.04, 0.01, 200)
	const h = 1e-5
	near(t, "delta", b.Delta[0], (price(100+h, 0.04, 0.01, 200).Price[0]-price(100-h, 0.04, 0.01, 200).Price[0])/(2*h), 1e-8)
	near(t, "rho", b.Rho[0], (price(100, 0.04+h, 0.01, 200).Price[0]-price(100, 0.04-h, 0.01, 200).Price[0])/(2*h), 1e-6)
	near(t, "carry_rho", b.CarryRho[0], (price(100, 0.04, 0.01+h, 200).Price[0]-price(100, 0.04, 0.01-h, 200).Price[0])/(2*h), 1e-6)
	// V solves Θ + (r−q)SΔ − rV = 0 between ex-dates
	near(t, "theta", b.Theta[0], 0.04*b.Price[0]-(0.04-0.01)*100*b.Delta[0], 1e-10)
}

// What the escrowed model makes of a European option is the closed form on the
// spot less what the dividends take from the forward.
func TestEscrowedEuropeanIsTheClosedForm(t *testing.T) {
	d := payingDesk(t)
	d.cfg.Models.Dividends = schema.Escrowed
	b := d.price(option("U", schema.Call, 105, 200, 0.25))
	bare := newDesk(t)
	bare.rate("EUR", 0.04)
	bare.underlying("U", schema.Equity, "EUR", b.Forward[0]*math.Exp(-(0.04-0.01)*200/365), 0.01, nan)
	want := bare.price(option("U", schema.Call, 105, 200, 0.25))
	near(t, "price", b.Price[0], want.Price[0], 1e-12)
	near(t, "delta", b.Delta[0], want.Delta[0], 1e-13)
	near(t, "vega", b.Vega[0], want.Vega[0], 1e-10)
	if b.Model[0] != schema.ModelBSM || b.Setting[0] != 0 || !math.IsNaN(b.PriceError[0]) || b.Residual[0] > 1e-12 {
		t.Errorf("model %s, setting %s, price_error %v, residual %v", schema.Models[b.Model[0]], schema.Settings[b.Setting[0]], b.PriceError[0], b.Residual[0])
	}
}

// The sensitivities of escrowed European options by differences, and their prices
// by finite differences of the equation, which American options still take.
func TestEscrowedEuropeanSensitivities(t *testing.T) {
	price := func(spot, r, q float64, passed schema.Date, style schema.Choice) *schema.Batch {
		d := payingDesk(t)
		d.cfg.Models.Dividends, d.cfg.Models.Tolerance = schema.Escrowed, 1e-6
		d.raw.Rates[0].Zero, d.raw.Underlyings[0].Price, d.raw.Underlyings[0].CarryYield = r, spot, q
		d.cfg.AsOf.Day += passed
		l := option("U", schema.Put, 105, 200-int(passed), 0.25)
		l.style = style
		return d.price(l)
	}
	const h = 1e-4
	b := price(100, 0.04, 0.01, 0, schema.European)
	diff := func(up, down *schema.Batch) float64 { return (up.Price[0] - down.Price[0]) / (2 * h) }
	near(t, "delta", b.Delta[0], diff(price(100+h, 0.04, 0.01, 0, schema.European), price(100-h, 0.04, 0.01, 0, schema.European)), 1e-8)
	near(t, "rho", b.Rho[0], diff(price(100, 0.04+h, 0.01, 0, schema.European), price(100, 0.04-h, 0.01, 0, schema.European)), 1e-4)
	near(t, "carry_rho", b.CarryRho[0], diff(price(100, 0.04, 0.01+h, 0, schema.European), price(100, 0.04, 0.01-h, 0, schema.European)), 1e-4)
	// V solves the equation with ½σ² on what is not in escrow
	rest := b.Forward[0] * math.Exp(-0.03*200/365)
	near(t, "theta", b.Theta[0], 0.04*b.Price[0]-0.03*100*b.Delta[0]-0.5*0.25*0.25*rest*rest*b.Gamma[0], 1e-10)
	later := price(100, 0.04, 0.01, 1, schema.European)
	near(t, "theta over a day", b.Measures[schema.ThetaCash1D][0], later.Price[0]-b.Price[0], 1e-12)
	near(t, "charm", b.Charm[0], (later.Delta[0]-b.Delta[0])*365, 2e-2*math.Abs(b.Charm[0])+1e-3)
	if american := price(100, 0.04, 0.01, 0, schema.American); american.Price[0] < b.Price[0] || american.Model[0] != schema.ModelFiniteDifferences {
		t.Errorf("American %v by %s, European %v", american.Price[0], schema.Models[american.Model[0]], b.Price[0])
	}
}

// Which ex-dates move an option: after as_of, up to the day of expiry.
func TestWhichDividendsMatter(t *testing.T) {
	priced := func(day schema.Date, l line) *schema.Batch {
		d := newDesk(t)
		d.rate("EUR", 0.04)
		d.underlying("U", schema.Equity, "EUR", 100, 0, nan)
		d.raw.Dividends = []schema.DividendRow{{Underlying: "U", ExDate: d.cfg.AsOf.Day + day, Amount: 2}}
		return d.price(l)
	}
	l := option("U", schema.Put, 100, 60, 0.25)
	without := priced(-1, l).Price[0]
	for _, c := range []struct {
		day     schema.Date
		matters bool
	}{{0, false}, {1, true}, {60, true}, {61, false}} {
		b := priced(c.day, l)
		if moved := b.Price[0] > without+0.5; moved != c.matters || moved == math.IsNaN(b.DividendsPV[0]) {
			t.Errorf("ex-date on day %d: price %v, without %v, dividends_pv %v", c.day, b.Price[0], without, b.DividendsPV[0])
		}
	}
}

// Theta is a revaluation with the ex-dates of the step behind it, the price of
// the share lower by what they paid.
func TestThetaOverAnExDate(t *testing.T) {
	d := newDesk(t) // a Tuesday
	d.rate("EUR", 0.04)
	d.underlying("U", schema.Equity, "EUR", 100, 0, nan)
	d.raw.Dividends = []schema.DividendRow{{Underlying: "U", ExDate: d.cfg.AsOf.Day + 1, Amount: 2}, {Underlying: "U", ExDate: d.cfg.AsOf.Day + 31, Amount: 3}}
	lines := []line{option("U", schema.Call, 100, 60, 0.25), option("U", schema.Put, 110, 60, 0.25).american(), {underlying: "U", instrument: schema.Forward, strike: 95, days: 60}}
	now := d.price(lines...)
	d.cfg.AsOf.Day++
	d.raw.Underlyings[0].Price = 98
	for i := range lines {
		lines[i].days--
	}
	next := d.price(lines...)
	for i := range lines {
		near(t, "theta_cash_1d", now.Measures[schema.ThetaCash1D][i], next.Price[i]-now.Price[i], 1e-12)
	}
}

func TestAmericanCallBeforeADividend(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.underlying("U", schema.Equity, "EUR", 130, 0, nan)
	d.raw.Dividends = []schema.DividendRow{{Underlying: "U", ExDate: d.cfg.AsOf.Day + 1, Amount: 4}}
	b := d.price(option("U", schema.Call, 100, 60, 0.2).american(), option("U", schema.Call, 100, 60, 0.2))
	// exercised tomorrow, before the drop: until then the strike earns a day's interest
	near(t, "American", b.Price[0], 130-100*math.Exp(-0.03/365), 1e-3)
	if b.Price[1] > b.Price[0]-3 || b.ExerciseNow[0] {
		t.Errorf("American %v (now %v), European %v", b.Price[0], b.ExerciseNow[0], b.Price[1])
	}
}

// Quotes that are the prices of American lines, and of lines with dividends, give
// back the volatilities of the lines.
func TestImplyByModel(t *testing.T) {
	for _, convention := range []schema.Choice{schema.Piecewise, schema.Escrowed} {
		d := payingDesk(t)
		d.cfg.Models.Dividends = convention
		d.underlying("F", schema.FuturePrice, "EUR", 80, 0, nan)
		d.underlying("X", schema.FX, "EUR", 1.1, 0.05, nan)
		var lines []line
		for _, u := range []struct {
			name  string
			price float64
		}{{"U", 100}, {"F", 80}, {"X", 1.1}} {
			for k := range 7 {
				for kind := schema.Call; kind <= schema.Put; kind++ {
					l := option(u.name, kind, u.price*(0.8+float64(k)/15), 60+30*k, 0.15+0.03*float64(k))
					lines = append(lines, l, l.american())
				}
			}
		}
		for style := schema.European; style <= schema.American; style++ { // V at the upper end of the search has a very wide spread
			l := option("U", schema.Put, 100, 700, 0.3)
			l.style = style
			lines = append(lines, l)
		}
		priced := d.price(lines...)
		var quotes []schema.QuoteRow
		for i, l := range lines {
			quotes = append(quotes, schema.QuoteRow{Line: int64(i), Underlying: l.underlying, Day: priced.Expiry[i], Minute: schema.NoMinute,
				Strike: l.strike, OptionType: l.kind, Exercise: l.style, Price: priced.Price[i], Bid: nan, Ask: nan})
		}
		m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
		if err != nil {
			t.Fatal(err)
		}
		for i, q := range imply(t, m, d.dicts, quotes) {
			switch {
			case priced.ExerciseNow[i]:
				if q.Status != schema.QuoteBelowBound {
					t.Errorf("%+v is worth its exercise: vol %v, %s", lines[i], q.Vol, schema.QuoteStatuses[q.Status])
				}
			case q.Status == schema.QuoteBelowBound && priced.Model[i] == schema.ModelFiniteDifferences && priced.Vega[i]*lines[i].vol < 0.1:
				// no time value that could be told from the error of the mesh
			case q.Status != schema.QuoteOK:
				t.Errorf("%+v: %s %s", lines[i], schema.QuoteStatuses[q.Status], q.Reason)
			default:
				tolerance := 1e-11 * (1 + d.spot(lines[i].underlying)/priced.Vega[i])
				if priced.Model[i] == schema.ModelFiniteDifferences { // whose prices step with the mesh
					tolerance = 2e-5 * d.spot(lines[i].underlying) / priced.Vega[i]
				}
				near(t, "implied volatility", q.Vol, lines[i].vol, tolerance)
			}
		}
	}
}

func TestImplyByModelBounds(t *testing.T) {
	d := payingDesk(t)
	m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		t.Fatal(err)
	}
	quote := func(kind, style schema.Choice, strike, price float64) schema.QuoteRow {
		return schema.QuoteRow{Underlying: "U", Day: m.AsOf.Day + 200, Minute: schema.NoMinute, Strike: strike, OptionType: kind, Exercise: style, Price: price, Bid: nan, Ask: nan}
	}
	for i, q := range imply(t, m, d.dicts, []schema.QuoteRow{
		quote(schema.Put, schema.American, 130, 30), quote(schema.Put, schema.American, 130, 29), quote(schema.Call, schema.American, 100, 101),
		quote(schema.Call, schema.European, 100, -1), quote(schema.Call, schema.European, 60, 30),
	}) {
		want := []schema.Choice{schema.QuoteBelowBound, schema.QuoteBelowBound, schema.QuoteAboveBound, schema.QuoteUnsupported, schema.QuoteBelowBound}[i]
		if q.Status != want || q.Reason == "" || !math.IsNaN(q.Vol) {
			t.Errorf("quote %d: %s, vol %v, %q", i, schema.QuoteStatuses[q.Status], q.Vol, q.Reason)
		}
	}
}

func TestPricingIsInterrupted(t *testing.T) {
	d := payingDesk(t)
	m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		t.Fatal(err)
	}
	lines := make([]line, 2000)
	for i := range lines {
		lines[i] = option("U", schema.Put, 60+float64(i)/20, 200, 0.25).american()
	}
	e, b := NewEngine(m, d.dicts), d.batch(lines)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if err := e.Price(ctx, b, e.NewWorker()); !errors.Is(err, context.Canceled) {
		t.Errorf("error %v", err)
	}
	if !math.IsNaN(b.PriceError[1999]) && b.PriceError[1999] != 0 {
		t.Error("the last line was priced all the same")
	}
	quote := schema.QuoteRow{Underlying: "U", Day: m.AsOf.Day + 200, Minute: schema.NoMinute, Strike: 100, OptionType: schema.Put, Exercise: schema.American, Price: 7, Bid: nan, Ask: nan}
	if _, err := Imply(ctx, m, d.dicts, []schema.QuoteRow{quote}); !errors.Is(err, context.Canceled) {
		t.Errorf("quotes: error %v", err)
	}
}

// Settings and tolerance are those of the configuration.
func TestModelSettings(t *testing.T) {
	price := func(m schema.ModelsConfig, days int) *schema.Batch {
		d := payingDesk(t)
		d.cfg.Models = m
		return d.price(option("U", schema.Put, 105, days, 0.25).american())
	}
	exact := price(schema.ModelsConfig{American: schema.Exact}, 39)
	for setting := schema.Fast; setting <= schema.Exact; setting++ {
		b := price(schema.ModelsConfig{American: setting}, 39)
		near(t, schema.Settings[setting], b.Price[0], exact.Price[0], []float64{0, 1e-3, 1e-4, 0}[setting])
		if b.Setting[0] != setting || setting < schema.Exact && b.Price[0] == exact.Price[0] {
			t.Errorf("setting %s, price %v", schema.Settings[b.Setting[0]], b.Price[0])
		}
	}
	loose, tight := price(schema.ModelsConfig{Tolerance: 1e-3}, 200), price(schema.ModelsConfig{Tolerance: 1e-6}, 200)
	if !(loose.PriceError[0] <= 0.1 && tight.PriceError[0] <= 1e-4 && tight.PriceError[0] < loose.PriceError[0]) {
		t.Errorf("errors %v and %v", loose.PriceError[0], tight.PriceError[0])
	}
}

// No input is known to give such an error; if one does, the line is not priced.
func TestPriceThatCannotBeTold(t *testing.T) {
	d := payingDesk(t)
	m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		t.Fatal(err)
	}
	e, b := NewEngine(m, d.dicts), d.batch([]line{option("U", schema.Put, 100, 200, 0.25), option("U", schema.Put, 100, 200, 0.25)})
	w := e.NewWorker()
	w.run.Resize(2)
	b.Spot[0], b.Spot[1] = 100, 100
	w.run.PriceError[0], w.run.PriceError[1] = 1.01, 0.99
	w.run.Flags[0], w.run.Flags[1] = instrument.OnGrid|instrument.Uncertain, instrument.OnGrid|instrument.Uncertain
	e.exercise(b, w, []int32{0, 1})
	e.flushNotes(b, w)
	if b.Status[0] != schema.Rejected || b.Status[1] == schema.Rejected || len(b.Rejects) != 1 || b.Rejects[0].Code != schema.Inaccurate {
		t.Errorf("rejects %v", b.Rejects)
	}
	if len(b.Notes) != 1 || b.Notes[0].Code != schema.PriceUncertain || b.Notes[0].Subject != "U" || b.Notes[0].Count != 1 {
		t.Errorf("warnings %v", b.Notes)
	}
}

func TestLargeDividendsAreTold(t *testing.T) {
	for _, c := range []struct {
		amount float64
		told   bool
	}{{15, false}, {25, true}} {
		d := payingDesk(t)
		for i := range d.raw.Dividends {
			d.raw.Dividends[i].Amount = c.amount
		}
		b := d.price(option("U", schema.Put, 100, 200, 0.25))
		told := false
		for _, n := range b.Notes {
			told = told || n.Code == schema.DividendsLarge && n.Subject == "U"
		}
		if told != c.told || len(b.Rejects) > 0 {
			t.Errorf("two dividends of %v: warnings %v, rejects %v", c.amount, b.Notes, b.Rejects)
		}
	}
}

// A refused dividend keeps the lines of a share from being priced, not those of a
// currency, which pays none.
func TestRefusedDividendOfWhatPaysNone(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.underlying("S", schema.Equity, "EUR", 100, 0, 0.2)
	d.underlying("X", schema.FX, "EUR", 1.1, 0, 0.1)
	for _, name := range []string{"S", "X"} {
		d.raw.Faults = append(d.raw.Faults, schema.Fault{Table: "dividends", Name: name, Reject: schema.Reject{File: "dividends.csv", Line: 3, Code: schema.BadNumber}})
	}
	b := d.price(option("S", schema.Put, 100, 50, 0), option("X", schema.Put, 1, 50, 0))
	if b.Status[0] != schema.Rejected || b.Status[1] != schema.Priced {
		t.Errorf("%s and %s", schema.Statuses[b.Status[0]], schema.Statuses[b.Status[1]])
	}
}
