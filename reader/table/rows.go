package table

import (
	"slices"
	"strconv"

	"nightbook/schema"
)

// Cell says how the text of a cell of a text vector is meant.
type Cell uint8

const (
	// Text is written by the house, in its own style.
	Text Cell = iota
	// Number came as a number: digits, a point, an exponent.
	Number
	// Percent is a Number that is shown as a percentage: 0.2 as 20 %.
	Percent
	// Date came as a date: YYYY-MM-DD, with THH:MM behind it where there was a time
	// of day, and :SS and a fraction where it was to the second or finer.
	Date
	// UTC is a Date whose time of day is that of UTC, with a Z behind it.
	UTC
	// Fault is the error value of a workbook's cell, such as #N/A, or a NaN or NoInt that the file holds.
	Fault
)

// Rows is a run of rows of one file, in columns in the order of its header.
// The vectors are of kind text, float, integer or date; "", NaN, NoInt and
// NoDate are empty cells. The memory is used again for the next run.
type Rows struct {
	schema.Frame

	// Coded says, of a column of text, whether it is one, and then has its cells in
	// place of the vector: see Text. It has an entry for every column.
	Coded []Coded

	// Cells says, of a text vector, how each cell is meant; nil is Text for all.
	// Of a vector of floats or integers, Fault parts the NaN or NoInt that the file
	// holds from the empty cell. It has an entry for every column.
	Cells [][]Cell

	File string         // of a table in several files: the one that all the rows stand in
	Line []int64        // where each row stands: line of the file, row of the sheet
	Raw  schema.Strings // each row as it came
	Bad  []Bad          // the rows that could not be taken apart, ascending; their cells are empty
}

// Bad is a row that could not be taken apart.
type Bad struct {
	Row    int // its place in the run
	Reason string
}

// Reset makes the run empty, with the given number of columns, and keeps its memory.
func (r *Rows) Reset(columns int) {
	r.N, r.File = 0, ""
	for len(r.Cols) < columns {
		r.Cols = append(r.Cols, schema.Vector{})
	}
	for len(r.Cells) < columns {
		r.Cells = append(r.Cells, nil)
	}
	r.Coded = slices.Grow(r.Coded[:0], columns)[:columns]
	r.Cols, r.Cells = r.Cols[:columns], r.Cells[:columns]
	for i := range r.Cols {
		c := &r.Cols[i]
		c.Strings.Reset()
		c.Floats, c.Ints, c.Dates = c.Floats[:0], c.Ints[:0], c.Dates[:0]
		r.Cells[i] = nil
		r.Coded[i].Words, r.Coded[i].At = nil, r.Coded[i].At[:0]
	}
	r.Line, r.Bad = r.Line[:0], r.Bad[:0]
	r.Raw.Reset()
}

// AppendColumn puts a column behind the others that holds the same text in every row.
func (r *Rows) AppendColumn(text string, kind Cell) {
	n := len(r.Cols)
	r.Cols = slices.Grow(r.Cols, 1)[:n+1]
	r.Cells = append(r.Cells, nil)
	r.Coded = slices.Grow(r.Coded, 1)[:n+1]
	v, c := &r.Cols[n], &r.Coded[n]
	v.Kind = schema.KindStrings
	v.Strings.Reset()
	var word schema.Strings
	word.AppendString(text)
	word.AppendString("")
	c.Words, c.At = NewWords(word), append(c.At[:0], make([]uint32, r.N)...)
	if kind != Text {
		for range r.N {
			r.Cells[n] = append(r.Cells[n], kind)
		}
	}
}

// Cell says how the cell in row i of column col is meant. Of vectors that are
// not of text, only Fault has a meaning.
func (r *Rows) Cell(col, i int) Cell {
	if c := r.Cells[col]; c != nil {
		return c[i]
	}
	return Text
}

// AppendText appends the cell in row i of column col as text: texts as they
// came, numbers in the fewest digits that read back as the same number, dates
// as YYYY-MM-DD. An empty cell appends nothing.
func (r *Rows) AppendText(b []byte, col, i int) []byte {
	switch v := &r.Cols[col]; v.Kind {
	case schema.KindStrings:
		return append(b, r.Text(col, i)...)
	case schema.KindFloats:
		if r.Cell(col, i) == Fault {
			return append(b, "NaN"...)
		}
		return AppendFloat(b, v.Floats[i])
	case schema.KindInts:
		if v.Ints[i] == schema.NoInt && r.Cell(col, i) != Fault {
			return b
		}
		return strconv.AppendInt(b, v.Ints[i], 10)
	case schema.KindDates:
		return v.Dates[i].AppendDate(b)
	}
	panic("table: a vector of a kind that no reader makes")
}

// AppendFloat appends x in the fewest digits that read back as x; NaN, which
// is the empty cell, appends nothing.
func AppendFloat(b []byte, x float64) []byte {
	if x != x {
		return b
	}
	// An exponent only where writing the number out would take a line of zeros.
	if a := max(x, -x); a != 0 && (a < 1e-6 || a >= 1e21) {
		return strconv.AppendFloat(b, x, 'e', -1, 64)
	}
	return strconv.AppendFloat(b, x, 'f', -1, 64)
}

// AppendRow appends row i as a line of a CSV file with commas, without its end:
// the form in which a row that was never text is shown to people.
func (r *Rows) AppendRow(b []byte, i int) []byte {
	for col := range r.Cols {
		if col > 0 {
			b = append(b, ',')
		}
		at := len(b)
		b = r.AppendText(b, col, i)
		if r.Cols[col].Kind == schema.KindStrings {
			b = quoted(b, at)
		}
	}
	return b
}

// quoted puts quotes around b[at:] if a CSV file needs them there.
func quoted(b []byte, at int) []byte {
	need := false
	for _, c := range b[at:] {
		need = need || c == '"' || c == ',' || c == '\n' || c == '\r'
	}
	if !need {
		return b
	}
	text := string(b[at:])
	b = append(b[:at], '"')
	for _, c := range []byte(text) {
		if c == '"' {
			b = append(b, '"')
		}
		b = append(b, c)
	}
	return append(b, '"')
}
