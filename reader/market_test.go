package reader

import (
	"fmt"
	"math"
	"reflect"
	"strings"
	"testing"

	"nightbook/schema"
)

func TestMarketRows(t *testing.T) {
	s := mustRead(t, map[string]string{
		"underlyings.csv": "underlying,kind,currency,price,carry_yield,vol,curve,lot,observed_at,desk\n" +
			"ALBA,Equity,usd,100.5,0.02,0.3,USD-OIS,10,17:30 close,x\n" +
			"BORA,index,EUR,4000,,,,,,\n" +
			"GAS/OIL,spread,USD,-3,,,,,,\n" +
			"CRUDE,future,USD,-37.63,,,,,,\n",
		"rates.csv":     "curve,tenor,date,zero_rate,discount_factor\nUSD,3M,,0.05,\nUSD,,2027-03-20,,0.95\nEUR,1W,,-0.005,\n",
		"vols.csv":      "underlying,expiry,strike,vol\nALBA,2026-06-19T16:00,100,0.31\nALBA,2026-06-19,100,0.32\nGAS/OIL,2026-06-19,-5,0\n",
		"fx.csv":        "currency,rate\neur,1.25\n",
		"books.csv":     "book,parent,owner\nDesk,,Ines\nNorth,Desk,\n",
		"dividends.csv": "underlying,ex_date,amount\nALBA,2026-05-01,0.5\nALBA,2026-05-01,0\n",
		"holidays.csv":  "calendar,date\nNorthport,2026-05-01\nNorthport,2026-05-01\n",
	})
	m := s.market
	if len(m.Faults) > 0 {
		t.Fatalf("faults: %+v", m.Faults)
	}
	nan := math.NaN()
	day := func(text string) schema.Date { return moment(t, text).Day }
	want := &schema.Market{
		Underlyings: []schema.UnderlyingRow{
			{Line: 2, Name: "ALBA", Kind: schema.Equity, Currency: "USD", Price: 100.5, CarryYield: 0.02, Vol: 0.3, Curve: "USD-OIS", Lot: 10, ObservedAt: "17:30 close"},
			{Line: 3, Name: "BORA", Kind: schema.Index, Currency: "EUR", Price: 4000, Vol: nan, Lot: 1},
			{Line: 4, Name: "GAS/OIL", Kind: schema.Spread, Currency: "USD", Price: -3, Vol: nan, Lot: 1},
			{Line: 5, Name: "CRUDE", Kind: schema.FuturePrice, Currency: "USD", Price: -37.63, Vol: nan, Lot: 1},
		},
		Rates: []schema.RateRow{
			{Line: 2, Curve: "USD", Day: day("2026-06-20"), Zero: 0.05, Discount: nan},
			{Line: 3, Curve: "USD", Day: day("2027-03-20"), Zero: nan, Discount: 0.95},
			{Line: 4, Curve: "EUR", Day: day("2026-03-27"), Zero: -0.005, Discount: nan},
		},
		Vols: []schema.VolRow{
			{Line: 2, Underlying: "ALBA", Day: day("2026-06-19"), Minute: 960, Strike: 100, Vol: 0.31},
			{Line: 3, Underlying: "ALBA", Day: day("2026-06-19"), Minute: schema.NoMinute, Strike: 100, Vol: 0.32},
			{Line: 4, Underlying: "GAS/OIL", Day: day("2026-06-19"), Minute: schema.NoMinute, Strike: -5, Vol: 0},
		},
		FX:        []schema.FXRow{{Line: 2, Currency: "EUR", Rate: 1.25}},
		Books:     []schema.BookRow{{Line: 2, Book: "Desk", Owner: "Ines"}, {Line: 3, Book: "North", Parent: "Desk"}},
		Dividends: []schema.DividendRow{{Line: 2, Underlying: "ALBA", ExDate: day("2026-05-01"), Amount: 0.5}, {Line: 3, Underlying: "ALBA", ExDate: day("2026-05-01")}},
		Holidays:  []schema.HolidayRow{{Line: 2, Calendar: "Northport", Day: day("2026-05-01")}, {Line: 3, Calendar: "Northport", Day: day("2026-05-01")}},
	}
	// NaN is unequal to itself: compare what is printed.
	if got, want := fmt.Sprintf("%+v", m), fmt.Sprintf("%+v", want); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

// Each fault of a market row, at its address, with the name of what it belongs to.
func TestMarketFaults(t *testing.T) {
	for _, c := range []struct {
		table, header, good, row string
		name, column             string
		code                     schema.RejectCode
		value, reason            string
	}{
		{"underlyings", "underlying,kind,currency,price,carry_yield,vol,curve,lot", "ALBA,equity,USD,1,,,,", ",equity,USD,1,,,,", "", "underlying", schema.MissingValue, "", "needs it"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "BORA,,USD,1", "BORA", "kind", schema.MissingValue, "", "needs it"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "BORA,share,USD,1", "BORA", "kind", schema.BadChoice, "share", "equity, index, fx, future, spread"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "BORA,equity,,1", "BORA", "currency", schema.MissingValue, "", "needs it"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "BORA,equity,dollar,1", "BORA", "currency", schema.BadChoice, "dollar", "three letters"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "BORA,equity,USD,", "BORA", "price", schema.MissingValue, "", "needs it"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "BORA,equity,USD,0", "BORA", "price", schema.OutOfRange, "0", "above 0"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "BORA,spread,USD,x", "BORA", "price", schema.BadNumber, "x", "expected a number"},
		{"underlyings", "underlying,kind,currency,price,carry_yield", "ALBA,equity,USD,1,", "BORA,equity,USD,1,2", "BORA", "carry_yield", schema.OutOfRange, "2", "0.035 is 3.5 %"},
		{"underlyings", "underlying,kind,currency,price,vol", "ALBA,equity,USD,1,", "BORA,equity,USD,1,30", "BORA", "vol", schema.OutOfRange, "30", "percent"},
		{"underlyings", "underlying,kind,currency,price,lot", "ALBA,equity,USD,1,", "BORA,equity,USD,1,0", "BORA", "lot", schema.OutOfRange, "0", "above 0"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "ALBA,equity,USD,2", "ALBA", "underlying", schema.DuplicateKey, "ALBA", "line 2"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "BORA,equity,USD", "", "", schema.BadRow, "", "3 fields, the header has 4"},
		{"underlyings", "underlying,kind,currency,price", "ALBA,equity,USD,1", "B\xFF,x,USD,", "", "underlying", schema.BadText, "B\xFF", "; also: kind, price"},
		{"rates", "curve,tenor,zero_rate", "USD,1Y,0.04", ",1Y,0.04", "", "curve", schema.MissingValue, "", "needs it"},
		{"rates", "curve,tenor,zero_rate", "USD,1Y,0.04", "USD,,0.04", "USD", "tenor", schema.MissingValue, "", "a tenor or a date"},
		{"rates", "curve,tenor,zero_rate", "USD,1Y,0.04", "USD,12 months,0.04", "USD", "tenor", schema.BadDate, "12 months", "1D, 2W, 3M or 5Y"},
		{"rates", "curve,tenor,zero_rate", "USD,1Y,0.04", "USD,0D,0.04", "USD", "tenor", schema.OutOfRange, "0D", "not after as_of"},
		{"rates", "curve,tenor,zero_rate", "USD,1Y,0.04", "USD,9000Y,0.04", "USD", "tenor", schema.OutOfRange, "9000Y", "after the year 9999"},
		{"rates", "curve,tenor,zero_rate", "USD,1Y,0.04", "USD,2Y,", "USD", "zero_rate", schema.MissingValue, "", "zero_rate or a discount_factor"},
		{"rates", "curve,tenor,zero_rate", "USD,1Y,0.04", "USD,2Y,4.5%", "USD", "zero_rate", schema.BadNumber, "4.5%", "expected a number"},
		{"rates", "curve,tenor,zero_rate", "USD,1Y,0.04", "USD,2Y,4", "USD", "zero_rate", schema.OutOfRange, "4", "0.035 is 3.5 %"},
		{"rates", "curve,tenor,zero_rate", "USD,1Y,0.04", "USD,12M,0.05", "USD", "tenor", schema.DuplicateKey, "12M", "USD at 2027-03-20 stands on line 2"},
		{"rates", "curve,date,discount_factor", "USD,2027-03-20,0.9", "USD,2026-03-20,0.9", "USD", "date", schema.OutOfRange, "2026-03-20", "not after as_of"},
		{"rates", "curve,date,discount_factor", "USD,2027-03-20,0.9", "USD,20.3.2027,0.9", "USD", "date", schema.BadDate, "20.3.2027", "expected a date"},
		{"rates", "curve,date,discount_factor", "USD,2027-03-20,0.9", "USD,2027-04-20,0", "USD", "discount_factor", schema.OutOfRange, "0", "above 0"},
		{"rates", "curve,tenor,date,zero_rate,discount_factor", "USD,1Y,,0.04,", "USD,2Y,2028-03-20,0.04,", "USD", "date", schema.BadRow, "2028-03-20", "both given"},
		{"rates", "curve,tenor,date,zero_rate,discount_factor", "USD,1Y,,0.04,", "USD,2Y,,0.04,0.9", "USD", "discount_factor", schema.BadRow, "0.9", "both given"},
		{"vols", "underlying,expiry,strike,vol", "ALBA,2026-06-19,100,0.2", ",2026-06-19,100,0.2", "", "underlying", schema.MissingValue, "", "needs it"},
		{"vols", "underlying,expiry,strike,vol", "ALBA,2026-06-19,100,0.2", "ALBA,,100,0.2", "ALBA", "expiry", schema.MissingValue, "", "needs it"},
		{"vols", "underlying,expiry,strike,vol", "ALBA,2026-06-19,100,0.2", "ALBA,2026-06-19,,0.2", "ALBA", "strike", schema.MissingValue, "", "needs it"},
		{"vols", "underlying,expiry,strike,vol", "ALBA,2026-06-19,100,0.2", "ALBA,2026-06-19,-5,0.2", "ALBA", "strike", schema.OutOfRange, "-5", "above 0"},
		{"vols", "underlying,expiry,strike,vol", "UNKNOWN,2026-06-19,-5,0.2", "ALBA,2026-06-19,0,0.2", "ALBA", "strike", schema.OutOfRange, "0", "above 0"},
		{"vols", "underlying,expiry,strike,vol", "ALBA,2026-06-19,100,0.2", "ALBA,2026-06-19,90,20", "ALBA", "vol", schema.OutOfRange, "20", "percent"},
		{"vols", "underlying,expiry,strike,vol", "ALBA,2026-06-19,100,0.2", "ALBA,2026-06-19,1e2,0.3", "ALBA", "strike", schema.DuplicateKey, "1e2", "line 2"},
		{"fx", "currency,rate", "EUR,1.1", "eur,1.2", "EUR", "currency", schema.DuplicateKey, "eur", "line 2"},
		{"fx", "currency,rate", "EUR,1.1", "GBP,-1", "GBP", "rate", schema.OutOfRange, "-1", "above 0"},
		{"fx", "currency,rate", "EUR,1.1", "GBP,", "GBP", "rate", schema.MissingValue, "", "needs it"},
		{"fx", "currency,rate", "EUR,1.1", "pound,1", "", "currency", schema.BadChoice, "pound", "three letters"},
		{"books", "book,parent", "Desk,", "Desk,Other", "Desk", "book", schema.DuplicateKey, "Desk", "line 2"},
		{"books", "book,parent", "Desk,", "North,North", "North", "parent", schema.OutOfRange, "North", "its own parent"},
		{"books", "book,parent", "Desk,", ",Desk", "", "book", schema.MissingValue, "", "needs it"},
		{"dividends", "underlying,ex_date,amount", "ALBA,2026-05-01,1", "ALBA,2026-05-01,-1", "ALBA", "amount", schema.OutOfRange, "-1", "0 or a number above"},
		{"dividends", "underlying,ex_date,amount", "ALBA,2026-05-01,1", "ALBA,may,1", "ALBA", "ex_date", schema.BadDate, "may", "expected a date"},
		{"holidays", "calendar,date", "Northport,2026-05-01", "Northport,2026-02-30", "Northport", "date", schema.BadDate, "2026-02-30", "no such day"},
		{"holidays", "calendar,date", "Northport,2026-05-01", ",2026-05-01", "", "calendar", schema.MissingValue, "", "needs it"},
	} {
		s := mustRead(t, map[string]string{c.table + ".csv": c.header + "\n" + c.good + "\n" + c.row + "\n"})
		if len(s.market.Faults) != 1 {
			t.Errorf("%s %q: faults %+v", c.table, c.row, s.market.Faults)
			continue
		}
		got := s.market.Faults[0]
		reason := got.Reason
		got.Reason = ""
		want := schema.Fault{Table: c.table, Name: c.name, Reject: schema.Reject{File: c.table + ".csv", Line: 3, Column: c.column, Code: c.code, Value: c.value, Row: c.row}}
		if got != want {
			t.Errorf("%s %q:\n%+v, want\n%+v", c.table, c.row, got, want)
		}
		if !strings.Contains(reason, c.reason) {
			t.Errorf("%s %q: reason %q, want %q in it", c.table, c.row, reason, c.reason)
		}
		m := reflect.ValueOf(*s.market)
		for field, table := range map[string]string{"Underlyings": "underlyings", "Rates": "rates", "Vols": "vols", "FX": "fx", "Books": "books", "Dividends": "dividends", "Holidays": "holidays"} {
			if n := m.FieldByName(field).Len(); table == c.table && n != 1 {
				t.Errorf("%s %q: %d good rows, want 1", c.table, c.row, n)
			}
		}
	}
}

// A duplicate is one of the first row with its key, though that is refused itself.
func TestDuplicateOfRefusedRow(t *testing.T) {
	s := mustRead(t, map[string]string{"fx.csv": "currency,rate\nEUR,-1\nEUR,1.1\n"})
	if f := s.market.Faults; len(f) != 2 || f[0].Code != schema.OutOfRange || f[1].Code != schema.DuplicateKey || len(s.market.FX) != 0 {
		t.Errorf("%+v", f)
	}
}

// A quote's strike is above 0 unless its underlying is a spread.
func TestQuoteStrikes(t *testing.T) {
	s := mustRead(t, map[string]string{
		"run.toml":        smallest["run.toml"] + "[vols]\nfrom = \"quotes\"\n",
		"underlyings.csv": "underlying,kind,currency,price\nALBA,equity,USD,100\nGAS/OIL,spread,USD,-3\n",
		"quotes.csv":      "underlying,expiry,strike,option_type,price\nALBA,2026-06-19,-5,call,1\nGAS/OIL,2026-06-19,-5,call,1\n",
	})
	q := s.market.Quotes
	if len(q) != 2 || q[0].Reject == nil || q[0].Reject.Code != schema.OutOfRange || q[0].Reject.Column != "strike" || q[1].Reject != nil {
		t.Errorf("%+v", q)
	}
}
