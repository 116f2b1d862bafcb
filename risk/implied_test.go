package risk

import (
	"context"
	"math"
	"testing"

	"nightbook/risk/market"
	"nightbook/schema"
)

// Quotes that are the prices of lines give back the volatilities of the lines,
// on every kind of underlying, and a surface of them prices the lines again.
func TestImplyGivesBackWhatPricesWereMadeOf(t *testing.T) {
	d := newDesk(t)
	d.rate("EUR", 0.03)
	d.underlying("S", schema.Equity, "EUR", 100, 0.01, nan)
	d.underlying("X", schema.FX, "EUR", 1.1, 0.02, nan)
	d.underlying("F", schema.FuturePrice, "EUR", 80, 0, nan)
	var lines []line
	var quotes []schema.QuoteRow
	for i, u := range []struct {
		name  string
		price float64
	}{{"S", 100}, {"X", 1.1}, {"F", 80}} {
		for k := range 9 {
			for kind := schema.Call; kind <= schema.Put; kind++ {
				l := option(u.name, kind, u.price*(0.8+0.05*float64(k)), 60+30*i, 0.15+0.01*float64(k))
				lines = append(lines, l)
			}
		}
	}
	priced := d.price(lines...)
	for i, l := range lines {
		quotes = append(quotes, schema.QuoteRow{Line: int64(i), Underlying: l.underlying, Day: priced.Expiry[i], Minute: schema.NoMinute,
			Strike: l.strike, OptionType: l.kind, Exercise: schema.European, Price: priced.Price[i], Bid: nan, Ask: nan})
	}
	m, _, err := market.New(&d.cfg, &d.raw, d.dicts)
	if err != nil {
		t.Fatal(err)
	}
	implied := imply(t, m, d.dicts, quotes)
	for i, q := range implied {
		// the in-the-money side has lost the digits of its intrinsic value
		tolerance := 1e-13 * (1 + priced.Price[i]/(lines[i].vol*priced.Vega[i]))
		if q.Status != schema.QuoteOK || math.Abs(q.Vol-lines[i].vol) > tolerance {
			t.Errorf("%+v: vol %v, %s %s", lines[i], q.Vol, schema.QuoteStatuses[q.Status], q.Reason)
		}
	}
	vols, notes := SurfaceOf(implied, "quotes.csv")
	if len(vols) != len(lines)/2 || len(notes) != 0 {
		t.Fatalf("%d points, warnings %v", len(vols), notes)
	}
	d.raw.Vols = vols
	for i := range lines {
		lines[i].vol = 0
	}
	again := d.price(lines...)
	for i := range lines {
		if again.VolSource[i] != schema.VolFromSurface || math.Abs(again.Price[i]-priced.Price[i]) > 1e-12*d.spot(lines[i].underlying) {
			t.Errorf("line %d: %v from the surface of quotes, %v before", i, again.Price[i], priced.Price[i])
		}
	}
}

func imply(t *testing.T, m *market.Market, d *schema.Dicts, quotes []schema.QuoteRow) []schema.ImpliedRow {
	t.Helper()
	rows, err := Imply(context.Background(), m, d, quotes)
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

func (d *desk) spot(name string) float64 {
	for _, u := range d.raw.Underlyings {
		if u.Name == name {
			return u.Price
		}
	}
	return nan
}

func TestSurfaceOfTakesTheOutOfTheMoneySide(t *testing.T) {
	quote := func(strike, vol float64, kind, status schema.Choice) schema.ImpliedRow {
		return schema.ImpliedRow{QuoteRow: &schema.QuoteRow{Underlying: "U", Day: 100, Strike: strike, OptionType: kind}, Forward: 100, Vol: vol, Status: status}
	}
	rows, notes := SurfaceOf([]schema.ImpliedRow{
		quote(90, 0.3, schema.Call, schema.QuoteOK), quote(90, 0.2, schema.Put, schema.QuoteOK),
		quote(110, 0.1, schema.Call, schema.QuoteOK), quote(110, 0.4, schema.Put, schema.QuoteOK),
		quote(120, 0.5, schema.Put, schema.QuoteOK), // the only one at its strike
		quote(130, nan, schema.Put, schema.QuoteBelowBound),
	}, "quotes.csv")
	if len(rows) != 3 || rows[0].Vol != 0.2 || rows[1].Vol != 0.1 || rows[2].Vol != 0.5 {
		t.Errorf("rows %+v", rows)
	}
	if len(notes) != 1 || notes[0].Code != schema.QuoteNotUsed || notes[0].Count != 1 {
		t.Errorf("warnings %+v", notes)
	}
}
