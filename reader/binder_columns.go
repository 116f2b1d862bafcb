package reader

import "nightbook/schema"

// named returns a column's name in the file and its place there, or -1: one of
// ours or, behind those, one of the house's own.
func (n *Binder) named(column int) (name string, at int) {
	if column >= positionColumns {
		k := column - positionColumns
		return n.p.extra[k], n.p.o.extra[k]
	}
	return n.p.o.names[column], n.p.o.at[column]
}

// Each function below reads one column: all at once what the file does not have,
// by word what is coded, in one loop the numbers and dates that need no thought,
// and row by row the rest.

// lacking notes the rows that need a column which the file does not have.
func (n *Binder) lacking(column int, need *needs) {
	if *need == nobody {
		return
	}
	for i := range n.instruments {
		n.empty(i, column, need)
	}
}

// empty notes row i if it needs the cell, which is empty.
func (n *Binder) empty(i, column int, need *needs) {
	if why := need[n.instruments[i]]; why != nil {
		n.wrong(i, column, why)
	}
}

// codes reads a column of names.
func (n *Binder) codes(column int, names *schema.Interner, to []schema.Code, need *needs) {
	at := n.p.o.at[column]
	if at < 0 {
		clear(to)
		n.lacking(column, need)
		return
	}
	coded := &n.cells.Coded[at]
	ask := func(at, i int) (schema.Code, bool, *finding) {
		b, why := n.cells.name(at, i)
		if why != nil {
			return 0, false, why
		}
		return names.Code(b), len(b) == 0, nil
	}
	if values, ok := n.known.codes[column].read(coded, n, column, need, ask); ok {
		pick(to, values, coded.At)
		return
	}
	for i := range to {
		b, why := n.cells.name(at, i)
		if why == nil && len(b) == 0 {
			why = need[n.instruments[i]]
		}
		if why != nil {
			n.wrong(i, column, why)
			b = nil
		}
		to[i] = names.Code(b)
	}
}

// pick gives each row the value of its word.
func pick[T any](to, values []T, at []uint32) {
	to = to[:len(at)]
	for i, k := range at {
		to[i] = values[k]
	}
}

// currency reads the column of currencies.
func (n *Binder) currency(to []schema.Code) {
	at := n.p.o.at[currency]
	if at < 0 {
		clear(to)
		return
	}
	coded := &n.cells.Coded[at]
	ask := func(at, i int) (schema.Code, bool, *finding) {
		b, why := n.cells.currency(at, i)
		if why != nil {
			return 0, false, why
		}
		return n.currencies.Code(b), len(b) == 0, nil
	}
	if values, ok := n.known.codes[currency].read(coded, n, currency, &nobody, ask); ok {
		pick(to, values, coded.At)
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
func (n *Binder) choices(column int, list schema.Choices, other *finding, to []schema.Choice, need *needs) {
	at := n.p.o.at[column]
	if at < 0 {
		clear(to)
		n.lacking(column, need)
		return
	}
	coded := &n.cells.Coded[at]
	ask := func(at, i int) (schema.Choice, bool, *finding) {
		x, why := n.cells.choice(at, i, list, other)
		return x, x == 0, why
	}
	if values, ok := n.known.choices[column].read(coded, n, column, need, ask); ok {
		pick(to, values, coded.At)
		return
	}
	for i := range to {
		x, why := n.cells.choice(at, i, list, other)
		if x == 0 && why == nil {
			why = need[n.instruments[i]]
		}
		if to[i] = x; why != nil {
			n.wrong(i, column, why)
		}
	}
}

// numbers reads a column of numbers; absent stands for an empty cell.
func (n *Binder) numbers(column int, within *bounds, to []float64, absent float64, need *needs) {
	at := n.p.o.at[column]
	if at < 0 {
		for i := range to {
			to[i] = absent
		}
		n.lacking(column, need)
		return
	}
	coded := &n.cells.Coded[at]
	ask := func(at, i int) (float64, bool, *finding) { return n.cells.numberWithin(at, i, within, absent) }
	if values, ok := n.known.numbers[column].read(coded, n, column, need, ask); ok {
		pick(to, values, coded.At)
		return
	}
	row := func(i int) {
		x, empty, why := n.cells.numberWithin(at, i, within, absent)
		if empty {
			why = need[n.instruments[i]]
		}
		if to[i] = x; why != nil {
			n.wrong(i, column, why)
		}
	}
	v := &n.cells.Cols[at]
	lo, hi, plain := within.plain()
	plain = plain && n.cells.Cells[at] == nil // no faults among them
	switch {
	case plain && v.Kind == schema.KindFloats:
		for i, x := range v.Floats[:len(to)] {
			to[i] = x
			if x >= lo && x <= hi {
				continue
			}
			if to[i] = absent; x == x {
				row(i)
			} else {
				n.empty(i, column, need)
			}
		}
	case plain && v.Kind == schema.KindInts:
		for i, k := range v.Ints[:len(to)] {
			x := float64(k)
			to[i] = x
			if uint64(k+1<<53) <= 1<<54 && x >= lo && x <= hi {
				continue
			}
			if to[i] = absent; k != schema.NoInt {
				row(i)
			} else {
				n.empty(i, column, need)
			}
		}
	default:
		for i := range to {
			row(i)
		}
	}
}

// dates reads a column of dates; minutes, the times of day, may be nil.
func (n *Binder) dates(column int, to []schema.Date, minutes []int16, need *needs) {
	at := n.p.o.at[column]
	for i := range minutes {
		minutes[i] = schema.NoMinute
	}
	if at < 0 {
		for i := range to {
			to[i] = schema.NoDate
		}
		n.lacking(column, need)
		return
	}
	coded := &n.cells.Coded[at]
	ask := func(at, i int) (dayTime, bool, *finding) {
		day, minute, why := n.cells.date(at, i)
		return dayTime{day, minute}, day == schema.NoDate, why
	}
	if values, ok := n.known.dates[column].read(coded, n, column, need, ask); ok {
		for i, k := range coded.At {
			to[i] = values[k].day
		}
		for i := range minutes {
			minutes[i] = values[coded.At[i]].minute
		}
		return
	}
	row := func(i int) {
		day, minute, why := n.cells.date(at, i)
		if why == nil && day == schema.NoDate {
			why = need[n.instruments[i]]
		}
		if to[i] = day; minutes != nil {
			minutes[i] = minute
		}
		if why != nil {
			n.wrong(i, column, why)
		}
	}
	if v := &n.cells.Cols[at]; v.Kind == schema.KindDates {
		for i, d := range v.Dates[:len(to)] {
			switch to[i] = d; {
			case d == schema.NoDate:
				n.empty(i, column, need)
			case d < firstDay || d > lastDay:
				row(i)
			}
		}
		return
	}
	for i := range to {
		row(i)
	}
}
