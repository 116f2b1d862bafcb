package samples

import "nightbook/schema"

// linden is a share desk that reports in GBP: American options on shares that
// pay cash dividends. as_of is a Thursday in the afternoon, and the Friday is a
// holiday of the desk's calendar but not of every exchange: one share goes ex on
// it, another on the Monday, the next business day.
func linden() snapshot {
	l := &lindenDesk{ledger: ledger{prefix: "LN", random: newRandom(2718, 3), columns: []string{
		"line_id", "book", "underlying", "instrument", "quantity", "multiplier", "currency", "option_type", "exercise", "payoff", "strike",
		"expiry", "vol", "mark", "payout", "barrier_type", "barrier", "entry_price", "strategy", "desk_note"}},
		asOf: day(2026, 8, 13)}
	l.market()
	l.ladders()
	l.overwrite()
	l.europeans()
	l.index()
	l.delta()
	l.putsPastTheirBoundary()
	l.callsBeforeAnExDate()
	l.oddDates()
	l.treasury()
	l.expired()
	l.faulty()
	return snapshot{name: "linden-share-desk", broken: l.broken, thousands: true, files: []file{
		l.ledger.file(plain, nil), underlyingsFile(l.quotes, "2026-08-13T16:30"), lindenRates(), volsFile(l.quotes, l.asOf), l.dividendsFile(),
		l.quotesFile(), lindenFX(), lindenBooks(), lindenHolidays(), {"run.toml", []byte(lindenRun)}}}
}

type lindenDesk struct {
	ledger
	asOf   schema.Date
	quotes []*quote

	harrowfell, pennywhin, slatewick, oxlipton *quote // shares in GBP
	teaselholt, larkmoor                       *quote // in USD
	wraybourn, kilnshaw                        *quote // in EUR
	linden, future                             *quote // the index and its future
	expiries                                   []string
}

// Rates of about a year, ten-thousandths.
const lindenGBP, lindenUSD, lindenEUR = 388, 402, 219

func (l *lindenDesk) market() {
	days := expiriesAfter(l.asOf, 8)
	for _, x := range days {
		l.expiries = append(l.expiries, x.String())
	}
	share := func(name, currency string, price, rate int64, s *smile) *quote {
		return &quote{name: name, kind: schema.Equity, currency: currency, price: decimal{price, 2}, rate: rate, smile: s, expiries: days}
	}
	pays := func(q *quote, ex schema.Date, amount int64) {
		q.paid = append(q.paid, payment{ex, int64(ex - l.asOf), amount})
	}
	l.harrowfell = share("HARROWFELL", "GBP", 2418, lindenGBP, &smile{2460, 240, 48, 9})
	for _, ex := range []schema.Date{day(2026, 9, 10), day(2026, 12, 10), day(2027, 3, 11), day(2027, 6, 10)} {
		pays(l.harrowfell, ex, 21)
	}
	l.pennywhin = share("PENNYWHIN", "GBP", 4135, lindenGBP, &smile{2180, 310, 41, 10})
	pays(l.pennywhin, day(2026, 8, 14), 130) // tomorrow
	pays(l.pennywhin, day(2027, 8, 13), 134)
	l.slatewick = share("SLATEWICK", "GBP", 1762, lindenGBP, &smile{2890, 180, 55, 9})
	pays(l.slatewick, day(2026, 9, 18), 44) // on the day of an expiry
	pays(l.slatewick, day(2027, 3, 19), 31)
	l.teaselholt = share("TEASELHOLT", "USD", 9640, lindenUSD, &smile{2740, 260, 50, 9})
	for _, ex := range []schema.Date{day(2026, 8, 17), day(2026, 11, 16), day(2027, 2, 15), day(2027, 5, 17)} {
		pays(l.teaselholt, ex, 55) // the first on the next business day
	}
	l.larkmoor = share("LARKMOOR", "USD", 6375, lindenUSD, &smile{4120, 520, 38, 8})
	l.wraybourn = share("WRAYBOURN", "EUR", 5220, lindenEUR, &smile{2330, 190, 46, 10})
	l.wraybourn.yield = 150 // to borrow, beside its cash dividends
	pays(l.wraybourn, day(2026, 11, 5), 92)
	pays(l.wraybourn, day(2027, 5, 6), 93)
	l.kilnshaw = share("KILNSHAW", "EUR", 3310, lindenEUR, nil)
	l.kilnshaw.flat, l.kilnshaw.yield = 3050, 640 // dear to borrow
	pays(l.kilnshaw, l.asOf, 60)                  // today: the price has dropped
	pays(l.kilnshaw, day(2027, 8, 12), 62)        // after every expiry
	l.oxlipton = share("OXLIPTON", "GBP", 890, lindenGBP, nil)
	l.oxlipton.flat = 3320
	l.linden = &quote{name: "LINDEN-X", kind: schema.Index, currency: "GBP", price: decimal{347180, 2}, rate: lindenGBP, yield: 330,
		smile: &smile{1480, 160, 92, 12}, expiries: days}
	l.future = &quote{name: "LINDEN-X-Z6", kind: schema.FuturePrice, currency: "GBP", price: decimal{l.linden.forward(int64(days[4] - l.asOf)), 2},
		smile: l.linden.smile, expiries: days[:5]}
	l.quotes = []*quote{l.harrowfell, l.pennywhin, l.slatewick, l.oxlipton, l.teaselholt, l.larkmoor, l.wraybourn, l.kilnshaw, l.linden, l.future}
}

