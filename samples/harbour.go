package samples

import (
	"nightbook/schema"
)

// harbour is a currency and goods-futures desk that reports in USD. Its house
// writes semicolons, decimal commas, days first, volatilities in percent,
// Windows-1252 and headers of its own; as_of and the expiries carry a time of
// day.
func harbour() snapshot {
	h := &harbourDesk{ledger: ledger{prefix: "HB", random: newRandom(1090, 2), columns: []string{
		"line_id", "book", "underlying", "instrument", "quantity", "multiplier", "option_type", "strike", "expiry",
		"vol", "entry_price", "strategy", "Händler", "Notiz"}},
		asOf: day(2026, 10, 14)}
	h.market()
	h.pairs()
	h.contracts()
	h.cash()
	h.today()
	h.faulty()
	for _, row := range h.rows {
		row["Händler"] = harbourTraders[row["book"]]
	}
	s := snapshot{name: "harbour-fx-desk", broken: h.broken}
	for _, f := range []file{
		h.ledger.file(house, harbourHeaders["positions"]), h.underlyingsFile(), harbourRates(), h.volsFile(),
		harbourFX(), harbourBooks(), harbourHolidays()} {
		f.data = latin1(f.data)
		s.files = append(s.files, f)
	}
	s.files = append(s.files, file{"run.toml", []byte(harbourRun)})
	return s
}

var house = dialect{delimiter: ';', point: ',', dayFirst: true, volPercent: true}

type harbourDesk struct {
	ledger
	asOf   schema.Date
	quotes []*quote

	eurusd, gbpusd, usdjpy, eurgbp           *quote
	kelpNear, kelpFar, basalt, marsh         *quote
	reedpulp, teasel                         *quote
	week, month, quarter, half, year         string // currency expiries, cut at 15:00
	goodsNear, goodsMid, goodsFar, goodsLast string // goods expiries, cut at 12:30
}

// Rates of about a year, in ten-thousandths, and currencies in millionths of a
// dollar: the crosses below are theirs.
const (
	usdRate, eurRate, gbpRate, jpyRate = 372, 211, 391, 77
	usdFX, eurFX, gbpFX, jpyFX         = 1_000_000, 1_086_400, 1_271_900, 6_684
)

func (h *harbourDesk) market() {
	fxDays := []schema.Date{day(2026, 10, 21), day(2026, 11, 16), day(2027, 1, 14), day(2027, 4, 14), day(2027, 10, 14)}
	goodsDays := []schema.Date{day(2026, 11, 13), day(2026, 12, 11), day(2027, 2, 12), day(2027, 5, 14)}
	h.week, h.month, h.quarter, h.half, h.year = at(fxDays[0], "15:00"), at(fxDays[1], "15:00"), at(fxDays[2], "15:00"), at(fxDays[3], "15:00"), at(fxDays[4], "15:00")
	h.goodsNear, h.goodsMid, h.goodsFar, h.goodsLast = at(goodsDays[0], "12:30"), at(goodsDays[1], "12:30"), at(goodsDays[2], "12:30"), at(goodsDays[3], "12:30")

	pair := func(name, currency string, price decimal, rate, yield int64, s smile) *quote {
		return &quote{name: name, kind: schema.FX, currency: currency, price: price, rate: rate, yield: yield,
			smile: &s, expiries: fxDays, clock: "T15:00"}
	}
	h.eurusd = pair("EURUSD", "USD", decimal{eurFX / 100, 4}, usdRate, eurRate, smile{740, -40, 18, 14})
	h.gbpusd = pair("GBPUSD", "USD", decimal{gbpFX / 100, 4}, usdRate, gbpRate, smile{815, 35, 26, 15})
	h.usdjpy = pair("USDJPY", "JPY", decimal{usdFX * 100 / jpyFX, 2}, jpyRate, usdRate, smile{965, 60, 41, 13})
	h.eurgbp = pair("EURGBP", "GBP", decimal{eurFX * 10_000 / gbpFX, 4}, gbpRate, eurRate, smile{590, -25, -14, 16})

	good := func(name, currency string, price int64, s *smile, expiries []schema.Date) *quote {
		return &quote{name: name, kind: schema.FuturePrice, currency: currency, price: decimal{price, 2}, smile: s, expiries: expiries, clock: "T12:30"}
	}
	kelp := smile{2640, 260, -22, 12}
	h.kelpNear = good("KELP-DEC26", "USD", 41_275, &kelp, goodsDays[:2])
	h.kelpFar = good("KELP-JUN27", "USD", 42_950, &kelp, goodsDays)
	h.basalt = good("BASALT-MAR27", "EUR", 8_864, &smile{3120, 180, 31, 11}, goodsDays[:3])
	h.marsh = good("MARSHOIL-JUN27", "GBP", 6_142, &smile{3685, 420, 38, 12}, goodsDays)
	h.reedpulp = good("REEDPULP-MAR27", "USD", 118_300, nil, nil)
	h.reedpulp.flat = 2450
	h.teasel = good("TEASEL-MAR27", "EUR", 2_718, nil, nil)
	h.teasel.flat, h.teasel.curve = 2900, "EUR-PIT" // a curve that nobody delivers
	h.quotes = []*quote{h.eurusd, h.gbpusd, h.usdjpy, h.eurgbp, h.kelpNear, h.kelpFar, h.basalt, h.marsh, h.reedpulp, h.teasel}
}

