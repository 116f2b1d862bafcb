package samples

import (
	"time"

	"nightbook/schema"
)

// overTheCounter holds what the listed grid does not: odd dates, own
// volatilities, strikes and expiries beyond the ends of the surface.
func (a *alderDesk) overTheCounter() {
	own := func(row map[string]string, vol string) { row["vol"] = vol }
	own(a.option("EU-OTC", a.alder, 150, "1", "put", "4400", "2026-10-02", "client"), "0.1985")
	own(a.option("EU-OTC", a.alder, -220, "1", "call", "5050", "2026-11-27", "client"), "0.1615")
	own(a.option("EU-OTC", a.nettle, 400, "1", "put", "850", "2027-02-12", "client"), "0.224")
	own(a.option("EU-OTC", a.bramble, 90, "1", "call", "3100.25", "2027-09-30", "client"), "0.157")
	a.option("EU-OTC", a.alder, -60, "1", "put", "4650.5", "2026-10-02", "client") // between two slices
	a.option("EU-OTC", a.alder, 75, "1", "call", "4990", "2026-07-03", "client")   // before the first slice
	a.option("EU-OTC", a.alder, 40, "1", "put", "4200", "2028-12-15", "client")    // beyond the last slice
	a.option("EU-OTC", a.alder, 500, "1", "put", "2900", a.september, "tail")      // below the lowest strike
	a.option("EU-OTC", a.alder, -300, "1", "call", "6600", a.september, "tail")    // above the highest
	own(a.option("EU-OTC", a.nettle, 30, "1", "call", "1200", "2032-06-18", "client"), "0.205")
	// both expire before the next business day is over
	a.option("EU-OTC", a.alder, 130, "1", "call", "4790", "2026-06-22", "client")
	a.option("EU-OTC", a.alder, -130, "1", "put", "4830", "2026-06-23", "client")
	row := a.option("PROJECT-LARK", a.bramble, 20, "10", "call", a.bramble.near(1050), a.december, "trial")
	row["remark"] = "book still to be entered in the tree"
}

// treasury funds the desk.
func (a *alderDesk) treasury() {
	a.linear("TREASURY", "EUR", "cash", 2_450_000)
	a.linear("TREASURY", "USD", "cash", -1_180_500)
	a.linear("TREASURY", "JPY", "cash", -96_000_000)
	for _, row := range a.rows[len(a.rows)-3:] {
		row["strategy"] = "funding"
	}
}

// expiring holds what expires at as_of and what has not been taken off yet.
func (a *alderDesk) expiring() {
	today, past := a.asOf.String(), lastExpiry(a.asOf).String()
	a.option("EU-VOL", a.alder, -450, "5", "call", "4750", today, "expiry")
	a.option("EU-VOL", a.alder, -450, "5", "put", "4850", today, "expiry")
	a.option("EU-VOL", a.alder, 300, "5", "call", a.alder.now(), today, "expiry") // on the kink
	a.option("EU-VOL", a.alder, 200, "5", "put", "4600", today, "expiry")
	a.option("US-VOL", a.bramble, 110, "10", "put", "3000", past, "expiry")
	a.option("EU-HEDGE", a.alderFut, 50, "5", "call", a.alderFut.near(990), today, "expiry")
	a.linear("JP-VOL", a.kestrel.name, "forward", 6, "multiplier", "1000", "strike", "31000", "expiry", today)
}

// faulty breaks lines, one way each, and spreads them over the file.
func (a *alderDesk) faulty() {
	fault := func(code schema.RejectCode, row map[string]string, pairs ...string) {
		for i := 0; i < len(pairs); i += 2 {
			row[pairs[i]] = pairs[i+1]
		}
		a.breaks(row, code)
	}
	like := func(q *quote) map[string]string {
		return a.option("EU-FLOW", q, 10*a.between(1, 9), "10", "call", q.near(1000), a.september, "client")
	}
	fault(schema.BadNumber, like(a.alder), "quantity", "12O")
	fault(schema.BadDate, like(a.alder), "expiry", "2026-09-31")
	fault(schema.MissingValue, like(a.nettle), "strike", "")
	fault(schema.UnknownUnderlying, like(a.alder), "underlying", "ALDERX")
	fault(schema.Unsupported, like(a.ostfen), "exercise", "american", "payoff", "asset_digital")
	fault(schema.CurrencyMismatch, like(a.bramble), "currency", "EUR")
	fault(schema.NoVol, like(a.hollow), "remark", "volatility was to follow")
	fault(schema.BadChoice, like(a.nettle), "option_type", "cal")
	fault(schema.DuplicateLineID, like(a.alder), "line_id", "A0007", "remark", "booked again by mistake")
	fault(schema.KindMismatch, a.linear("EU-HEDGE", a.nettle.name, "future", 12), "multiplier", "10")

	a.scatter(15) // the repeated line_id stays behind the line whose name it bears
}

