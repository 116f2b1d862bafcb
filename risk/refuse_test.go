package risk

import (
	"math"
	"strings"
	"testing"

	"nightbook/risk/market"
	"nightbook/schema"
)

// Every reason the core has for refusing a line, with the column it names.
func TestRefusals(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.rate("BAD", 0.03)
	d.underlying("U", schema.Equity, "EUR", 100, 0, 0.2)
	d.underlying("bare", schema.Equity, "EUR", 100, 0, nan)
	d.underlying("fut", schema.FuturePrice, "EUR", -5, 0, 0.2)
	d.underlying("gap", schema.Spread, "EUR", -5, 0, 0.2)
	d.underlying("neg", schema.Equity, "EUR", -5, 0, 0.2)
	d.underlying("usd", schema.Equity, "USD", 100, 0, 0.2)
	d.underlying("gbp", schema.Equity, "GBP", 100, 0, 0.2)
	d.underlying("pays", schema.Equity, "EUR", 100, 0, 0.2)
	d.underlying("doubtful", schema.Equity, "EUR", 100, 0, 0.2)
	d.underlying("curve", schema.Equity, "EUR", 100, 0, 0.2)
	d.raw.Underlyings[len(d.raw.Underlyings)-1].Curve = "BAD"
	d.underlying("broke", schema.Equity, "EUR", 100, 0, 0.2)
	d.raw.Dividends = []schema.DividendRow{{Underlying: "pays", ExDate: d.cfg.AsOf.Day + 10, Amount: 1}, {Underlying: "broke", ExDate: d.cfg.AsOf.Day + 10, Amount: 200}}
	d.raw.Vols = []schema.VolRow{{Underlying: "broke", Day: d.cfg.AsOf.Day + 5, Minute: schema.NoMinute, Strike: 100, Vol: 0.2}}
	d.raw.Faults = []schema.Fault{
		{Table: "rates", Name: "BAD", Reject: schema.Reject{File: "rates.csv", Line: 7, Code: schema.BadNumber}},
		{Table: "vols", Name: "doubtful", Reject: schema.Reject{File: "vols.csv", Line: 8, Code: schema.BadNumber}},
		{Table: "underlyings", Name: "broken", Reject: schema.Reject{File: "underlyings.csv", Line: 9, Code: schema.BadNumber}},
		{Table: "fx", Name: "CHF", Reject: schema.Reject{File: "fx.csv", Line: 3, Code: schema.BadNumber}},
	}
	call := func(u string) line { return option(u, schema.Call, 100, 50, 0) }
	american, paying, digital, other, zero, huge := call("U"), call("pays"), call("U"), call("U"), call("U"), call("U")
	american.style, digital.payoff, other.currency, zero.strike, huge.quantity = schema.American, schema.CashDigital, "USD", -1, 1e307
	american.payoff, american.payout, paying.payoff, paying.payout = schema.CashDigital, 5, schema.CashDigital, 5
	huge.multiplier = 1e300
	onSpread := digital
	onSpread.underlying, onSpread.payout = "gap", 5
	barrier := func(kind schema.Choice, level float64) line {
		l := call("U")
		l.payoff, l.barrierType, l.barrier = schema.Barrier, kind, level
		return l
	}
	lowRebate := barrier(schema.UpIn, 120)
	lowRebate.rebate = -1
	asian := func(start int, average float64) line {
		l := call("U")
		l.payoff, l.start, l.average = schema.AsianArithmetic, start, average
		return l
	}
	strayBarrier, strayType, strayPayout, strayRebate, strayMonitoring, strayStart, strayAverage, percent := call("U"), call("U"), call("U"), call("U"), call("U"), call("U"), call("U"), call("U")
	strayBarrier.barrier, strayType.barrierType, strayPayout.payout, strayRebate.rebate = 90, schema.DownIn, 5, 1
	strayMonitoring.monitoring, strayStart.start, strayAverage.average, percent.vol = schema.Daily, 9, 90, 20
	for _, c := range []struct {
		what   string
		l      line
		code   schema.RejectCode
		column string
		says   string
	}{
		{"unknown underlying", call("nowhere"), schema.UnknownUnderlying, "underlying", "add it"},
		{"other currency", other, schema.CurrencyMismatch, "currency", "EUR"},
		{"no fx", call("gbp"), schema.NoFX, "currency", "add a row"},
		{"no curve", call("usd"), schema.NoRate, "underlying", "no curve USD"},
		{"no volatility", call("bare"), schema.NoVol, "vol", "give the line a vol"},
		{"american", american, schema.Unsupported, "exercise", "never priced as European"},
		{"digital on a spread", onSpread, schema.Unsupported, "payoff", "cash_digital on an underlying of kind spread"},
		{"digital without its amount", digital, schema.MissingValue, "payout", "cash_digital needs"},
		{"barrier without a kind", barrier(0, 90), schema.MissingValue, "barrier_type", "barrier needs"},
		{"barrier without a level", barrier(schema.DownOut, 0), schema.MissingValue, "barrier", "its level"},
		{"barrier below 0", barrier(schema.DownOut, -1), schema.OutOfRange, "barrier", "positive"},
		{"rebate below 0", lowRebate, schema.OutOfRange, "rebate", "negative"},
		{"Asian without a start", asian(0, 0), schema.MissingValue, "average_start", "first day"},
		{"Asian that starts too late", asian(51, 0), schema.OutOfRange, "average_start", "on or before the expiry"},
		{"Asian begun, without its average", asian(-5, 0), schema.MissingValue, "average_so_far", "past"},
		{"Asian with an average below 0", asian(-5, -1), schema.OutOfRange, "average_so_far", "positive"},
		{"vanilla with a barrier", strayBarrier, schema.TermsMismatch, "barrier", "vanilla knows no barrier"},
		{"vanilla with a barrier type", strayType, schema.TermsMismatch, "barrier_type", "mend the payoff"},
		{"vanilla with a payout", strayPayout, schema.TermsMismatch, "payout", "mend the payoff"},
		{"vanilla with a rebate", strayRebate, schema.TermsMismatch, "rebate", "mend the payoff"},
		{"vanilla watched daily", strayMonitoring, schema.TermsMismatch, "monitoring", "mend the payoff"},
		{"vanilla with an average", strayStart, schema.TermsMismatch, "average_start", "mend the payoff"},
		{"vanilla with an average so far", strayAverage, schema.TermsMismatch, "average_so_far", "mend the payoff"},
		{"volatility in percent", percent, schema.OutOfRange, "vol", "unit ="},
		{"negative futures price", call("fut"), schema.OutOfRange, "underlying", "not positive"},
		{"negative share price", line{underlying: "neg", instrument: schema.Stock}, schema.OutOfRange, "underlying", "negative"},
		{"strike", zero, schema.OutOfRange, "strike", "positive"},
		{"digital before a dividend", paying, schema.Unsupported, "payoff", "cash dividend on 2026-04-10"},
		{"dividends above the forward", call("broke"), schema.BadMarketData, "underlying", "forward price to expiry is -"},
		{"stock on a future", line{underlying: "fut", instrument: schema.Stock}, schema.KindMismatch, "instrument", "instrument future"},
		{"future on a share", line{underlying: "U", instrument: schema.Future}, schema.KindMismatch, "instrument", "kind future or spread"},
		{"forward on a spread", line{underlying: "gap", instrument: schema.Forward, strike: 1, days: 9}, schema.KindMismatch, "instrument", "not spread"},
		{"broken curve", call("curve"), schema.BadMarketData, "underlying", "rates.csv line 7"},
		{"broken surface", call("doubtful"), schema.BadMarketData, "underlying", "vols.csv line 8"},
		{"broken underlying", call("broken"), schema.BadMarketData, "underlying", "underlyings.csv line 9"},
		{"broken fx", line{underlying: "CHF", instrument: schema.Cash}, schema.BadMarketData, "underlying", "fx.csv line 3"},
		{"cash of no currency", line{underlying: "U", instrument: schema.Cash}, schema.NoFX, "underlying", "add a row"},
		{"cash of two currencies", line{underlying: "USD", currency: "EUR", instrument: schema.Cash}, schema.CurrencyMismatch, "currency", "it says USD"},
		{"stock that is a call", line{underlying: "U", instrument: schema.Stock, kind: schema.Call}, schema.TermsMismatch, "option_type", "mend the instrument"},
		{"future with a strike", line{underlying: "fut", instrument: schema.Future, strike: 9}, schema.TermsMismatch, "strike", "mend the instrument"},
		{"beyond a double", huge, schema.NotFinite, "", "quantity 1e+307"},
		{"too wide for the mesh", option("pays", schema.Call, 100, 3650, 10), schema.NotFinite, "", "finite_differences has no value for such terms: vol 10 over 10 years"},
	} {
		b := d.price(call("U"), c.l)
		if b.Status[0] != schema.Priced {
			t.Fatalf("%s: the good line was refused: %v", c.what, b.Rejects)
		}
		if b.Status[1] != schema.Rejected || len(b.Rejects) != 1 {
			t.Errorf("%s: status %s, rejects %v", c.what, schema.Statuses[b.Status[1]], b.Rejects)
			continue
		}
		if r := b.Rejects[0]; r.Code != c.code || r.Column != c.column || !strings.Contains(r.Reason, c.says) || r.Line != 3 || r.Index != 1 || r.Row != "L1,…" {
			t.Errorf("%s: %+v", c.what, r)
		}
	}

	// what does not depend on the broken thing is priced
	own := call("doubtful")
	own.vol = 0.2
	late := call("pays")
	late.days = 9
	if b := d.price(own, late, line{underlying: "curve", instrument: schema.Stock}, line{underlying: "fut", instrument: schema.Future}); len(b.Rejects) > 0 {
		t.Errorf("refused without need: %v", b.Rejects)
	}
}

