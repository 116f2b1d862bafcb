package xlsx

import (
	"math"
	"strconv"
	"strings"

	"nightbook/reader/table"
	"nightbook/schema"
)

// rawCell is a cell as the sheet has it.
type rawCell struct {
	kind    string // the t attribute
	style   int
	value   string // of v, or of is
	formula string
	stored  bool // there is a value, if an empty one
}

// read returns what a cell holds, as text and what that is; "" is an empty cell.
func (w *Workbook) read(c *rawCell) (string, table.Cell, error) {
	if c.formula != "" && (!c.stored || c.value == "" && c.kind != "str") {
		// A program wrote the formula, and no workbook program has computed it yet.
		return "=" + c.formula, table.Fault, nil
	}
	switch c.kind {
	case "s":
		if c.value == "" {
			return "", table.Text, nil
		}
		i, err := strconv.Atoi(strings.TrimSpace(c.value))
		if err != nil || i < 0 || i >= len(w.strings) {
			return "", 0, damaged("a cell refers to shared text %q of %d", c.value, len(w.strings))
		}
		return w.strings[i], table.Text, nil
	case "str", "inlineStr":
		return c.value, table.Text, nil
	case "b":
		switch strings.TrimSpace(c.value) {
		case "1", "true":
			return "true", table.Text, nil
		case "0", "false":
			return "false", table.Text, nil
		}
		return c.value, table.Text, nil
	case "e":
		return c.value, table.Fault, nil
	case "d":
		return isoDate(c.value), table.Date, nil
	case "", "n":
		text := strings.TrimSpace(c.value)
		if text == "" {
			return "", table.Number, nil
		}
		x, err := strconv.ParseFloat(text, 64)
		if err != nil {
			return "", 0, damaged("a cell's number is %q", c.value)
		}
		kind := table.Number
		if 0 <= c.style && c.style < len(w.shown) {
			kind = w.shown[c.style]
		}
		if kind == table.Date {
			if d, ok := w.date(x); ok {
				return d, kind, nil
			}
			kind = table.Number
		}
		return string(table.AppendFloat(nil, x)), kind, nil
	}
	return "", 0, damaged("a cell is of the unknown type %q", c.kind)
}

// Serial numbers of days. Day 60 of the 1900 system is a 29 February 1900 that
// never was, so that days before it count from one day later.
const (
	epoch1900 = schema.Date(-25569) // 1899-12-30
	epoch1904 = schema.Date(-24107) // 1904-01-01
	lastDay   = schema.Date(2932896)
)

// date returns the date of a serial number of days as YYYY-MM-DD, with THH:MM
// behind it where there is a time of day, rounded down to the minute. ok is
// false for a time without a date, and for what lies beyond the calendar.
func (w *Workbook) date(serial float64) (text string, ok bool) {
	// A workbook's times are sums of binary fractions: they are meant to the second.
	seconds := math.Round(serial * 86400)
	if !(seconds >= 86400 && seconds < 4e11) {
		return "", false
	}
	days, minute := schema.Date(int64(seconds)/86400), int64(seconds)%86400/60
	epoch := epoch1900
	switch {
	case w.date1904:
		epoch = epoch1904
	case days == 60:
		return "", false
	case days < 60:
		epoch++
	}
	day := epoch + days
	if day > lastDay {
		return "", false
	}
	b := day.AppendDate(nil)
	if minute != 0 {
		b = append(append(b, 'T'), schema.Clock(int16(minute))...)
	}
	return string(b), true
}

// isoDate returns a date cell's own text without the fraction of its seconds,
// and without a time of day of zero.
func isoDate(text string) string {
	text = strings.TrimSpace(text)
	if i := strings.IndexByte(text, '.'); i >= 0 {
		text = text[:i] + strings.TrimLeft(text[i+1:], "0123456789")
	}
	for _, midnight := range []string{"T00:00:00", "T00:00"} {
		text = strings.TrimSuffix(text, midnight)
	}
	return text
}