var alderTraders = map[string]string{
	"EU-VOL": "Ilva Rook", "EU-FLOW": "Ilva Rook", "EU-HEDGE": "Ilva Rook", "EU-SHARES": "Odo Fennel", "EU-OTC": "Odo Fennel",
	"US-VOL": "Mirte Sallow", "US-HEDGE": "Mirte Sallow", "JP-VOL": "Benno Tide", "JP-SHARES": "Benno Tide", "TREASURY": "the desk",
}

// alderRates gives EUR and USD by tenor and zero rate, JPY by date and discount
// factor, and a curve of its own for a share that is dear to borrow.
func alderRates(asOf schema.Date) file {
	t := newTable(plain, "curve", "tenor", "date", "zero_rate", "discount_factor")
	row := func(curve, tenor, date string, zero, discount *decimal) {
		t.text(curve)
		t.text(tenor)
		t.text(date)
		for _, d := range []*decimal{zero, discount} {
			if d == nil {
				t.text("")
			} else {
				t.number(*d)
			}
		}
		t.end()
	}
	zeros := func(curve string, tenors []string, rates ...int64) {
		for i, tenor := range tenors {
			row(curve, tenor, "", &decimal{rates[i], 5}, nil)
		}
	}
	zeros("EUR", []string{"1W", "1M", "3M", "6M", "1Y", "2Y", "5Y"}, 1945, 1962, 1990, 2048, 2137, 2259, 2510)
	zeros("USD", []string{"1W", "1M", "3M", "6M", "1Y", "2Y", "5Y"}, 4118, 4101, 4037, 3926, 3760, 3612, 3641)
	zeros("EUR-LENT", []string{"1M", "6M", "2Y"}, 2160, 2250, 2470)
	// discount factors of zero rates from 0.48 % to 1.21 %
	for _, n := range []struct {
		d        schema.Date
		discount int64
	}{{day(2026, 7, 21), 99957927}, {day(2026, 9, 18), 99872930}, {day(2026, 12, 18), 99716184}, {day(2027, 6, 18), 99314252}, {day(2028, 6, 19), 98253029}, {day(2031, 6, 19), 94126257}} {
		row("JPY", "", n.d.String(), nil, &decimal{n.discount, 8})
	}
	return t.file("rates.csv")
}

func alderFX() file {
	t := newTable(plain, "currency", "rate")
	for _, c := range []struct {
		code string
		rate decimal
	}{{"EUR", decimal{1, 0}}, {"USD", decimal{91740, 5}}, {"JPY", decimal{6125, 6}}} {
		t.text(c.code)
		t.number(c.rate)
		t.end()
	}
	return t.file("fx.csv")
}

func alderBooks() file {
	t := newTable(plain, "book", "parent", "owner")
	for _, b := range [][3]string{
		{"ALDER", "", "Hanne Vesper"},
		{"EUROPE", "ALDER", "Ilva Rook"}, {"AMERICA", "ALDER", "Mirte Sallow"}, {"PACIFIC", "ALDER", "Benno Tide"}, {"TREASURY", "ALDER", "Hanne Vesper"},
		{"EU-VOL", "EUROPE", "Ilva Rook"}, {"EU-FLOW", "EUROPE", "Ilva Rook"}, {"EU-HEDGE", "EUROPE", "Ilva Rook"},
		{"EU-SHARES", "EUROPE", "Odo Fennel"}, {"EU-OTC", "EUROPE", "Odo Fennel"},
		{"US-VOL", "AMERICA", "Mirte Sallow"}, {"US-HEDGE", "AMERICA", "Mirte Sallow"},
		{"JP-VOL", "PACIFIC", "Benno Tide"}, {"JP-SHARES", "PACIFIC", "Benno Tide"},
	} {
		t.text(b[0])
		t.text(b[1])
		t.text(b[2])
		t.end()
	}
	return t.file("books.csv")
}

// alderHolidays closes the Monday after as_of, so that the weekend has three
// days. The second calendar is another house's and is not asked for.
func alderHolidays() file {
	t := newTable(plain, "calendar", "date")
	for _, h := range []struct {
		calendar string
		d        schema.Date
	}{
		{"LANTERN", day(2026, 6, 22)}, {"LANTERN", day(2026, 12, 25)}, {"LANTERN", day(2027, 1, 1)},
		{"QUAYSIDE", day(2026, 6, 23)}, {"QUAYSIDE", day(2026, 12, 25)},
	} {
		if w := h.d.Time().Weekday(); w == time.Saturday || w == time.Sunday {
			panic("samples: a holiday on a weekend shows nothing")
		}
		t.text(h.calendar)
		t.date(h.d)
		t.end()
	}
	return t.file("holidays.csv")
}

const alderRun = `# The alder index desk. Everything is invented; see README.md.
as_of = "2026-06-19"
reporting_currency = "EUR"
calendar = "LANTERN"

[workbook]
max_lines = 10000

[parquet]
compression = "zstd"
`
