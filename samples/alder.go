package samples

import (
	"strconv"

	"nightbook/schema"
)

// alder is an equity-index options desk that reports in EUR and holds risk in
// EUR, USD and JPY. as_of is an expiry Friday before a long weekend: the next
// business day is four calendar days away.
func alder() snapshot {
	a := &alderDesk{ledger: ledger{prefix: "A", random: newRandom(4812, 1), columns: []string{
		"line_id", "book", "underlying", "instrument", "quantity", "multiplier", "currency", "option_type", "exercise", "payoff", "strike",
		"expiry", "vol", "mark", "entry_price", "strategy", "trader", "trade_ref", "remark"}},
		asOf: day(2026, 6, 19)}
	a.market()
	a.euVol()
	a.euHedge()
	a.euShares()
	a.usVol()
	a.jpVol()
	a.overTheCounter()
	a.treasury()
	a.expiring()
	a.faulty()
	for _, row := range a.rows { // the house's own columns
		row["trader"] = alderTraders[row["book"]]
		row["trade_ref"] = "T26-" + row["line_id"][1:] + strconv.FormatInt(a.between(10, 99), 10)
	}
	return snapshot{name: "alder-index-desk", broken: a.broken, files: []file{
		a.ledger.file(plain, nil), underlyingsFile(a.quotes, "2026-06-19T17:35"), alderRates(a.asOf), volsFile(a.quotes, a.asOf),
		alderFX(), alderBooks(), alderHolidays(), {"run.toml", []byte(alderRun)}}}
}

type alderDesk struct {
	ledger
	asOf   schema.Date
	quotes []*quote

	alder, bramble, kestrel, nettle       *quote // indices
	ostfen, quildale, tarnwick, hollow    *quote // shares
	alderFut, brambleFut, kestrelFut      *quote // futures on the indices
	eur, usd, jpy                         int64  // rates of about a year, ten-thousandths
	july, august, september, december, y1 string
}

func (a *alderDesk) market() {
	a.eur, a.usd, a.jpy = 214, 376, 69
	expiries := expiriesAfter(a.asOf, 8)
	a.july, a.august, a.september = expiries[0].String(), expiries[1].String(), expiries[2].String()
	a.december, a.y1 = expiries[5].String(), expiries[7].String()

	a.alder = &quote{name: "ALDER-X", kind: schema.Index, currency: "EUR", price: decimal{481235, 2}, rate: a.eur, yield: 260,
		smile: &smile{1720, 180, 88, 12}, expiries: expiries}
	a.bramble = &quote{name: "BRAMBLE-X", kind: schema.Index, currency: "USD", price: decimal{296410, 2}, rate: a.usd, yield: 140,
		smile: &smile{1580, 210, 96, 13}, expiries: expiries}
	a.kestrel = &quote{name: "KESTREL-X", kind: schema.Index, currency: "JPY", price: decimal{3148055, 2}, rate: a.jpy, yield: 190,
		smile: &smile{2010, -90, 74, 11}, expiries: expiries[:6]}
	a.nettle = &quote{name: "NETTLE-X", kind: schema.Index, currency: "EUR", price: decimal{91240, 2}, rate: a.eur, yield: 310, flat: 2130}
	a.ostfen = &quote{name: "OSTFEN", kind: schema.Equity, currency: "EUR", price: decimal{6428, 2}, rate: a.eur, yield: 180, flat: 2740, curve: "EUR-LENT"}
	a.quildale = &quote{name: "QUILDALE", kind: schema.Equity, currency: "USD", price: decimal{14195, 2}, rate: a.usd, yield: 60,
		smile: &smile{3150, 340, 52, 9}, expiries: expiries[:6]}
	a.tarnwick = &quote{name: "TARNWICK", kind: schema.Equity, currency: "JPY", price: decimal{2915, 0}, rate: a.jpy, yield: 210, flat: 3090}
	a.hollow = &quote{name: "HOLLOWMERE", kind: schema.Equity, currency: "EUR", price: decimal{2340, 2}, rate: a.eur}

	days := int64(expiries[2] - a.asOf)
	future := func(on *quote, name string, vol int64) *quote {
		f := &quote{name: name, kind: schema.FuturePrice, currency: on.currency, price: decimal{on.forward(days), on.price.places}, flat: vol}
		return f
	}
	a.alderFut = future(a.alder, "ALDER-X-U6", 0)
	a.alderFut.smile, a.alderFut.expiries = a.alder.smile, expiries[:3]
	a.brambleFut = future(a.bramble, "BRAMBLE-X-U6", 1690)
	a.kestrelFut = future(a.kestrel, "KESTREL-X-U6", 0)
	a.kestrelFut.yield = 190 // means nothing on a future: shown to be ignored

	a.quotes = []*quote{a.alder, a.bramble, a.kestrel, a.nettle, a.ostfen, a.quildale, a.tarnwick, a.hollow, a.alderFut, a.brambleFut, a.kestrelFut}
}

