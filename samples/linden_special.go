package samples

import "nightbook/schema"

// putsPastTheirBoundary are puts so deep in the money that interest on the
// strike is worth more than waiting; of some the desk is the holder, of others
// the writer.
func (l *lindenDesk) putsPastTheirBoundary() {
	for i, p := range []struct {
		q              *quote
		permille, days int64 // strike, and the place of the expiry
	}{{l.harrowfell, 1400, 0}, {l.harrowfell, 1600, 1}, {l.slatewick, 1450, 0}, {l.teaselholt, 1350, 0}, {l.larkmoor, 1800, 2}, {l.larkmoor, 1600, 1},
		{l.linden, 1250, 1}, {l.pennywhin, 1300, 1}} {
		n := l.between(2, 9) * 5
		if i%3 == 1 {
			n = -n
		}
		row := l.american("ASSIGNMENT", p.q, n, "put", p.q.near(p.permille), l.expiries[p.days], "stock_replacement")
		if p.q == l.linden {
			row["multiplier"] = "10"
		}
	}
}

// callsBeforeAnExDate are calls whose time value is below the dividend that the
// share is about to pay; and calls on a share so dear to borrow that waiting
// costs more than it brings.
func (l *lindenDesk) callsBeforeAnExDate() {
	for i, c := range []struct {
		q              *quote
		permille, days int64
	}{{l.pennywhin, 850, 0}, {l.pennywhin, 800, 1}, {l.pennywhin, 900, 2}, {l.pennywhin, 960, 0}, {l.teaselholt, 800, 0}, {l.teaselholt, 870, 0},
		{l.slatewick, 760, 1}, {l.kilnshaw, 600, 4}, {l.kilnshaw, 660, 1}} {
		n := l.between(2, 9) * 5
		if i%3 == 2 {
			n = -n
		}
		l.american("ASSIGNMENT", c.q, n, "call", c.q.near(c.permille), l.expiries[c.days], "stock_replacement")
	}
}

// oddDates are expiries between the listed ones, some of them on an ex-date or
// within the step to the next business day.
func (l *lindenDesk) oddDates() {
	own := func(row map[string]string, vol string) map[string]string { row["vol"] = vol; return row }
	own(l.american("UK-SHARES", l.pennywhin, 40, "call", "38.5", "2026-08-14", "client"), "0.255") // expires as its share goes ex
	own(l.option("UK-SHARES", l.pennywhin, -3000, "1", "put", "40.5", "2026-08-14", "client"), "0.255")
	own(l.american("US-SHARES", l.teaselholt, -15, "put", "98", "2026-08-17", "client"), "0.31")
	own(l.option("US-SHARES", l.teaselholt, 1200, "1", "call", "95", "2026-08-17", "client"), "0.31")
	// at noon of an ex-date
	own(l.american("UK-SHARES", l.slatewick, 30, "call", "16.5", "2026-09-18T12:00", "client"), "0.305")
	own(l.option("UK-SHARES", l.slatewick, 5000, "1", "put", "18.25", "2026-09-18T12:00", "client"), "0.305")
	l.linear("UK-SHARES", l.slatewick.name, "forward", 5000, "strike", "17.25", "expiry", "2026-09-18T12:00")
	own(l.american("EU-SHARES", l.wraybourn, 12, "put", "55", "2027-01-29", "client"), "0.24")
	l.american("UK-SHARES", l.harrowfell, 25, "put", "20", "2028-06-16", "tail") // beyond the surface
}

// expired holds what is over, today or before.
func (l *lindenDesk) expired() {
	l.american("UK-VOL", l.harrowfell, -50, "call", "23.5", l.asOf.String(), "expiry")
	l.option("EU-SHARES", l.kilnshaw, 2500, "1", "put", "34", l.asOf.String(), "expiry") // as the dividend is gone
	l.american("US-VOL", l.larkmoor, 20, "put", "65", lastExpiry(l.asOf).String(), "expiry")
}

// faulty breaks lines, one way each, and spreads them over the file.
func (l *lindenDesk) faulty() {
	fault := func(code schema.RejectCode, row map[string]string, pairs ...string) {
		for i := 0; i < len(pairs); i += 2 {
			row[pairs[i]] = pairs[i+1]
		}
		l.breaks(row, code)
	}
	like := func(q *quote) map[string]string {
		return l.american("UK-SHARES", q, l.between(1, 9), "call", q.near(1000), l.expiries[4], "client")
	}
	fault(schema.Unsupported, like(l.larkmoor), "book", "US-SHARES", "payoff", "barrier", "barrier_type", "down_out", "barrier", "55")
	fault(schema.Unsupported, like(l.harrowfell), "exercise", "european", "payoff", "cash_digital", "payout", "1")
	fault(schema.BadMarketData, like(l.oxlipton))
	fault(schema.BadChoice, like(l.slatewick), "exercise", "amercian")
	fault(schema.BadMarketData, l.linear("UK-SHARES", l.oxlipton.name, "stock", 5_000))
	fault(schema.BadDate, like(l.harrowfell), "expiry", "2026-11-31")
	fault(schema.MissingValue, like(l.pennywhin), "option_type", "")
	fault(schema.BadNumber, like(l.slatewick), "multiplier", "1OO")
	l.scatter(25)
}