func TestFaultsThatEndTheRun(t *testing.T) {
	for table, name := range map[string]string{"holidays": "home", "books": "B", "rates": "", "underlyings": "", "fx": "", "vols": "", "dividends": ""} {
		d := newDesk(t)
		d.raw.Faults = []schema.Fault{{Table: table, Name: name, Reject: schema.Reject{File: table + ".csv", Line: 4, Code: schema.BadDate, Reason: "expected a date"}}}
		if _, _, err := market.New(&d.cfg, &d.raw, d.dicts); err == nil || !strings.Contains(err.Error(), table+".csv, line 4: expected a date") {
			t.Errorf("%s: error %v", table, err)
		}
	}
}

// Each cell of the table is reached, and each combination outside it is refused.
func TestTableIsWhole(t *testing.T) {
	tried := map[uint8]bool{}
	for inst := schema.Option; inst < schema.Cash; inst++ {
		for kind := schema.Equity; kind <= schema.Spread; kind++ {
			for payoff := schema.Choice(0); payoff <= schema.AsianArithmetic; payoff++ {
				for cell := range 2 * (schema.American + 1) {
					style, paid := cell/2, int(cell%2)
					if isOption := inst == schema.Option; isOption != (payoff != 0) || isOption != (style != 0) {
						continue
					}
					d := newDesk(t)
					d.rate("EUR", 0.03)
					d.underlying("U", kind, "EUR", 100, 0, 0.2)
					if paid == withDividends {
						d.raw.Dividends = []schema.DividendRow{{Underlying: "U", ExDate: d.cfg.AsOf.Day + 20, Amount: 1}}
						if kind != schema.Equity && kind != schema.Index || inst == schema.Stock {
							paid = withoutDividends // they move nothing
						}
					}
					l := line{underlying: "U", instrument: inst, payoff: payoff, style: style, days: 50}
					if inst == schema.Option || inst == schema.Forward {
						l.strike = 100
					}
					if inst == schema.Option {
						l.kind = schema.Put
					}
					switch payoff {
					case schema.CashDigital:
						l.payout = 5
					case schema.Barrier:
						l.barrierType, l.barrier = schema.DownOut, 80
					case schema.AsianGeometric, schema.AsianArithmetic:
						l.start = 10
					}
					b := d.price(l)
					at := productAt[inst][kind][payoff][style][paid]
					tried[at] = true
					if want := at != 0; want != (b.Status[0] == schema.Priced) {
						t.Errorf("%s on %s, payoff %s, %s: %s", schema.Instruments[inst], schema.Kinds[kind], schema.Payoffs[payoff], schema.Exercises[style], schema.Statuses[b.Status[0]])
					}
					if at == 0 && (b.Rejects[0].Value == "" || b.Rejects[0].Reason == "") {
						t.Errorf("refused without a word: %+v", b.Rejects[0])
					}
				}
			}
		}
	}
	if len(tried) != len(products) { // all but cash, and "none"
		t.Errorf("%d of %d products tried", len(tried)-1, len(products)-1)
	}
}