// euVol sells strangles on ALDER-X in every expiry up to a year and buys the
// longest back: short gamma in front, long vega behind.
func (a *alderDesk) euVol() {
	for i, x := range []string{a.july, a.august, a.september, a.december} {
		size := []int64{900, 700, 500, 350}[i]
		w := []int64{40, 60, 75, 110}[i]
		a.option("EU-VOL", a.alder, -size-a.below(5)*10, "5", "put", a.alder.near(1000-w), x, "strangle")
		a.option("EU-VOL", a.alder, -size-a.below(5)*10, "5", "call", a.alder.near(1000+w), x, "strangle")
		a.option("EU-VOL", a.alder, size/2, "5", "put", a.alder.near(1000-2*w), x, "wings")
		a.option("EU-VOL", a.alder, size/2, "5", "call", a.alder.near(1000+2*w), x, "wings")
	}
	for _, side := range []string{"put", "call"} {
		a.option("EU-VOL", a.alder, 900, "5", side, a.alder.near(1000), a.y1, "calendar")
		a.option("EU-VOL", a.alder, -380, "5", side, a.alder.near(1000), a.july, "calendar")
	}
	// clients of the flow book
	for i := range int64(16) {
		q := a.alder
		if i%3 == 2 {
			q = a.nettle
		}
		side := []string{"call", "put"}[a.below(2)]
		x := []string{a.july, a.august, a.september, a.december, a.y1}[a.below(5)]
		a.option("EU-FLOW", q, a.between(-12, 12)*10+5, "10", side, q.near(a.between(86, 114)*10), x, "client")
	}
}

// euHedge flattens the delta of EU-VOL and EU-FLOW with futures, options on
// the future and two forwards.
func (a *alderDesk) euHedge() {
	f := a.alderFut
	a.linear("EU-HEDGE", f.name, "future", 520, "multiplier", "5", "entry_price", f.at(f.price.n-3150))
	a.linear("EU-HEDGE", f.name, "future", -95, "multiplier", "5", "entry_price", f.at(f.price.n+1825))
	a.linear("EU-HEDGE", f.name, "future", 40, "multiplier", "5")
	for _, x := range []string{a.july, a.august, a.september} {
		a.option("EU-HEDGE", f, 60+a.below(8)*5, "5", "put", f.near(940), x, "gap_cover")
		a.option("EU-HEDGE", f, -a.between(4, 9)*5, "5", "call", f.near(1060), x, "gap_cover")
	}
	a.linear("EU-HEDGE", a.nettle.name, "forward", -180, "multiplier", "10", "strike", a.nettle.at(91500), "expiry", a.september)
	a.linear("EU-HEDGE", a.alder.name, "forward", 25, "multiplier", "5", "strike", a.alder.at(480000), "expiry", a.december)
}

