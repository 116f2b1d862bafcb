package reader

import (
	"math"
	"unicode/utf8"

	"nightbook/schema"
)

// need says why row i needs a cell that is empty; nil is that it does not.
type need func(i int) *finding

func none(int) *finding { return nil }

// extra carries the house's own columns through as they came. A text that is
// not UTF-8 could not be written again.
func (n *Binder) extra(b *schema.Batch) {
	for k, at := range n.p.o.extra {
		to := &b.Extra[k]
		v := &n.cells.Cols[at]
		if n.decoder != nil {
			to.Start, to.End = append(to.Start, v.Strings.Start...), append(to.End, v.Strings.End...)
		} else {
			for i := range n.cells.N {
				start := len(b.Raw.Data)
				b.Raw.Data = n.cells.AppendText(b.Raw.Data, at, i)
				to.AppendSpan(uint32(start), uint32(len(b.Raw.Data)))
			}
		}
		to.Data = b.Raw.Data
		for i := range n.cells.N {
			if !utf8.Valid(to.Bytes(i)) {
				n.wrong(i, positionColumns+k, notUTF8)
			}
		}
	}
	b.LineID.Data = b.Raw.Data
	for k := range b.Extra {
		b.Extra[k].Data = b.Raw.Data // it may have grown
	}
}

// named returns a column's name in the file and its place there, or -1: one of
// ours or, behind those, one of the house's own.
func (n *Binder) named(column int) (name string, at int) {
	if column >= positionColumns {
		k := column - positionColumns
		return n.p.extra[k], n.p.o.extra[k]
	}
	return n.p.o.names[column], n.p.o.at[column]
}

// ids reads line_id.
func (n *Binder) ids(b *schema.Batch) {
	at := n.p.o.at[lineID]
	v := &n.cells.Cols[at]
	for i := range n.cells.N {
		id, why := n.cells.name(at, i)
		if why != nil {
			n.wrong(i, lineID, why)
		} else if len(id) == 0 {
			n.wrong(i, lineID, missing)
		}
		if n.decoder != nil {
			start := v.Strings.Start[i]
			for start < v.Strings.End[i] && (v.Strings.Data[start] == ' ' || v.Strings.Data[start] == '\t') {
				start++
			}
			b.LineID.AppendSpan(start, start+uint32(len(id)))
			continue
		}
		start := len(b.Raw.Data)
		b.Raw.Data = append(b.Raw.Data, id...)
		b.LineID.AppendSpan(uint32(start), uint32(len(b.Raw.Data)))
	}
}

// codes reads a column of names.
func (n *Binder) codes(column int, names *schema.Interner, to []schema.Code, empty need) {
	at := n.p.o.at[column]
	for i := range to {
		var b []byte
		var why *finding
		if at >= 0 {
			b, why = n.cells.name(at, i)
		}
		if why == nil && len(b) == 0 {
			why = empty(i)
		}
		if why != nil {
			n.wrong(i, column, why)
			b = nil
		}
		to[i] = names.Code(b)
	}
}

// currency reads the column of currencies.
func (n *Binder) currency(to []schema.Code) {
	at := n.p.o.at[currency]
	if at < 0 {
		clear(to)
		return
	}
	for i := range to {
		b, why := n.cells.currency(at, i)
		if why != nil {
			n.wrong(i, currency, why)
			b = nil
		}
		to[i] = n.currencies.Code(b)
	}
}

// choices reads a column of words out of a closed list.
func (n *Binder) choices(column int, list schema.Choices, other *finding, to []schema.Choice, empty need) {
	at := n.p.o.at[column]
	for i := range to {
		var x schema.Choice
		var why *finding
		if at >= 0 {
			x, why = n.cells.choice(at, i, list, other)
		}
		if x == 0 && why == nil {
			why = empty(i)
		}
		if to[i] = x; why != nil {
			n.wrong(i, column, why)
		}
	}
}

// numbers reads a column of numbers; absent stands for an empty cell.
func (n *Binder) numbers(column int, within *bounds, to []float64, absent float64, empty need) {
	at := n.p.o.at[column]
	for i := range to {
		x := math.NaN()
		var why *finding
		if at >= 0 {
			x, why = n.cells.number(at, i)
		}
		if why == nil {
			if math.IsNaN(x) {
				x, why = absent, empty(i)
			} else {
				x, why = within.check(x, n.cells.Cell(at, i))
			}
		}
		if to[i] = x; why != nil {
			n.wrong(i, column, why)
		}
	}
}

// dates reads a column of dates; minutes, the times of day, may be nil.
func (n *Binder) dates(column int, to []schema.Date, minutes []int16, empty need) {
	at := n.p.o.at[column]
	for i := range to {
		day, minute, why := schema.NoDate, int16(schema.NoMinute), (*finding)(nil)
		if at >= 0 {
			day, minute, why = n.cells.date(at, i)
		}
		if why == nil && day == schema.NoDate {
			why = empty(i)
		}
		if to[i] = day; minutes != nil {
			minutes[i] = minute
		}
		if why != nil {
			n.wrong(i, column, why)
		}
	}
}
