package reader

import (
	"cmp"
	"math"
	"slices"
	"strings"

	"nightbook/reader/csv"
	"nightbook/reader/table"
	"nightbook/schema"
)

// Binder turns pieces of the position file into batches: it splits them into
// fields and gives every cell its meaning. Each goroutine needs its own.
type Binder struct {
	p       *Positions
	decoder *csv.Decoder
	split   table.Rows // of text files
	cells   cells
	words   positionChoices
	vol     bounds

	books, underlyings, currencies, strategies *schema.Interner

	instruments []schema.Choice // of the piece, as far as they have been read
	known       lookups
	valid       []validity // of the house's own columns

	problems []problem
	bad      []bool // by row; empty is that none is
}

// problem is something wrong with a row; column is ours.
type problem struct {
	row, column int
	why         *finding
}

// NewBinder returns a binder for one goroutine.
func (p *Positions) NewBinder() *Binder {
	n := &Binder{
		p: p, words: newPositionChoices(), vol: lineVolBounds(p.cfg), cells: cells{style: p.o.style},
		books: schema.NewInterner(p.dicts.Books), underlyings: schema.NewInterner(p.dicts.Underlyings),
		currencies: schema.NewInterner(p.dicts.Currencies), strategies: schema.NewInterner(p.dicts.Strategies),
	}
	n.valid = make([]validity, len(p.extra))
	if t, ok := p.o.source.(*textFile); ok {
		n.decoder = t.NewDecoder()
	}
	return n
}

// Bind fills b with the rows of pc: all columns of Positions, and Status
// Rejected with a Reject, in row order, for each row that is refused; the
// Status of the others is 0. All texts of the batch are spans of b.Raw.Data.
// No error is returned for what the rows hold.
func (n *Binder) Bind(pc *Piece, b *schema.Batch) error {
	for len(b.Extra) < len(n.p.extra) {
		b.Extra = append(b.Extra, schema.Strings{})
	}
	b.Extra = b.Extra[:len(n.p.extra)]
	rows := &pc.rows
	if pc.text {
		rows = &n.split
		n.decoder.Decode(&pc.block, rows)
	}
	b.Resize(rows.N)
	n.cells.Rows = rows
	b.File = cmp.Or(rows.File, n.p.o.in.name)
	n.problems = n.problems[:0]
	n.bad = n.bad[:0]
	if len(rows.Bad) > 0 {
		n.bad = append(n.bad, make([]bool, rows.N)...)
	}
	for _, x := range rows.Bad {
		n.bad[x.Row] = true
	}
	clear(b.Status)
	copy(b.Line, rows.Line)
	if pc.text {
		// The batch takes the block's bytes, and the block those the batch had.
		b.Raw.Data, pc.block.Data = rows.Raw.Data, b.Raw.Data[:0]
		b.Raw.Start = append(b.Raw.Start, rows.Raw.Start...)
		b.Raw.End = append(b.Raw.End, rows.Raw.End...)
	} else {
		b.AsText = rows.AppendRow // the piece keeps the rows until it is read into again
	}
	n.columns(b)
	n.extra(b)
	n.refuse(b)
	return nil
}

// columns reads our columns one after the other, in the order of the schema.
func (n *Binder) columns(b *schema.Batch) {
	n.instruments = b.Instrument
	nan := math.NaN()
	n.ids(b)
	n.codes(book, n.books, b.Book, &everyone)
	n.codes(underlying, n.underlyings, b.Underlying, &everyone)
	n.choices(instrument, schema.Instruments, n.words.instrument, b.Instrument, &everyone)
	n.numbers(quantity, &anyNumber, b.Quantity, nan, &everyone)
	n.numbers(multiplier, &positive, b.Multiplier, 1, &nobody)
	n.currency(b.Currency)
	n.choices(optionType, schema.OptionTypes, n.words.optionType, b.OptionType, &options)
	n.choices(exercise, schema.Exercises, n.words.exercise, b.Exercise, &nobody)
	n.choices(payoff, schema.Payoffs, n.words.payoff, b.Payoff, &nobody)
	for i, x := range b.Instrument {
		if x == schema.Option {
			b.Exercise[i] = cmp.Or(b.Exercise[i], schema.European)
			b.Payoff[i] = cmp.Or(b.Payoff[i], schema.Vanilla)
		}
	}
	n.numbers(strike, &anyNumber, b.Strike, nan, &dated)
	n.dates(expiry, b.Expiry, b.ExpiryMinute, &dated)
	n.numbers(vol, &n.vol, b.Vol, nan, &nobody)
	n.numbers(mark, &anyNumber, b.Mark, nan, &nobody)
	n.numbers(payout, &anyNumber, b.Payout, nan, &nobody)
	n.choices(barrierType, schema.BarrierTypes, n.words.barrierType, b.BarrierType, &nobody)
	n.numbers(barrier, &anyNumber, b.Barrier, nan, &nobody)
	n.numbers(rebate, &anyNumber, b.Rebate, nan, &nobody)
	n.choices(monitoring, schema.Monitorings, n.words.monitoring, b.Monitoring, &nobody)
	n.dates(averageStart, b.AverageStart, nil, &nobody)
	n.numbers(averageSoFar, &anyNumber, b.AverageSoFar, nan, &nobody)
	n.numbers(entryPrice, &anyNumber, b.EntryPrice, nan, &nobody)
	n.codes(strategy, n.strategies, b.Strategy, &nobody)
}

// wrong notes a problem; further ones of a row that is no row are not worth a word.
func (n *Binder) wrong(row, column int, why *finding) {
	if len(n.bad) == 0 || !n.bad[row] {
		n.problems = append(n.problems, problem{row, column, why})
	}
}

// refuse writes a Reject for every row with a problem, in row order. The first
// problem in the order of our columns is the one reported; the reason names
// the columns of the others.
func (n *Binder) refuse(b *schema.Batch) {
	for _, x := range n.cells.Bad {
		n.problems = append(n.problems, problem{x.Row, -1, &finding{schema.BadRow, x.Reason}})
	}
	slices.SortStableFunc(n.problems, func(a, b problem) int {
		if a.row != b.row {
			return a.row - b.row
		}
		return a.column - b.column
	})
	for k := 0; k < len(n.problems); {
		x := n.problems[k]
		var others []string
		for k++; k < len(n.problems) && n.problems[k].row == x.row; k++ {
			if c, _ := n.named(n.problems[k].column); !slices.Contains(others, c) {
				others = append(others, c)
			}
		}
		b.Status[x.row] = schema.Rejected
		b.Rejects = append(b.Rejects, n.reject(b, x, others))
	}
}

func (n *Binder) reject(b *schema.Batch, x problem, others []string) schema.Reject {
	r := schema.Reject{
		File: b.File, Sheet: n.p.o.sheet, Line: b.Line[x.row], Code: x.why.code, Reason: x.why.reason,
		Row: b.Row(x.row), Index: x.row,
	}
	if len(others) > 0 {
		r.Reason += "; also: " + strings.Join(others, ", ")
	}
	if x.column < 0 {
		return r
	}
	var at int
	if r.Column, at = n.named(x.column); at >= 0 {
		r.Value = n.cells.value(at, x.row)
	} else {
		r.Reason += "; the file has no such column"
	}
	return r
}