// american adds a line of an American option.
func (l *lindenDesk) american(book string, q *quote, quantity int64, optionType, strike, expiry, strategy string) map[string]string {
	row := l.option(book, q, quantity, "100", optionType, strike, expiry, strategy)
	row["exercise"] = "american"
	return row
}

// ladders are the strikes of the listed American options: below the price puts,
// above it calls, at it both; some sold, some bought.
func (l *lindenDesk) ladders() {
	for _, s := range []struct {
		book     string
		q        *quote
		expiries []int
		size     int64
	}{
		{"UK-VOL", l.harrowfell, []int{0, 1, 2, 4, 6}, 40},
		{"UK-VOL", l.slatewick, []int{0, 1, 2, 4, 6}, 60},
		{"US-VOL", l.teaselholt, []int{0, 1, 3, 5}, 12},
		{"US-VOL", l.larkmoor, []int{0, 1, 2, 4}, 15},
		{"EU-VOL", l.wraybourn, []int{0, 2, 3, 7}, 20},
		{"EU-VOL", l.kilnshaw, []int{1, 4}, 25},
	} {
		for _, i := range s.expiries {
			for _, k := range []struct {
				permille   int64
				optionType string
			}{{900, "put"}, {950, "put"}, {1000, "put"}, {1000, "call"}, {1050, "call"}, {1100, "call"}} {
				n := s.size + l.below(s.size)
				if k.permille != 950 && k.permille != 1050 { // the wings and the middle are sold, the strikes between bought
					n = -n
				}
				l.american(s.book, s.q, n, k.optionType, s.q.near(k.permille), l.expiries[i], "ladder")
			}
		}
	}
}

// overwrite writes calls on the shares it holds and buys puts below them.
func (l *lindenDesk) overwrite() {
	for i, q := range []*quote{l.pennywhin, l.harrowfell, l.slatewick} {
		l.linear("UK-OVERWRITE", q.name, "stock", []int64{85_000, 120_000, 64_000}[i])["strategy"] = "overwrite"
	}
	for i, x := range []int{0, 1, 2, 4, 6} {
		l.american("UK-OVERWRITE", l.pennywhin, -l.between(10, 20)*10, "call", l.pennywhin.near(1020+int64(i)*15), l.expiries[x], "overwrite")
		l.american("UK-OVERWRITE", l.pennywhin, l.between(8, 15)*10, "put", l.pennywhin.near(970-int64(i)*15), l.expiries[x], "overwrite")
	}
	l.linear("US-SHARES", l.teaselholt.name, "stock", -14_500, "mark", "96.38")
	l.linear("US-SHARES", l.larkmoor.name, "stock", 9_200)
	l.linear("EU-SHARES", l.wraybourn.name, "stock", 31_000)
	l.linear("EU-SHARES", l.kilnshaw.name, "stock", -22_400)
}

