package xlsx

import (
	"strings"

	"nightbook/schema"
)

// Number formats.
const (
	FormatWhole    = "#,##0"
	FormatMoney    = "#,##0.00"
	FormatPrice    = "#,##0.0000"
	FormatRate     = "0.00000"
	FormatRatio    = "0.000000"
	FormatYears    = "0.0000"
	FormatTiny     = "0.0E+00"
	FormatInteger  = "0"
	FormatDate     = "yyyy-mm-dd"
	formatMeasured = "#,##0.######"
	formatTruth    = `"TRUE";"TRUE";"FALSE"` // for office suites that show truth values as the numbers 1 and 0
)

// FormatOf returns the number format for the values of a column: one for whole
// numbers, one for others. They differ where most values are whole.
func FormatOf(c *schema.Column) (whole, other string) {
	same := func(f string) (string, string) { return f, f }
	switch c.Type {
	case schema.Int:
		if c.Name == "line" || c.Name == "level" {
			return same(FormatInteger)
		}
		return same(FormatWhole)
	case schema.Day:
		return same(FormatDate)
	case schema.Bool:
		return same(formatTruth)
	case schema.Text:
		return same("")
	}
	switch c.Unit {
	case "price":
		return same(FormatPrice)
	case "contracts", "units a contract", "units":
		return FormatWhole, formatMeasured
	case "units of the underlying":
		return same(FormatMoney)
	case "1/year", "1/√year":
		return same(FormatRate) // in the unit that stands above, not in per cent
	case "year":
		return same(FormatYears)
	case "price currency", "reporting currency":
		switch {
		case c.Name == "fx_rate":
			return same(FormatRatio)
		case c.Name == "price" || c.Name == "intrinsic" || c.Name == "time_value": // of one unit
			return same(FormatPrice)
		case c.Name == "price_error":
			return same(FormatTiny)
		}
		return same(FormatMoney)
	}
	if strings.HasSuffix(c.Name, "_residual") {
		return same(FormatTiny)
	}
	return same(FormatRatio)
}

// WidthOf returns a width, in characters, that shows the header and ordinary
// values of a column, and every word of a closed list.
func WidthOf(c *schema.Column) float64 {
	width := 9
	switch {
	case c.Type == schema.Day:
		width = 11
	case c.Type == schema.Text:
		width = 12
	case c.Unit == "price currency" || c.Unit == "reporting currency" || c.Unit == "units of the underlying":
		width = 16
	case c.Type == schema.Float:
		width = 12
	}
	for _, word := range schema.ChoicesOf(c.Name) {
		width = max(width, len(word)+2) // room for an indent
	}
	// Room for the mark of the filter.
	return float64(max(width, len([]rune(c.Name))+4))
}
