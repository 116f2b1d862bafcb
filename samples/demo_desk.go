package samples

import (
	"fmt"
	"math/rand/v2"
	"strings"

	"nightbook/schema"
)

const (
	demoAsOf       = "2026-09-30"
	demoReporting  = "EUR"
	demoCalendar   = "HARBOUR"
	demoExpiries   = 12
	strikesPerSide = 24 // at most, on either side of the spot
)

// random hands out small numbers from a PCG stream, two for each draw.
type random struct {
	pcg  *rand.PCG
	bits uint64
	half bool
}

func newRandom(seed, stream uint64) *random { return &random{pcg: rand.NewPCG(seed, stream)} }

// below returns a number from 0 to n−1. The bias, n in 2³², does not matter
// to a demo, and there is no loop whose length depends on the draw.
func (r *random) below(n int64) int64 {
	r.half = !r.half
	if r.half {
		r.bits = r.pcg.Uint64()
		return int64(r.bits >> 32 * uint64(n) >> 32)
	}
	return int64(r.bits & 0xffffffff * uint64(n) >> 32)
}

// between returns a number from lo to hi.
func (r *random) between(lo, hi int64) int64 { return lo + r.below(hi-lo+1) }

// currency is one of the desk's currencies.
type currency struct {
	code   string
	fx     int64   // millionths of the reporting currency
	rates  []int64 // zero rates at rateTenors, ten-thousandths
	places int     // decimals of a share price
	scale  int64   // a share price in this currency, relative to one in EUR
}

var rateTenors = []string{"1W", "1M", "3M", "6M", "1Y", "2Y", "3Y", "5Y"}

var demoCurrencies = []currency{
	{"EUR", 1_000_000, []int64{195, 197, 200, 206, 214, 226, 236, 251}, 2, 1},
	{"USD", 917_400, []int64{412, 410, 404, 393, 376, 361, 358, 364}, 2, 1},
	{"GBP", 1_168_200, []int64{428, 426, 420, 409, 395, 383, 380, 385}, 2, 1},
	{"CHF", 1_043_500, []int64{48, 49, 52, 56, 63, 74, 83, 96}, 2, 1},
	{"SEK", 88_900, []int64{221, 222, 224, 228, 235, 247, 256, 270}, 2, 10},
	{"JPY", 6_125, []int64{46, 48, 53, 61, 74, 93, 108, 132}, 0, 150},
}

const oneYear = 4 // index of 1Y in rateTenors

// underlying is one instrument of the market snapshot with everything a
// position line on it needs, ready to be copied into the file.
type underlying struct {
	name       string
	kind       schema.Choice
	ccy        *currency
	price      int64 // in 10^-places
	places     int
	yield      int64 // ten-thousandths a year
	smile      smile
	flat       bool // no surface, a flat volatility only
	multiplier string
	expiries   []schema.Date
	days       []string   // expiries, formatted
	strikes    [][]string // by expiry, formatted
}

// book is a node of the book tree; leaves hold lines.
type book struct {
	name, parent, owner string
	underlyings         []*underlying // of a leaf
}

// desk is the whole invented house.
type desk struct {
	american    bool // see Options
	asOf        schema.Date
	expiries    []schema.Date
	expired     string // the expiry that has just passed
	underlyings []*underlying
	books       []book
	leaves      []*book
}

func newDesk(seed uint64) *desk {
	r := newRandom(seed, 1)
	asOf := day(2026, 9, 30)
	d := &desk{asOf: asOf, expiries: expiriesAfter(asOf, demoExpiries), expired: lastExpiry(asOf).String()}
	d.addShares(r)
	d.addIndices(r)
	d.addPairs(r)
	d.addFutures(r)
	for _, u := range d.underlyings {
		u.list(d)
	}
	d.addBooks(r)
	return d
}

func (d *desk) add(u *underlying) { d.underlyings = append(d.underlyings, u) }

func (d *desk) addShares(r *random) {
	for _, a := range strings.Fields("DUN FEL GAR OST QUIL TARN VEX WYN") {
		for _, b := range strings.Fields("SEDGE GORSE FURZE BRAKE RUSH MOSS") {
			c := &demoCurrencies[r.below(int64(len(demoCurrencies)))]
			u := &underlying{name: a + b, kind: schema.Equity, ccy: c, places: c.places, multiplier: "100"}
			u.price = r.between(1200, 24000) * c.scale // hundredths
			if c.places == 0 {
				u.price /= 100
			}
			u.yield = r.between(0, 45) * 10
			u.smile = smile{level: r.between(180, 380) * 10, term: r.between(-20, 30) * 10, skew: r.between(30, 70), wing: r.between(6, 14)}
			u.flat = r.below(12) == 0
			d.add(u)
		}
	}
}

func (d *desk) addIndices(r *random) {
	names := strings.Fields("ALDER40 ROWAN90 HAZEL25 LINDEN60 JUNIPER30 MEDLAR50 HORNBEAM35 TAMARISK20 WHITEBEAM80 SPINDLE15 BUCKTHORN70 WAYFARER45")
	for i, name := range names {
		c := &demoCurrencies[i%len(demoCurrencies)]
		u := &underlying{name: name, kind: schema.Index, ccy: c, places: 2, multiplier: "10"}
		u.price = r.between(60_000, 900_000)
		if c.code == "JPY" {
			u.price = r.between(1_500_000, 4_000_000)
		}
		u.yield = r.between(8, 36) * 10
		u.smile = smile{level: r.between(130, 230) * 10, term: r.between(-10, 25) * 10, skew: r.between(60, 110), wing: r.between(8, 16)}
		u.flat = i == len(names)-1
		d.add(u)
	}
}

