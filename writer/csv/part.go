package csv

import (
	"slices"

	"nightbook/schema"
)

// blockRows is how many rows are formatted column by column before they are put
// together: as many as their cells stay in the cache.
const blockRows = 64

// part is what one goroutine formats of a frame, and what it keeps from frame to
// frame.
type part struct {
	columns []column
	notes   []notes // of the columns
	frames  int     // that came so far
	cells   []slot  // of a block, row by row
	long    []byte  // the texts of the block that fit no slot
	out     []byte  // rows that are being formatted
	ready   []byte  // rows that are, and are being written
	bad     fault   // what could not be written
}

// notes are what a part remembers of a column's texts. Nothing that is written
// depends on it.
type notes struct {
	codes   codeNotes
	choices []slot
	numbers numberNotes
}

// fault is the first cell that cannot be written: null though the column is never
// null, or infinite.
type fault struct {
	found       bool
	row, column int
}

func newPart(columns []column) *part {
	return &part{columns: columns, notes: make([]notes, len(columns)), cells: make([]slot, blockRows*len(columns))}
}

// format turns rows [from, to) of the frame into p.out, up to the block with the
// first cell that cannot be written.
func (p *part) format(f *schema.Frame, from, to int) {
	p.out, p.bad = p.out[:0], fault{}
	p.prepare(f)
	if p.frames%trialFrames == 0 {
		p.try(f, from, to)
	}
	p.frames++
	for ; from < to && !p.bad.found; from += blockRows {
		n := min(blockRows, to-from)
		p.long = p.long[:0]
		for c := range p.columns {
			if bad := p.column(c, &f.Cols[c], from, n); bad >= 0 && (!p.bad.found || from+bad < p.bad.row) {
				p.bad = fault{true, from + bad, c}
			}
		}
		if !p.bad.found { // behind a fault, the slots of its column are those of an earlier block
			p.assemble(n)
		}
	}
}

// column formats n rows of a column from the given row on. It returns the first
// of them, counted from 0, that cannot be written, or -1.
func (p *part) column(c int, v *schema.Vector, from, n int) (bad int) {
	switch v.Kind {
	case schema.KindFloats:
		return p.floats(c, v.Floats[from:][:n])
	case schema.KindInts:
		return p.ints(c, v.Ints[from:][:n])
	case schema.KindDates:
		return p.dates(c, v.Dates[from:][:n])
	case schema.KindBools:
		return p.bools(c, v.Bools[from:][:n])
	case schema.KindCodes:
		return p.codes(c, v.Dict, v.Codes[from:][:n])
	case schema.KindChoices:
		return p.choices(c, v.Names, v.Choices[from:][:n])
	}
	return p.strings(c, &v.Strings, from, n)
}

// assemble appends the n rows of a block to p.out.
func (p *part) assemble(n int) {
	columns := len(p.columns)
	p.out = slices.Grow(p.out, n*(columns*len(slot{})+len(`""`+"\n"))+len(p.long))
	out, at := p.out[:cap(p.out)], len(p.out)
	for row := range n {
		start := at
		cells := p.cells[row*columns:][:columns]
		for i := range cells {
			s := &cells[i]
			if s.isLong() {
				from, to := s.long()
				at += copy(out[at:], p.long[from:to])
				continue
			}
			(*slot)(out[at:]).set(s)
			at += int(s[sizeAt])
		}
		if at <= start+1 {
			at = start + copy(out[start:], `"",`) // an empty line would not be a row
		}
		out[at-1] = '\n'
	}
	p.out = out[:at]
}
