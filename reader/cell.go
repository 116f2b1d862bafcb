package reader

import (
	"bytes"
	"encoding/binary"
	"math"
	"unicode/utf8"

	"nightbook/reader/table"
	"nightbook/schema"
)

// finding is what is wrong with a cell: the code and what was expected.
type finding struct {
	code   schema.RejectCode
	reason string
}

// Findings on single cells.
var (
	missing     = &finding{schema.MissingValue, "the cell is empty and this row needs it"}
	notNumber   = &finding{schema.BadNumber, "expected a number such as 1234.5 or 1.2e6, without thousands separators; if the file writes decimal commas, set [csv] decimal_comma = true"}
	notComma    = &finding{schema.BadNumber, "expected a number with a decimal comma such as 1.234,5, as [csv] decimal_comma = true says"}
	notFinite   = &finding{schema.BadNumber, "expected a finite number"}
	faultCell   = &finding{schema.BadNumber, "the cell holds an error value, or a formula that was never calculated: correct it in the workbook and save that"}
	notExact    = &finding{schema.BadNumber, "a number is held to 53 bits, and this integer has more: write it as a decimal or a double if it may be rounded"}
	storedNaN   = &finding{schema.BadNumber, "the cell holds NaN, which is no number: write null for an empty cell"}
	notUTF8     = &finding{schema.BadText, "the text is not valid UTF-8: save the file as UTF-8, or declare its encoding in [csv] encoding"}
	hasControl  = &finding{schema.BadText, "the text holds a control character"}
	hasMark     = &finding{schema.BadText, "the text holds a byte order mark (U+FEFF), which cannot be seen: take it out; where two files were put together, the second begins with one"}
	tooLongText = &finding{schema.BadText, "the text is longer than 256 bytes"}
	notCurrency = &finding{schema.BadChoice, "expected a currency as three letters of ISO 4217, such as USD"}
)

// maxText is the longest name, in bytes.
const maxText = 256

// style is how a house writes its numbers and dates as text. Typed cells (of
// Parquet files and workbooks) have no style.
type style struct {
	decimalComma bool
	dates        dateFormat
	utcAsIs      bool // times of UTC in Parquet files are the desk's own
}

// cells reads cells of a run of rows. Its results are valid until the next call.
type cells struct {
	*table.Rows
	style   style
	scratch []byte
}

// text returns a cell's text without spaces around it; nil is an empty cell.
func (c *cells) text(col, i int) []byte {
	if v := &c.Cols[col]; v.Kind == schema.KindStrings {
		return trim(c.Text(col, i))
	}
	c.scratch = c.AppendText(c.scratch[:0], col, i)
	return c.scratch
}

// name returns a cell that names something: at most 256 bytes of UTF-8 without
// control characters.
func (c *cells) name(col, i int) ([]byte, *finding) {
	b := c.text(col, i)
	if why := c.fault(col, i); why != nil {
		return b, why
	}
	return b, checkName(b)
}

func checkName(b []byte) *finding {
	if len(b) > maxText {
		return tooLongText
	}
	if printable(b) {
		return nil
	}
	ascii := true
	for _, x := range b {
		if x < 0x20 || x == 0x7f {
			return hasControl
		}
		ascii = ascii && x < utf8.RuneSelf
	}
	if ascii {
		return nil
	}
	if !utf8.Valid(b) {
		return notUTF8
	}
	for _, r := range string(b) {
		if 0x80 <= r && r < 0xA0 {
			return hasControl
		}
		if r == 0xFEFF {
			return hasMark
		}
	}
	return nil
}

// printable reports whether b is 8 bytes or more, all of them of ASCII without its
// control characters.
func printable(b []byte) bool {
	const ones, tops = 0x0101010101010101, 0x8080808080808080
	if len(b) < 8 {
		return false
	}
	// A byte below 0x20 borrows into its top bit, 0x7f carries into it, and
	// what borrows or carries further has set its own.
	x := binary.LittleEndian.Uint64(b[len(b)-8:])
	odd := x | (x - 0x20*ones) | (x + ones)
	for ; len(b) > 8; b = b[8:] {
		x := binary.LittleEndian.Uint64(b)
		odd |= x | (x - 0x20*ones) | (x + ones)
	}
	return odd&tops == 0
}

// fault returns what is wrong with a cell that holds an error instead of a value.
func (c *cells) fault(col, i int) *finding {
	switch {
	case c.Cell(col, i) != table.Fault:
		return nil
	case c.Cols[col].Kind == schema.KindFloats:
		return storedNaN
	case c.Cols[col].Kind == schema.KindInts:
		return notExact
	}
	return faultCell
}

