package reader

import (
	"weak"

	"nightbook/reader/table"
	"nightbook/schema"
)

// lookup is what the words of a coded column stand for: each is found out for
// the first row that has it, and holds for the others until the column comes
// with other words. A word that no row has is not looked at.
type lookup[T any] struct {
	words  weak.Pointer[table.Words] // which are not kept for it
	known  []verdict                 // by word
	values []T
}

// verdict is what is known of a word.
type verdict uint8

const (
	unread  verdict = iota
	good            // its value is what its rows get
	blank           // it is empty: there are rows that need more
	refused         // it is at fault: each row is told so
)

// mostWords is up to how many words a lookup is kept of.
const mostWords = 1 << 16

// read finds out what the words of a run stand for, notes the rows at fault, and
// returns by word what the rows get. ask reads a row's cell in column at of the
// file: its value, whether it is empty, and what is wrong with it. ok is false
// where the column is not coded, or by too many words.
func (l *lookup[T]) read(c *table.Coded, n *Binder, column int, need *needs, ask func(at, i int) (T, bool, *finding)) (values []T, ok bool) {
	if c.Words == nil || c.Words.Len() > mostWords {
		return nil, false
	}
	if w := weak.Make(c.Words); l.words != w {
		size := c.Words.Len()
		l.words = w
		l.known = append(l.known[:0], make([]verdict, size)...)
		if cap(l.values) < size {
			l.values = make([]T, size)
		}
		l.values = l.values[:size]
	}
	at := n.p.o.at[column]
	for i, k := range c.At {
		v := l.known[k]
		if v == good {
			continue
		}
		var why *finding
		if v != blank {
			var empty bool
			l.values[k], empty, why = ask(at, i)
			switch {
			case why != nil:
				v = refused
			case empty && *need != nobody:
				v = blank
			default:
				v = good
			}
			l.known[k] = v
		}
		if v == blank {
			why = need[n.instruments[i]]
		}
		if why != nil {
			n.wrong(i, column, why)
		}
	}
	return l.values, true
}

// lookups are those of our columns, by what they hold.
type lookups struct {
	codes   [positionColumns]lookup[schema.Code]
	choices [positionColumns]lookup[schema.Choice]
	numbers [positionColumns]lookup[float64]
	dates   [positionColumns]lookup[dayTime]
}

// dayTime is a date and a time of day.
type dayTime struct {
	day    schema.Date
	minute int16
}