func TestResultsDoNotDependOnTheCompany(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.underlying("U", schema.Equity, "EUR", 100, 0.01, 0.2)
	d.underlying("F", schema.FuturePrice, "EUR", 100, 0, 0.2)
	d.underlying("D", schema.Equity, "EUR", 100, 0.01, 0.2)
	d.raw.Dividends = []schema.DividendRow{{Underlying: "D", ExDate: d.cfg.AsOf.Day + 20, Amount: 1}, {Underlying: "D", ExDate: d.cfg.AsOf.Day + 100, Amount: 1}}
	var lines []line
	for i := range 300 {
		kind := schema.Call + schema.Choice(i%2)
		l := option([]string{"U", "F", "D"}[i/2%3], kind, 50+float64(i), 1+i*7, 0.1+float64(i)/400)
		l.style = schema.European + schema.Choice(i/6%2)
		lines = append(lines, l)
	}
	all := d.price(lines...)
	for i := range lines {
		one := d.price(lines[i])
		for k, c := range greekColumns(&one.Results) {
			if got, want := (*greekColumns(&all.Results)[k])[i], (*c)[0]; math.Float64bits(got) != math.Float64bits(want) {
				t.Fatalf("line %d, result %d: %v in company, %v alone", i, k, got, want)
			}
		}
	}
}

