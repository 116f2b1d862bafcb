package xlsx

import (
	"errors"
	"fmt"
	"math"
	"strconv"

	"nightbook/schema"
)

// ErrFull is returned for a row or a cell beyond the limits of a sheet.
var ErrFull = errors.New("a sheet cannot hold more")

// largestExact is the size up to which whole numbers are exact in a cell.
const largestExact = 1 << 53

// Rows is a run of rows of a sheet, written front to back. The first error
// stays: it is returned by every later End, and by the book's Close.
type Rows struct {
	first, next int // row numbers; the first row of a sheet is 1
	column      int // of the cell written last
	widest      int
	open        bool
	letters     []string // of the columns
	buf         []byte
	out         *piece
	err         error
	cut         int // texts that were too long
}

// flushSize is how much of a run is collected before it is compressed.
const flushSize = 32 << 10

func newRows(first int) *Rows { return &Rows{first: first, next: first, out: newPiece()} }

// Next is the number of the row that Begin would begin.
func (r *Rows) Next() int { return r.next }

// Skip leaves n rows empty.
func (r *Rows) Skip(n int) { r.next += n }

// Begin begins a row. The height in points and the outline level may be 0.
func (r *Rows) Begin(height float64, outline int) {
	if r.next > MaxRows {
		r.fail(ErrFull)
	}
	r.buf = append(r.buf, `<row r="`...)
	r.buf = strconv.AppendInt(r.buf, int64(r.next), 10)
	r.buf = append(r.buf, '"')
	if height > 0 {
		r.buf = append(r.buf, ` ht="`...)
		r.buf = strconv.AppendFloat(r.buf, height, 'f', -1, 64)
		r.buf = append(r.buf, `" customHeight="1"`...)
	}
	if outline > 0 {
		r.buf = append(r.buf, ` outlineLevel="`...)
		r.buf = strconv.AppendInt(r.buf, int64(min(outline, 7)), 10)
		r.buf = append(r.buf, '"')
	}
	r.buf = append(r.buf, '>')
	r.column, r.open = 0, true
}

// End ends the row.
func (r *Rows) End() error {
	if !r.open {
		panic("xlsx: End without Begin")
	}
	r.buf = append(r.buf, "</row>"...)
	r.open = false
	r.next++
	r.widest = max(r.widest, r.column)
	if len(r.buf) >= flushSize {
		r.flush()
	}
	return r.err
}

func (r *Rows) flush() {
	if _, err := r.out.Write(r.buf); err != nil {
		r.fail(err)
	}
	r.buf = r.buf[:0]
}

// finish completes the run.
func (r *Rows) finish() error {
	if r.open {
		panic("xlsx: a row was not ended")
	}
	r.flush()
	return errors.Join(r.err, r.out.end())
}

func (r *Rows) fail(err error) {
	if r.err == nil {
		r.err = err
	}
}

// Jump leaves cells empty so that the next one is in the given column.
func (r *Rows) Jump(column int) { r.column = column - 1 }

// cell begins the next cell of the row.
func (r *Rows) cell(style int) {
	r.column++
	if r.column > MaxColumns {
		r.fail(ErrFull)
	}
	for len(r.letters) < r.column {
		r.letters = append(r.letters, columnName(len(r.letters)+1))
	}
	r.buf = append(r.buf, `<c r="`...)
	r.buf = append(r.buf, r.letters[r.column-1]...)
	r.buf = strconv.AppendInt(r.buf, int64(r.next), 10)
	r.buf = append(r.buf, '"')
	if style > 0 {
		r.buf = append(r.buf, ` s="`...)
		r.buf = strconv.AppendInt(r.buf, int64(style), 10)
		r.buf = append(r.buf, '"')
	}
}

// Blank writes an empty cell.
func (r *Rows) Blank(style int) {
	r.cell(style)
	r.buf = append(r.buf, "/>"...)
}

// smallest is the smallest number above 0 that a sheet can hold.
const smallest = 0x1p-1022

// Number writes a number with all its digits. One too small for a sheet is
// written as 0; one that is not finite is an error: a sheet has no such thing.
func (r *Rows) Number(style int, x float64) {
	r.cell(style)
	if x-x != 0 {
		r.fail(fmt.Errorf("cell %s: not a finite number", Ref(r.column, r.next)))
	}
	if math.Abs(x) < smallest {
		x = 0 // also of -0, which some programs show
	}
	r.buf = append(r.buf, "><v>"...)
	if n := int64(x); float64(n) == x && math.Abs(x) < 1e15 {
		r.buf = strconv.AppendInt(r.buf, n, 10)
	} else {
		r.buf = strconv.AppendFloat(r.buf, x, 'g', -1, 64)
	}
	r.buf = append(r.buf, "</v></c>"...)
}

// Int writes a whole number; one with more digits than a cell keeps becomes text.
func (r *Rows) Int(style int, n int64) {
	if n > largestExact || n < -largestExact {
		r.Text(style, strconv.FormatInt(n, 10))
		return
	}
	r.cell(style)
	r.buf = append(r.buf, "><v>"...)
	r.buf = strconv.AppendInt(r.buf, n, 10)
	r.buf = append(r.buf, "</v></c>"...)
}

// Bool writes a truth value.
func (r *Rows) Bool(style int, x bool) {
	r.cell(style)
	value := ` t="b"><v>0</v></c>`
	if x {
		value = ` t="b"><v>1</v></c>`
	}
	r.buf = append(r.buf, value...)
}

// The days that sheets number in the same way: before 1900-03-01 programs differ
// about a 29 February that never was, and after 9999-12-31 there are none.
const (
	firstSheetDay schema.Date = -25508
	lastSheetDay  schema.Date = 2932896
	dayZero                   = 25569 // what a sheet calls 1970-01-01
)

// Date writes a date; one that sheets cannot number becomes text.
func (r *Rows) Date(style int, d schema.Date) {
	if d < firstSheetDay || d > lastSheetDay {
		r.Text(style, d.String())
		return
	}
	r.Int(style, int64(d)+dayZero)
}

// Text writes a text, whatever it looks like.
func (r *Rows) Text(style int, s string) {
	r.cell(style)
	r.buf = append(r.buf, ` t="inlineStr"><is><t xml:space="preserve">`...)
	var cut bool
	if r.buf, cut = appendText(r.buf, s); cut {
		r.cut++
	}
	r.buf = append(r.buf, "</t></is></c>"...)
}