// euShares writes calls on the shares it holds.
func (a *alderDesk) euShares() {
	a.linear("EU-SHARES", a.ostfen.name, "stock", 60_000, "mark", "64.31")
	a.linear("EU-SHARES", a.hollow.name, "stock", -15_500)
	for i, x := range []string{a.july, a.august, a.september} {
		row := a.option("EU-SHARES", a.ostfen, -200, "100", "call", a.ostfen.near(1040+int64(i)*20), x, "overwrite")
		row["mark"] = []string{"1.14", "1.58", "1.9"}[i]
		a.option("EU-SHARES", a.ostfen, 150, "100", "put", a.ostfen.near(920-int64(i)*20), x, "collar")
	}
	row := a.option("EU-SHARES", a.ostfen, 80, "100", "put", "60", a.december, "collar")
	row["remark"] = "client said: \"roll it\",\nthen \"leave it\""
	row = a.option("EU-SHARES", a.hollow, -120, "100", "call", "25", a.september, "overwrite")
	row["vol"], row["remark"] = "0.335", "no listed options; own volatility"
}

// usVol is short the index's volatility and long that of one of its shares.
func (a *alderDesk) usVol() {
	for _, x := range []string{a.july, a.august, a.september, a.december} {
		a.option("US-VOL", a.bramble, -a.between(20, 30)*10, "10", "call", a.bramble.near(1000), x, "dispersion")
		a.option("US-VOL", a.bramble, -a.between(20, 30)*10, "10", "put", a.bramble.near(1000), x, "dispersion")
		a.option("US-VOL", a.quildale, a.between(50, 70)*10, "100", "call", a.quildale.near(1000), x, "dispersion")
		a.option("US-VOL", a.quildale, a.between(50, 70)*10, "100", "put", a.quildale.near(980), x, "dispersion")
		a.option("US-VOL", a.bramble, a.between(10, 20)*10, "10", "put", a.bramble.near(920), x, "crash")
	}
	a.linear("US-HEDGE", a.quildale.name, "stock", -21_400, "currency", "USD")
	a.linear("US-HEDGE", a.brambleFut.name, "future", 280, "multiplier", "10", "entry_price", a.brambleFut.at(a.brambleFut.price.n+640))
	for _, k := range []int64{940, 970, 1030} {
		side := "put"
		if k > 1000 {
			side = "call"
		}
		a.option("US-HEDGE", a.brambleFut, a.between(-9, 9)*10+5, "10", side, a.brambleFut.near(k), a.august, "gap_cover")
	}
	a.linear("US-HEDGE", a.bramble.name, "forward", -35, "multiplier", "10", "strike", a.bramble.at(299000), "expiry", a.december)
}

// jpVol holds risk reversals: long calls against short puts.
func (a *alderDesk) jpVol() {
	for _, x := range []string{a.july, a.august, a.september, a.december} {
		n := a.between(12, 20) * 10
		a.option("JP-VOL", a.kestrel, n, "1000", "call", a.kestrel.near(1060), x, "risk_reversal")
		a.option("JP-VOL", a.kestrel, -n, "1000", "put", a.kestrel.near(940), x, "risk_reversal")
	}
	for _, side := range []string{"call", "put"} {
		a.option("JP-VOL", a.kestrel, -85, "1000", side, a.kestrel.near(1000), a.august, "straddle")
		a.option("JP-SHARES", a.tarnwick, 240, "100", side, a.tarnwick.near(1000), a.september, "straddle")
		a.option("JP-SHARES", a.tarnwick, -240, "100", side, a.tarnwick.near(1000), a.december, "straddle")
	}
	a.linear("JP-SHARES", a.tarnwick.name, "stock", 8_800)
	a.linear("JP-VOL", a.kestrelFut.name, "future", -330, "multiplier", "1000", "entry_price", a.kestrelFut.at(a.kestrelFut.price.n-12_500))
	a.linear("JP-VOL", a.kestrelFut.name, "future", 3, "multiplier", "1000")
}
