package samples

import (
	"bytes"
	"fmt"
	"time"

	"nightbook/schema"
)

// marketFiles returns the market tables of the snapshot.
func (d *desk) marketFiles() []file {
	files := []file{d.underlyingsFile(), ratesFile(), d.volsFile(), fxFile(), d.booksFile(), d.holidaysFile()}
	if d.american {
		files = append(files, d.dividendsFile())
	}
	return files
}

// paysCash reports whether an underlying pays cash dividends, its yield then being
// what they come to in a year.
func (d *desk) paysCash(u *underlying) bool {
	return d.american && u.kind == schema.Equity && u.yield > 0
}

// dividendsFile has each share pay a quarter of its yield every 91 days until
// its last expiry, the first within a quarter.
func (d *desk) dividendsFile() file {
	t := newTable(plain, "underlying", "ex_date", "amount")
	for i, u := range d.underlyings {
		if !d.paysCash(u) {
			continue
		}
		amount := max(1, u.price*u.yield/40_000)
		for x := d.asOf + 1 + schema.Date(i*37%91); x <= u.expiries[len(u.expiries)-1]; x += 91 {
			t.text(u.name)
			t.date(x)
			t.number(decimal{amount, u.places})
			t.end()
		}
	}
	return t.file("dividends.csv")
}

func (d *desk) underlyingsFile() file {
	t := newTable(plain, "underlying", "kind", "currency", "price", "carry_yield", "vol", "observed_at")
	for _, u := range d.underlyings {
		t.text(u.name)
		t.text(schema.Kinds[u.kind])
		t.text(u.ccy.code)
		t.number(decimal{u.price, u.places})
		if u.kind == schema.FuturePrice || d.paysCash(u) {
			t.text("") // a futures price carries nothing
		} else {
			t.number(decimal{u.yield, 4})
		}
		if u.flat {
			t.vol(u.smile.level)
		} else {
			t.text("")
		}
		t.text(demoAsOf + "T17:30")
		t.end()
	}
	return t.file("underlyings.csv")
}

func ratesFile() file {
	t := newTable(plain, "curve", "tenor", "zero_rate")
	for i := range demoCurrencies {
		c := &demoCurrencies[i]
		for j, x := range c.rates {
			t.text(c.code)
			t.text(rateTenors[j])
			t.number(decimal{x, 4})
			t.end()
		}
	}
	return t.file("rates.csv")
}

func (d *desk) volsFile() file {
	t := newTable(plain, "underlying", "expiry", "strike", "vol")
	for _, u := range d.underlyings {
		if u.flat {
			continue
		}
		rate, yield := u.ccy.rates[oneYear], u.yield
		if u.kind == schema.FuturePrice {
			rate, yield = 0, 0 // its forward is the price
		}
		for _, x := range u.expiries {
			days := int64(x - d.asOf)
			forward := forwardPrice(u.price, rate, yield, days)
			for _, n := range smileNodes {
				t.text(u.name)
				t.date(x)
				t.number(decimal{u.smile.strike(forward, days, n), u.places})
				t.vol(u.smile.vol(days, n))
				t.end()
			}
		}
	}
	return t.file("vols.csv")
}

func fxFile() file {
	t := newTable(plain, "currency", "rate")
	for i := range demoCurrencies {
		t.text(demoCurrencies[i].code)
		t.number(decimal{demoCurrencies[i].fx, 6})
		t.end()
	}
	return t.file("fx.csv")
}

func (d *desk) booksFile() file {
	t := newTable(plain, "book", "parent", "owner")
	for _, b := range d.books {
		t.text(b.name)
		t.text(b.parent)
		t.text(b.owner)
		t.end()
	}
	return t.file("books.csv")
}

// holidaysFile closes the invented exchange on new year, the first of May and
// two days at the end of the year, and on the day after as_of, so that one
// business day is two calendar days in every demo.
func (d *desk) holidaysFile() file {
	t := newTable(plain, "calendar", "date")
	days := []schema.Date{d.asOf + 1}
	for y := 2026; y <= 2029; y++ {
		for _, md := range [][2]int{{1, 1}, {5, 1}, {12, 25}, {12, 26}} {
			x := day(y, md[0], md[1])
			if w := x.Time().Weekday(); x > d.asOf && w != time.Saturday && w != time.Sunday {
				days = append(days, x)
			}
		}
	}
	for _, x := range days {
		t.text(demoCalendar)
		t.date(x)
		t.end()
	}
	return t.file("holidays.csv")
}

const demoRun = `# An invented house. Dates are ISO 8601, rates and volatilities decimal.
as_of = "` + demoAsOf + `"
reporting_currency = "` + demoReporting + `"
calendar = "` + demoCalendar + `"
`

func demoReadme(d *desk, o Options, t tally) []byte {
	var b bytes.Buffer
	fmt.Fprintf(&b, `# An invented house, %d lines

Written by the demo generator with seed %d. Every name, price and position is
made up; only the currency codes are real. The same number of lines and the same
seed give the same bytes on every machine.

as_of %s · reporting currency %s · %d underlyings · %d books, %d of them with lines

| instrument | lines |
|---|---:|
`, o.Lines, o.Seed, demoAsOf, demoReporting, len(d.underlyings), len(d.books), len(d.leaves))
	for i, n := range t.instruments {
		if i > 0 {
			fmt.Fprintf(&b, "| %s | %d |\n", schema.Instruments[i], n)
		}
	}
	if o.American {
		b.WriteString("\nOptions on shares and futures are American; shares pay cash dividends.\n")
	}
	fmt.Fprintf(&b, `
Of the options, %d expired on %s and wait for settlement: they come out with
status expired, at their payoff. The day after as_of is a holiday, so the step to
the next business day is two calendar days.
`, t.expired, d.expired)
	if o.Broken == 0 {
		b.WriteString("\nEvery row is valid.\n")
		return b.Bytes()
	}
	b.WriteString("\nBroken on purpose, one fault a line (they are not counted above):\n\n| fault | lines |\n|---|---:|\n")
	for i, f := range faults {
		fmt.Fprintf(&b, "| %s | %d |\n", f.code, t.faults[i])
	}
	return b.Bytes()
}