// addPairs lists currency pairs at the cross of the fx table, so that a pair
// and the table can never disagree. The yield of a pair is its base
// currency's rate.
func (d *desk) addPairs(r *random) {
	for _, p := range strings.Fields("EUR/USD EUR/GBP EUR/CHF EUR/SEK EUR/JPY GBP/USD GBP/JPY USD/CHF USD/JPY USD/SEK CHF/JPY GBP/CHF") {
		base, quote := demoCurrency(p[:3]), demoCurrency(p[4:])
		u := &underlying{name: p[:3] + p[4:], kind: schema.FX, ccy: quote, places: 4, multiplier: "1000"}
		if quote.code == "JPY" {
			u.places = 2
		}
		u.price = base.fx * pow10(u.places) / quote.fx
		u.yield = base.rates[oneYear]
		u.smile = smile{level: r.between(100, 145) * 10, term: r.between(-12, 12) * 10, skew: r.between(-25, 25), wing: r.between(10, 18)}
		d.add(u)
	}
}

func (d *desk) addFutures(r *random) {
	goods := strings.Fields("BASALT FELDSPAR KELPFIBRE LICHENWAX MARSHOIL PEATGAS REEDPULP SLATEORE THISTLEMEAL TEASEL BOGIRON COCKLELIME FLAXSEEDCAKE SALTGRASS")
	contracts := []struct {
		suffix string
		last   schema.Date
	}{{"-Z27", day(2027, 12, 17)}, {"-Z28", day(2028, 12, 15)}}
	for i, g := range goods {
		c := &demoCurrencies[i%3] // EUR, USD, GBP
		near := r.between(2_000, 90_000)
		s := smile{level: r.between(220, 420) * 10, term: r.between(0, 50) * 10, skew: r.between(-40, 30), wing: r.between(8, 16)}
		for _, k := range contracts {
			u := &underlying{name: g + k.suffix, kind: schema.FuturePrice, ccy: c, places: 2, multiplier: "500", smile: s, price: near}
			for _, x := range d.expiries {
				if x <= k.last {
					u.expiries = append(u.expiries, x)
				}
			}
			d.add(u)
			near = near * r.between(970, 1040) / 1000
		}
	}
}

// list fixes the expiries and strikes that are traded on u: within 30 % of the
// price and about two standard deviations of it.
func (u *underlying) list(d *desk) {
	if u.expiries == nil {
		u.expiries = d.expiries
	}
	step := niceStep(max(u.price*u.smile.level/200_000, 1))
	for _, x := range u.expiries {
		days := int64(x - d.asOf)
		reach := min(u.price*min(2*u.smile.deviation(days), 300_000)/1_000_000, strikesPerSide*step)
		var strikes []string
		for k := (u.price - reach + step - 1) / step * step; k <= u.price+reach; k += step {
			strikes = append(strikes, string(decimal{k, u.places}.append(nil, '.')))
		}
		u.strikes = append(u.strikes, strikes)
		u.days = append(u.days, x.String())
	}
}

func demoCurrency(code string) *currency {
	for i := range demoCurrencies {
		if demoCurrencies[i].code == code {
			return &demoCurrencies[i]
		}
	}
	panic("samples: no such currency")
}

func pow10(n int) int64 {
	p := int64(1)
	for range n {
		p *= 10
	}
	return p
}

// divisions are the second level of the tree: what each trades and how many
// desks and books it has.
var divisions = []struct {
	name, prefix string
	kind         schema.Choice
	desks, books int
}{
	{"SHARES", "SH", schema.Equity, 6, 13},
	{"INDICES", "IX", schema.Index, 4, 12},
	{"CURRENCIES", "CY", schema.FX, 3, 8},
	{"GOODS", "GD", schema.FuturePrice, 3, 9},
}

func (d *desk) addBooks(r *random) {
	d.books = []book{{"HOUSE", "", "head of the house", nil}}
	for _, v := range divisions {
		d.books = append(d.books, book{v.name, "HOUSE", "head of " + strings.ToLower(v.name), nil})
		var choice []*underlying
		for _, u := range d.underlyings {
			if u.kind == v.kind {
				choice = append(choice, u)
			}
		}
		for i := range v.desks {
			name := fmt.Sprintf("%s-%d", v.prefix, i+1)
			d.books = append(d.books, book{name, v.name, "desk " + name, nil})
			for j := range v.books {
				b := book{fmt.Sprintf("%s-%02d", name, j+1), name, fmt.Sprintf("trader %s-%d", name, r.between(1, 4)), nil}
				from := r.below(int64(len(choice)))
				for k := range r.between(3, 9) {
					b.underlyings = append(b.underlyings, choice[(from+k)%int64(len(choice))])
				}
				d.books = append(d.books, b)
			}
		}
	}
	for i := range d.books {
		if len(d.books[i].underlyings) > 0 {
			d.leaves = append(d.leaves, &d.books[i])
		}
	}
}
