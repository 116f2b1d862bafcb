package samples

import (
	"io"
	"strconv"

	"nightbook/schema"
)

const perMillion = 1_000_000

// tally counts what was written.
type tally struct {
	instruments [6]int64 // by schema instrument; broken lines are not counted
	expired     int64
	faults      [numFaults]int64
}

var strategies = []string{"outright", "collar", "put_spread", "call_spread", "strangle", "calendar", "overwrite", "dispersion"}

// cells are the texts of a line, in the order of the header. They point into
// the desk's own strings: a line costs no allocation.
type cells struct {
	id                           int64
	book, underlying, instrument string
	quantity                     int64
	multiplier                   string
	optionType, strike, expiry   string
	strategy                     string
	styled                       bool // there is a column for it
	style                        string
}

const demoHeader = "line_id,book,underlying,instrument,quantity,multiplier,option_type,strike,expiry,strategy"

// writePositions streams the position file. Lines stand book by book, as a
// position system exports them.
func (d *desk) writePositions(w io.Writer, o Options) (tally, error) {
	var t tally
	header := demoHeader + "\n"
	if d.american {
		header = demoHeader + ",exercise\n"
	}
	if _, err := io.WriteString(w, header); err != nil {
		return t, err
	}
	r := newRandom(o.Seed, 2)
	broken := newRandom(o.Seed, 3) // a stream of its own: faults do not change the other lines
	leaves := int64(len(d.leaves))
	buf := make([]byte, 0, 256)
	var c cells // outside the loop: it escapes into the faults, once
	for i := range o.Lines {
		c = cells{id: i + 1, styled: d.american}
		b := d.leaves[share(i, o.Lines, leaves)]
		c.book = b.name
		kind := d.fill(&c, b, r)
		if i > 0 && o.Broken > 0 && broken.below(perMillion) < o.Broken {
			f := broken.below(numFaults)
			buf = faults[f].append(buf[:0], &c)
			t.faults[f]++
		} else {
			buf = c.append(buf[:0])
			t.instruments[kind]++
			if c.expiry == d.expired {
				t.expired++
			}
		}
		if _, err := w.Write(buf); err != nil {
			return t, err
		}
	}
	return t, nil
}

// share spreads lines evenly over n books: i·n/lines without overflow for any
// number of lines that fits a disk.
func share(i, lines, n int64) int64 {
	if lines <= 1<<40 {
		return i * n / lines
	}
	return i / (lines/n + 1)
}

// fill draws one line of book b: 92 % options, the rest what hedges and funds
// them.
func (d *desk) fill(c *cells, b *book, r *random) schema.Choice {
	u := b.underlyings[r.below(int64(len(b.underlyings)))]
	c.underlying = u.name
	c.strategy = strategies[r.below(int64(len(strategies)))]
	c.quantity = r.between(1, 400) * 5
	if r.below(100) < 55 { // the desk has sold more than it has bought
		c.quantity = -c.quantity
	}
	n := r.below(1000)
	switch {
	case n < 920:
		c.instrument, c.multiplier = "option", u.multiplier
		i := r.below(int64(len(u.expiries)))
		c.expiry = u.days[i]
		c.strike = u.strikes[i][r.below(int64(len(u.strikes[i])))]
		if u.kind == schema.Equity || u.kind == schema.FuturePrice {
			c.style = "american" // written where there is a column for it
		}
		c.optionType = "call"
		if r.below(2) == 0 {
			c.optionType = "put"
		}
		if n < 2 {
			c.expiry = d.expired
		}
		return schema.Option
	case n < 980 && u.kind == schema.Equity:
		c.instrument = "stock"
		c.quantity *= 20
		c.strategy = "hedge"
		return schema.Stock
	case n < 980 && u.kind == schema.FuturePrice:
		c.instrument, c.multiplier = "future", u.multiplier
		c.strategy = "hedge"
		return schema.Future
	case n < 990:
		c.instrument, c.multiplier = "forward", u.multiplier
		i := r.below(int64(len(u.expiries)))
		c.expiry = u.days[i]
		c.strike = u.strikes[i][len(u.strikes[i])/2]
		c.strategy = "hedge"
		return schema.Forward
	}
	c.instrument, c.underlying = "cash", u.ccy.code
	c.quantity *= 1000
	c.strategy = "funding"
	return schema.Cash
}

func (c *cells) append(b []byte) []byte {
	b = appendID(b, c.id)
	b = append(append(b, ','), c.book...)
	b = append(append(b, ','), c.underlying...)
	b = append(append(b, ','), c.instrument...)
	b = strconv.AppendInt(append(b, ','), c.quantity, 10)
	b = append(append(b, ','), c.multiplier...)
	b = append(append(b, ','), c.optionType...)
	b = append(append(b, ','), c.strike...)
	b = append(append(b, ','), c.expiry...)
	b = append(append(b, ','), c.strategy...)
	if c.styled {
		b = append(append(b, ','), c.style...)
	}
	return append(b, '\n')
}

// appendID appends the line's name: N and at least eight digits.
func appendID(b []byte, n int64) []byte {
	b = append(b, 'N')
	for p := int64(10_000_000); p > n && p > 1; p /= 10 {
		b = append(b, '0')
	}
	return strconv.AppendInt(b, n, 10)
}
