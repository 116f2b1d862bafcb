package reader

import (
	"encoding/csv"
	"strings"
)

// Sheet returns the sheet of the positions, "" where the file has none.
func (p *Positions) Sheet() string { return p.o.sheet }

// Header returns what the file calls one of our columns; our own name where the
// file has no such column, "" for "".
func (p *Positions) Header(ours string) string {
	if k := p.column(ours); k >= 0 {
		return p.o.names[k]
	}
	return ours
}

// Cell returns the cell of one of our columns in a row as it came, that is a
// row's text in Batch.Raw; ok is false where the row has no such cell.
func (p *Positions) Cell(raw, ours string) (text string, ok bool) {
	k := p.column(ours)
	if k < 0 || p.o.at[k] < 0 {
		return "", false
	}
	r := csv.NewReader(strings.NewReader(raw))
	r.Comma = ','
	if t, isText := p.o.source.(*textFile); isText {
		r.Comma = rune(t.Delimiter())
	}
	r.FieldsPerRecord = -1
	fields, err := r.Read()
	if err != nil || p.o.at[k] >= len(fields) {
		return "", false
	}
	return fields[p.o.at[k]], true
}

// column returns the place of one of our columns in its table, or -1.
func (p *Positions) column(ours string) int {
	for k, c := range p.o.in.table.Columns {
		if c.Name == ours {
			return k
		}
	}
	return -1
}