func TestReportingCurrencyHasTheRateOne(t *testing.T) {
	d := newDesk(t)
	d.raw.FX = append(d.raw.FX, schema.FXRow{Currency: "EUR", Rate: 1.08})
	if _, _, err := market.New(&d.cfg, &d.raw, d.dicts); err == nil || !strings.Contains(err.Error(), "quoted in another currency") {
		t.Errorf("error %v", err)
	}
	d = newDesk(t)
	d.raw.Faults = []schema.Fault{{Table: "fx", Name: "EUR", Reject: schema.Reject{File: "fx.csv", Line: 2, Reason: "expected a number"}}}
	if _, _, err := market.New(&d.cfg, &d.raw, d.dicts); err == nil || !strings.Contains(err.Error(), "fx.csv, line 2: expected a number") {
		t.Errorf("error %v", err)
	}
	d = newDesk(t)
	d.raw.FX = append(d.raw.FX, schema.FXRow{Currency: "EUR", Rate: 1})
	if _, _, err := market.New(&d.cfg, &d.raw, d.dicts); err != nil {
		t.Error(err)
	}
}

func TestMarketRowsThatMeetNoUnderlying(t *testing.T) {
	d := newDesk(t)
	d.underlying("U", schema.Equity, "EUR", 100, 0, 0.2)
	d.raw.Dividends = []schema.DividendRow{{Underlying: "UU", ExDate: d.cfg.AsOf.Day + 9, Amount: 1}}
	d.raw.Vols = []schema.VolRow{{Underlying: "V", Day: d.cfg.AsOf.Day + 9, Strike: 1, Vol: 1}, {Underlying: "V", Day: d.cfg.AsOf.Day + 9, Strike: 2, Vol: 1}}
	_, notes, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		t.Fatal(err)
	}
	got := map[string]int64{}
	for _, n := range notes {
		if n.Code == schema.MarketRowUnused {
			got[n.Subject] = n.Count
		}
	}
	if len(got) != 2 || got["UU"] != 1 || got["V"] != 2 {
		t.Errorf("warnings %v", notes)
	}
}

func TestSurfaceThatCannotBeBuilt(t *testing.T) {
	for _, strikes := range [][]float64{{-5}, {0}, {-5, 0, 5}} {
		d := newDesk(t)
		d.rate("EUR", 0.03)
		d.underlying("U", schema.Equity, "EUR", 100, 0, 0.2)
		for _, k := range strikes {
			d.raw.Vols = append(d.raw.Vols, schema.VolRow{Underlying: "U", Day: d.cfg.AsOf.Day + 9, Minute: schema.NoMinute, Strike: k, Vol: 0.2})
		}
		b := d.price(option("U", schema.Call, 100, 50, 0))
		if len(b.Rejects) != 1 || b.Rejects[0].Code != schema.BadMarketData || !strings.Contains(b.Rejects[0].Reason, "cannot be set against") {
			t.Errorf("strikes %v: %v", strikes, b.Rejects)
		}
	}
}

// A warning is about lines that were priced with what it tells of, not about those
// refused afterwards.
func TestWarningsLeaveOutRefusedLines(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.underlying("flat", schema.Equity, "EUR", 100, 0, 0.4)
	d.underlying("bare", schema.Equity, "EUR", 100, 0, nan)
	huge := option("flat", schema.Call, 100, 500, 0)
	huge.quantity, huge.multiplier = 1e300, 1e300
	b := d.price(huge, option("bare", schema.Call, 100, 500, 0), option("flat", schema.Call, 100, 500, 0), option("flat", schema.Call, 100, 50, 0))
	if len(b.Rejects) != 2 {
		t.Fatal(b.Rejects)
	}
	got := map[schema.NoteCode][2]int64{}
	for _, n := range b.Notes {
		got[n.Code] = [2]int64{n.Count, n.Line}
	}
	if len(b.Notes) != 2 || got[schema.CurveFlatEnd] != [2]int64{2, 4} || got[schema.VolFallback] != [2]int64{2, 4} {
		t.Errorf("warnings %v", b.Notes)
	}
}