// slatewickQuotes are in hundredths; expiry is a place in the list of expiries.
var slatewickQuotes = []struct {
	expiry               int
	strike               int64
	optionType, exercise string
	bid, ask             int64
}{
	{1, 1500, "put", "american", 7, 9},
	{1, 1600, "put", "american", 22, 24},
	{1, 1700, "put", "american", 54, 57},
	{1, 1750, "put", "american", 78, 82},
	{1, 1750, "call", "american", 74, 77},
	{1, 1800, "call", "american", 50, 53},
	{1, 1900, "call", "american", 19, 21},
	{1, 2000, "call", "american", 6, 7},
	{4, 1400, "put", "american", 18, 21},
	{4, 1600, "put", "american", 61, 65},
	{4, 1750, "put", "american", 125, 130},
	{4, 1750, "call", "american", 115, 119},
	{4, 1900, "call", "american", 59, 62},
	{4, 2200, "call", "american", 10, 13},
	{6, 1400, "put", "american", 40, 43},
	{6, 1600, "put", "american", 97, 102},
	{6, 1750, "put", "american", 166, 171},
	{6, 1750, "call", "american", 157, 162},
	{6, 2000, "call", "american", 68, 72},
	{6, 2200, "call", "american", 31, 34},
	{4, 1800, "call", "european", 92, 97},     // one that cannot be exercised early
	{4, 1800, "put", "american", 162, 155},    // crossed
	{1, 2600, "put", "american", 830, 836},    // below what exercise after the ex-date brings
	{4, 1700, "call", "american", 1755, 1790}, // above the share itself
}

// lindenRates are zero rates by tenor.
func lindenRates() file {
	t := newTable(plain, "curve", "tenor", "zero_rate")
	for _, c := range []struct {
		curve string
		rates []int64
	}{
		{"GBP", []int64{3968, 3955, 3921, 3870, 3788, 3702}},
		{"USD", []int64{4215, 4198, 4142, 4071, 3925, 3760}},
		{"EUR", []int64{1962, 1975, 2018, 2094, 2186, 2301}},
	} {
		for i, tenor := range []string{"1W", "1M", "3M", "6M", "1Y", "2Y"} {
			t.text(c.curve)
			t.text(tenor)
			t.number(decimal{c.rates[i], 5})
			t.end()
		}
	}
	return t.file("rates.csv")
}

func lindenFX() file {
	t := newTable(plain, "currency", "rate")
	for _, c := range []struct {
		code string
		rate decimal
	}{{"GBP", decimal{1, 0}}, {"USD", decimal{7842, 4}}, {"EUR", decimal{86155, 5}}} {
		t.text(c.code)
		t.number(c.rate)
		t.end()
	}
	return t.file("fx.csv")
}

func lindenBooks() file {
	t := newTable(plain, "book", "parent", "owner")
	for _, b := range [][3]string{
		{"LINDEN", "", "Ysolde Marl"},
		{"HOME", "LINDEN", "Corin Thrale"}, {"ABROAD", "LINDEN", "Petra Vance-Holm"}, {"INDEX", "LINDEN", "Corin Thrale"},
		{"ASSIGNMENT", "LINDEN", "Ysolde Marl"}, {"TREASURY", "LINDEN", "Ysolde Marl"},
		{"UK-VOL", "HOME", "Corin Thrale"}, {"UK-OVERWRITE", "HOME", "Corin Thrale"}, {"UK-SHARES", "HOME", "Corin Thrale"},
		{"US-VOL", "ABROAD", "Petra Vance-Holm"}, {"US-SHARES", "ABROAD", "Petra Vance-Holm"},
		{"EU-VOL", "ABROAD", "Petra Vance-Holm"}, {"EU-SHARES", "ABROAD", "Petra Vance-Holm"},
	} {
		t.text(b[0])
		t.text(b[1])
		t.text(b[2])
		t.end()
	}
	return t.file("books.csv")
}

// lindenHolidays closes the Friday after as_of.
func lindenHolidays() file {
	t := newTable(plain, "calendar", "date")
	for _, d := range []schema.Date{day(2026, 8, 14), day(2026, 12, 25), day(2027, 1, 1)} {
		t.text("HEDGEROW")
		t.date(d)
		t.end()
	}
	return t.file("holidays.csv")
}

const lindenRun = `# The linden share desk. Everything is invented; see README.md.
as_of = "2026-08-13T16:35"
reporting_currency = "GBP"
calendar = "HEDGEROW"

# How options without a closed form are priced. These are the defaults, written
# out: fast, standard or exact; piecewise or escrowed; the error that finite
# differences may make, as a share of the price of the underlying.
[models]
american = "standard"
dividends = "piecewise"
tolerance = 2e-5

[workbook]
max_lines = 10000

[parquet]
compression = "zstd"
`
