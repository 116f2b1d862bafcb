package samples

import (
	"strings"

	"nightbook/schema"
)

// quote is an underlying of a committed desk.
type quote struct {
	name     string
	kind     schema.Choice
	currency string
	price    decimal
	rate     int64 // of its currency, ten-thousandths: for forwards in the generator only
	yield    int64 // ten-thousandths
	flat     int64 // hundredths of a volatility point; 0 is none
	curve    string
	smile    *smile // nil is no surface
	expiries []schema.Date
	clock    string // time of day of the surface's expiries, as T15:00, or ""
	paid     []payment
}

// payment is a cash dividend, in the units of the price.
type payment struct {
	ex     schema.Date
	days   int64 // from as_of
	amount int64
}

// forward returns the forward to an expiry in the units of the price. Cash
// dividends bear no interest here: near enough to hang a smile on.
func (q *quote) forward(days int64) int64 {
	if q.kind == schema.FuturePrice {
		return q.price.n
	}
	f := forwardPrice(q.price.n, q.rate, q.yield, days)
	for _, p := range q.paid {
		if p.days > 0 && p.days <= days {
			f -= p.amount
		}
	}
	return f
}

// step is the distance of listed strikes.
func (q *quote) step() int64 { return niceStep(q.price.n / 50) }

// near returns the listed strike nearest to permille of the price.
func (q *quote) near(permille int64) string {
	s := q.step()
	return q.at((q.price.n*permille/1000 + s/2) / s * s)
}

// at writes n units of the price.
func (q *quote) at(n int64) string { return string(decimal{n, q.price.places}.append(nil, '.')) }

// now writes the price itself.
func (q *quote) now() string { return q.at(q.price.n) }

// surface writes the slices of q into a vols table.
func (q *quote) surface(t *table, asOf schema.Date) {
	for _, x := range q.expiries {
		days := int64(x - asOf)
		for _, d := range smileNodes {
			t.text(q.name)
			t.text(t.day(x) + strings.Replace(q.clock, "T", t.beforeClock(), 1))
			t.number(decimal{q.smile.strike(q.forward(days), days, d), q.price.places})
			t.vol(q.smile.vol(days, d))
			t.end()
		}
	}
}

func underlyingsFile(quotes []*quote, observed string) file {
	t := newTable(plain, "underlying", "kind", "currency", "price", "carry_yield", "vol", "curve", "lot", "observed_at")
	for _, q := range quotes {
		t.text(q.name)
		t.text(schema.Kinds[q.kind])
		t.text(q.currency)
		t.number(q.price)
		if q.yield == 0 {
			t.text("")
		} else {
			t.number(decimal{q.yield, 4})
		}
		if q.flat == 0 {
			t.text("")
		} else {
			t.vol(q.flat)
		}
		t.text(q.curve)
		t.text("1")
		t.text(observed)
		t.end()
	}
	return t.file("underlyings.csv")
}

func volsFile(quotes []*quote, asOf schema.Date) file {
	t := newTable(plain, "underlying", "expiry", "strike", "vol")
	for _, q := range quotes {
		if q.smile != nil {
			q.surface(t, asOf)
		}
	}
	return t.file("vols.csv")
}