// at joins a day and a time of day.
func at(d schema.Date, clock string) string { return d.String() + "T" + clock }

// offset writes the strike that lies permille from the price, to the tick at
// which currency options are agreed.
func (q *quote) offset(permille int64) string {
	tick := niceStep(q.price.n / 400)
	return q.at((q.price.n*(1000+permille)/1000 + tick/2) / tick * tick)
}

// pairs is the currency side: strangles sold, risk reversals held for
// clients, forwards against them.
func (h *harbourDesk) pairs() {
	for i, q := range []*quote{h.eurusd, h.gbpusd, h.usdjpy, h.eurgbp} {
		book := []string{"MAJORS", "MAJORS", "ASIA", "CROSSES"}[i]
		for j, x := range []string{h.week, h.month, h.quarter, h.half} {
			w := []int64{8, 16, 28, 40}[j]
			n := h.between(4, 12)
			h.option(book, q, -n, "1000000", "call", q.offset(w), x, "strangle")
			h.option(book, q, -n, "1000000", "put", q.offset(-w), x, "strangle")
		}
		n := h.between(2, 6)
		h.option("CLIENTS", q, n, "1000000", "put", q.offset(-25), h.quarter, "risk_reversal")
		h.option("CLIENTS", q, -n, "1000000", "call", q.offset(25), h.quarter, "risk_reversal")
		h.option(book, q, n, "1000000", "call", q.offset(0), h.year, "vega")
		h.option(book, q, n, "1000000", "put", q.offset(0), h.year, "vega")
		h.linear(book, q.name, "forward", h.between(-5, 5)*2+1, "multiplier", "1000000", "strike", q.offset(3), "expiry", h.quarter)
	}
	// dates without a time of day count whole days
	h.option("CLIENTS", h.eurusd, 3, "1000000", "call", h.eurusd.offset(12), "2026-12-02", "outright")
	h.option("CLIENTS", h.usdjpy, -4, "1000000", "put", h.usdjpy.offset(-20), "2027-02-24", "outright")
	// an own volatility, and a strike beyond the surface
	h.option("CLIENTS", h.gbpusd, 2, "1000000", "put", "1.21", h.half, "outright")["vol"] = "8.45"
	h.option("CLIENTS", h.eurgbp, 5, "1000000", "call", "0.99", h.quarter, "tail")
	h.linear("CLIENTS", h.eurusd.name, "forward", -6, "multiplier", "1000000", "strike", "1.0911", "expiry", "2029-10-15")
}

// contracts is the goods side: positions in the futures, producers' options
// around them.
func (h *harbourDesk) contracts() {
	lots := func(book string, q *quote, multiplier string, n int64) {
		h.linear(book, q.name, "future", n, "multiplier", multiplier, "entry_price", q.at(q.price.n-h.between(-90, 90)))
	}
	fence := func(book string, q *quote, multiplier string, expiries ...string) {
		for _, x := range expiries {
			n := h.between(3, 15) * 5
			h.option(book, q, -n, multiplier, "call", q.near(1080), x, "producer")
			h.option(book, q, n, multiplier, "put", q.near(920), x, "producer")
			h.option(book, q, -n/2, multiplier, "put", q.near(840), x, "producer")
		}
	}
	lots("KELP", h.kelpNear, "50", 120)
	lots("KELP", h.kelpFar, "50", -145)
	fence("KELP", h.kelpNear, "50", h.goodsNear, h.goodsMid)
	fence("KELP", h.kelpFar, "50", h.goodsMid, h.goodsFar, h.goodsLast)
	h.option("KELP", h.kelpFar, 30, "50", "call", "430", at(day(2027, 3, 19), "12:30"), "client") // between two slices
	h.option("KELP", h.kelpFar, -30, "50", "put", "300", h.goodsNear, "tail")
	lots("STONE", h.basalt, "1000", -18)
	h.linear("STONE", h.basalt.name, "future", 5, "multiplier", "1000")
	fence("STONE", h.basalt, "1000", h.goodsNear, h.goodsMid, h.goodsFar)
	h.linear("STONE", h.basalt.name, "forward", 7, "multiplier", "1000", "strike", "87.9", "expiry", at(day(2027, 3, 12), "12:30"))
	h.option("STONE", h.reedpulp, 14, "20", "put", h.reedpulp.near(950), h.goodsMid, "trial")
	h.option("STONE", h.reedpulp, -9, "20", "call", h.reedpulp.near(1060), h.goodsFar, "trial")
	// one point of this surface is broken: only what does not need it is priced
	lots("MARSH", h.marsh, "1000", 26)
	h.option("MARSH", h.marsh, -12, "1000", "put", h.marsh.near(900), h.goodsMid, "producer")["vol"] = "38.2"
	for _, x := range []string{h.goodsNear, h.goodsMid, h.goodsFar} {
		h.breaks(h.option("MARSH", h.marsh, 10, "1000", "call", h.marsh.near(1000), x, "producer"), schema.BadMarketData)
	}
}

func (h *harbourDesk) cash() {
	for _, c := range []struct {
		currency string
		amount   int64
	}{{"USD", 3_400_000}, {"EUR", -1_250_000}, {"GBP", 815_000}, {"JPY", -240_000_000}} {
		h.linear("FUNDING", c.currency, "cash", c.amount)["strategy"] = "funding"
	}
}
