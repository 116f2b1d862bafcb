// Package xlsx writes workbooks whose sheets are streams of rows.
//
// The workbook around the rows (styles, panes, filters, print settings,
// properties) is made by the excelize library. The rows themselves are written
// here, because a double must come out with all its digits, because a sheet of
// a hundred thousand rows must not be held as cells, and because the same
// workbook must always be the same bytes: rows are compressed as they come, and
// the parts of the file are put together in a fixed order with a fixed time.
//
// A text is always written as a text, never as a formula, whatever it begins
// with. A text longer than a cell may hold is cut, and says so.
//
// It knows nothing of positions or risk: report lays out the sheets.
package xlsx