// number returns a cell's number; NaN is an empty cell.
func (c *cells) number(col, i int) (float64, *finding) {
	switch v := &c.Cols[col]; v.Kind {
	case schema.KindFloats:
		x := v.Floats[i]
		if math.IsInf(x, 0) {
			return math.NaN(), notFinite
		}
		return x, c.fault(col, i)
	case schema.KindInts:
		if v.Ints[i] == schema.NoInt {
			return math.NaN(), c.fault(col, i)
		}
		x := float64(v.Ints[i])
		if x >= 1<<63 || int64(x) != v.Ints[i] {
			return math.NaN(), notExact
		}
		return x, nil
	case schema.KindDates:
		if v.Dates[i] == schema.NoDate {
			return math.NaN(), nil
		}
		return math.NaN(), notNumber
	}
	b := trim(c.Text(col, i))
	if len(b) == 0 {
		return math.NaN(), nil
	}
	kind := c.Cell(col, i)
	if kind == table.Fault {
		return math.NaN(), faultCell
	}
	if c.style.decimalComma && kind == table.Text {
		if x, ok := parseCommaNumber(b, &c.scratch); ok {
			return x, nil
		}
		return math.NaN(), notComma
	}
	if x, ok := parseNumber(b); ok {
		return x, nil
	}
	return math.NaN(), notNumber
}

// numberWithin returns a cell's number in our unit, absent if the cell is empty,
// NaN if something is wrong with it.
func (c *cells) numberWithin(col, i int, within *bounds, absent float64) (x float64, empty bool, why *finding) {
	if x, why = c.number(col, i); why != nil {
		return x, false, why
	}
	if math.IsNaN(x) {
		return absent, true, nil
	}
	x, why = within.check(x, c.Cell(col, i))
	return x, false, why
}

// date returns a cell's date and time of day; NoDate is an empty cell.
func (c *cells) date(col, i int) (schema.Date, int16, *finding) {
	switch v := &c.Cols[col]; v.Kind {
	case schema.KindDates:
		if d := v.Dates[i]; d != schema.NoDate && (d < firstDay || d > lastDay) {
			return schema.NoDate, schema.NoMinute, offCalendar
		}
		return v.Dates[i], schema.NoMinute, nil
	case schema.KindStrings:
		b := trim(c.Text(col, i))
		if len(b) == 0 {
			return schema.NoDate, schema.NoMinute, nil
		}
		switch c.Cell(col, i) {
		case table.Date:
			return isoDate.parse(b)
		case table.UTC:
			if !c.style.utcAsIs {
				return schema.NoDate, schema.NoMinute, notDesksClock
			}
			return isoDate.parse(bytes.TrimSuffix(b, []byte("Z")))
		case table.Fault:
			return schema.NoDate, schema.NoMinute, faultCell
		}
		return c.style.dates.parse(b)
	}
	// A number is no date, but its text may be one where dates are written
	// without anything between the digits: 20260320.
	b := c.text(col, i)
	if len(b) == 0 {
		return schema.NoDate, schema.NoMinute, nil
	}
	return c.style.dates.parse(b)
}

// choice returns a cell's choice out of list; 0 is an empty cell.
func (c *cells) choice(col, i int, list schema.Choices, other *finding) (schema.Choice, *finding) {
	b := c.text(col, i)
	if len(b) == 0 {
		return 0, nil
	}
	if x, ok := findChoice(list, b); ok {
		return x, nil
	}
	if why := c.fault(col, i); why != nil {
		return 0, why
	}
	return 0, other
}

// currency returns a cell's currency in capitals; nil is an empty cell.
func (c *cells) currency(col, i int) ([]byte, *finding) {
	b := c.text(col, i)
	if len(b) == 0 {
		return nil, nil
	}
	if why := c.fault(col, i); why != nil {
		return b, why
	}
	if len(b) != 3 {
		return b, notCurrency
	}
	c.scratch = append(c.scratch[:0], b...)
	for k, x := range c.scratch {
		if 'a' <= x && x <= 'z' {
			x -= 'a' - 'A'
		}
		if x < 'A' || x > 'Z' {
			return b, notCurrency
		}
		c.scratch[k] = x
	}
	return c.scratch, nil
}

// value returns a cell as it came, for a Reject.
func (c *cells) value(col, i int) string {
	b := c.AppendText(nil, col, i)
	const most = 1024 // a whole page pasted into a cell is not worth repeating
	if len(b) > most {
		b = append(bytes.ToValidUTF8(b[:most], nil), "…"...)
	}
	return string(b)
}

func trim(b []byte) []byte {
	for len(b) > 0 && (b[0] == ' ' || b[0] == '\t') {
		b = b[1:]
	}
	for len(b) > 0 && (b[len(b)-1] == ' ' || b[len(b)-1] == '\t') {
		b = b[:len(b)-1]
	}
	return b
}
