package xlsx

import (
	"fmt"

	"nightbook/schema"
)

// Table writes frames as the rows of a table: a row of units, a header, and a
// row for each row of the frames.
type Table struct {
	table schema.Table
	rows  *Rows
	sheet *Sheet
	at    int // row of the header

	whole, other, head, unit []int // styles of each column
}

// NewTable starts a table on a sheet, its header in row head (2 or more) and
// frozen there, with the first column. Columns beyond what a sheet can hold are
// left out: see Columns.
func (b *Book) NewTable(s *Sheet, t schema.Table, head int) (*Table, error) {
	t.Columns = t.Columns[:min(len(t.Columns), MaxColumns)]
	x := &Table{table: t, sheet: s, at: head, rows: s.Rows(head + 1)}
	var err error
	style := func(s Style) int {
		if err != nil {
			return 0
		}
		var id int
		id, err = b.Style(s)
		return id
	}
	widths := make([]float64, len(t.Columns))
	for i := range t.Columns {
		c := &t.Columns[i]
		whole, other := FormatOf(c)
		indent := 0
		if i > 0 && right(c) == 0 && right(&t.Columns[i-1]) == 1 {
			indent = 1 // numbers end where this text would begin
		}
		x.whole = append(x.whole, style(Style{Format: whole, Indent: indent}))
		x.other = append(x.other, style(Style{Format: other, Indent: indent}))
		x.head = append(x.head, style(Style{Bold: true, Head: true, Right: right(c) == 1, Indent: indent}))
		x.unit = append(x.unit, style(Style{Color: Muted, Size: 8, Right: right(c) == 1, Indent: indent}))
		widths[i] = WidthOf(c)
	}
	if err != nil {
		return nil, err
	}
	s.Widths(widths...)
	s.Freeze(head, 1)
	h := s.Rows(head - 1)
	h.Begin(0, 0)
	for i, c := range t.Columns {
		if c.Unit == "" {
			h.Jump(i + 2)
			continue
		}
		h.Text(x.unit[i], c.Unit)
	}
	if err := h.End(); err != nil {
		return nil, err
	}
	h.Begin(16, 0)
	for i, c := range t.Columns {
		h.Text(x.head[i], c.Name)
	}
	return x, h.End()
}

// right says whether the header of a column stands over numbers.
func right(c *schema.Column) int {
	if c.Type == schema.Float || c.Type == schema.Int {
		return 1
	}
	return 0
}

// Columns is how many columns the sheet holds.
func (x *Table) Columns() int { return len(x.table.Columns) }

// Written is how many rows were written.
func (x *Table) Written() int { return x.rows.next - x.at - 1 }

// Room is how many rows can still be written, with some kept for notes.
func (x *Table) Room() int { return MaxRows - 10 - x.rows.next + 1 }

// Write appends the first n rows of the frame.
func (x *Table) Write(f *schema.Frame, n int) error {
	for i := range n {
		x.rows.Begin(0, 0)
		for c := range x.table.Columns {
			x.cell(&f.Cols[c], i, c)
		}
		if err := x.rows.End(); err != nil {
			return fmt.Errorf("sheet %s: %w", x.sheet.Name, err)
		}
	}
	return nil
}

// Finish ends the table: the rows that were written can be filtered. It returns
// the rows below, for notes.
func (x *Table) Finish() *Rows {
	x.sheet.Filter(x.at, x.Columns(), x.rows.next-1)
	return x.rows
}

// cell writes row i of a vector; null is an empty cell.
func (x *Table) cell(v *schema.Vector, i, column int) {
	r, style := x.rows, x.other[column]
	if isNull(v, i) {
		if c := &x.table.Columns[column]; c.Required {
			r.fail(fmt.Errorf("column %s, row %d: null in a column that is never null", c.Name, x.Written()+1))
		}
		r.Jump(column + 2)
		return
	}
	switch v.Kind {
	case schema.KindFloats:
		if n := v.Floats[i]; n == float64(int64(n)) {
			style = x.whole[column]
		}
		r.Number(style, v.Floats[i])
	case schema.KindInts:
		r.Int(style, v.Ints[i])
	case schema.KindDates:
		r.Date(style, v.Dates[i])
	case schema.KindBools:
		r.Bool(style, v.Bools[i])
	default:
		r.Text(style, v.Text(i))
	}
}

func isNull(v *schema.Vector, i int) bool {
	switch v.Kind {
	case schema.KindFloats:
		return v.Floats[i] != v.Floats[i]
	case schema.KindInts:
		return v.Ints[i] == schema.NoInt
	case schema.KindDates:
		return v.Dates[i] == schema.NoDate
	case schema.KindBools:
		return false
	}
	return v.Text(i) == ""
}