// europeans are options on payers that cannot be exercised early, beside
// forwards to the same days.
func (l *lindenDesk) europeans() {
	for i, q := range []*quote{l.harrowfell, l.pennywhin, l.slatewick, l.teaselholt, l.wraybourn} {
		book := []string{"UK-SHARES", "UK-SHARES", "UK-SHARES", "US-SHARES", "EU-SHARES"}[i]
		x := l.expiries[[]int{4, 4, 4, 3, 7}[i]]
		n := l.between(5, 20) * 1000
		l.option(book, q, n, "1", "call", q.near(1020), x, "conversion")
		l.option(book, q, -n, "1", "put", q.near(1020), x, "conversion")
		row := l.linear(book, q.name, "forward", -n, "strike", q.near(1020), "expiry", x)
		row["strategy"] = "conversion"
	}
	l.option("EU-SHARES", l.kilnshaw, 4000, "1", "put", "31", l.expiries[3], "client")
	l.option("US-SHARES", l.larkmoor, -2500, "1", "call", "72", l.expiries[5], "client")
	// dividends bought and sold: forwards before and after an ex-date
	l.linear("UK-SHARES", l.slatewick.name, "forward", 20_000, "strike", "17.7", "expiry", "2026-09-17")
	l.linear("UK-SHARES", l.slatewick.name, "forward", -20_000, "strike", "17.3", "expiry", l.expiries[1])
	l.linear("UK-SHARES", l.pennywhin.name, "forward", 8_000, "strike", "40.1", "expiry", "2026-08-17")
	l.linear("EU-SHARES", l.kilnshaw.name, "forward", 15_000, "strike", "32.9", "expiry", l.expiries[4])
}

// index holds options on the index and on its future, and the future.
func (l *lindenDesk) index() {
	for _, i := range []int{0, 1, 4, 6} {
		n := l.between(2, 9) * 5
		for k, side := range []string{"put", "call"} {
			row := l.option("INDEX", l.linden, -n, "10", side, l.linden.near(960+int64(k)*80), l.expiries[i], "strangle")
			row["exercise"] = "american"
			l.option("INDEX", l.linden, n, "10", side, l.linden.near(930+int64(k)*140), l.expiries[i], "strangle")["exercise"] = "european"
		}
	}
	for k, i := range []int{0, 2, 4} {
		for _, side := range []string{"put", "call"} {
			row := l.option("INDEX", l.future, l.between(-6, 6)*5+2, "10", side, l.future.near(980+int64(k)*20), l.expiries[i], "gap_cover")
			row["exercise"] = "american"
		}
	}
	l.linear("INDEX", l.future.name, "future", 84, "multiplier", "10", "entry_price", l.future.at(l.future.price.n-1840))
	l.linear("INDEX", l.future.name, "future", -31, "multiplier", "10")
	l.linear("INDEX", l.linden.name, "forward", 12, "multiplier", "10", "strike", l.linden.at(348500), "expiry", l.expiries[4])
}

func (l *lindenDesk) treasury() {
	for i, c := range []string{"GBP", "USD", "EUR"} {
		l.linear("TREASURY", c, "cash", []int64{-3_150_000, 640_000, -415_500}[i])["strategy"] = "funding"
	}
}

// delta trims what the ladders leave open.
func (l *lindenDesk) delta() {
	for i, q := range []*quote{l.harrowfell, l.slatewick, l.teaselholt, l.larkmoor, l.wraybourn} {
		book := []string{"UK-VOL", "UK-VOL", "US-VOL", "US-VOL", "EU-VOL"}[i]
		l.linear(book, q.name, "stock", l.between(-40, 40)*100+50)
	}
}

// at100 writes a strike given in hundredths.
func at100(n int64) string { return string(decimal{n, 2}.append(nil, '.')) }

func (l *lindenDesk) dividendsFile() file {
	t := newTable(plain, "underlying", "ex_date", "amount")
	row := func(name, ex, amount string) {
		t.text(name)
		t.text(ex)
		t.text(amount)
		t.end()
	}
	for _, q := range l.quotes {
		for _, p := range q.paid {
			row(q.name, p.ex.String(), at100(p.amount))
		}
	}
	row("OXLIPTON", "2026-10-08", "0,17")    // a decimal comma: lines on OXLIPTON are refused
	row("HARROWFEL", "2026-09-10", "0.21")   // a letter is missing: a warning
	row("LINDEN-X-Z6", "2026-11-05", "12.5") // a future pays nothing: a warning
	row("SLATEWICK", "2026-05-08", "0.4")    // long past
	return t.file("dividends.csv")
}

// quotesFile holds quotes of American options on SLATEWICK, as a market maker
// showed them that afternoon; the last ones are of no use.
func (l *lindenDesk) quotesFile() file {
	t := newTable(plain, "underlying", "expiry", "strike", "option_type", "exercise", "bid", "ask")
	for _, q := range slatewickQuotes {
		t.text(l.slatewick.name)
		t.text(l.expiries[q.expiry])
		t.text(at100(q.strike))
		t.text(q.optionType)
		t.text(q.exercise)
		t.text(at100(q.bid))
		t.text(at100(q.ask))
		t.end()
	}
	return t.file("quotes.csv")
}
