// Package xlsx reads the first sheet of a workbook (Office Open XML) as rows
// under a header, with the type of every cell: numbers, dates by their number
// format in the 1900 and the 1904 date system, texts, error values. A formula
// gives the value stored with it.
//
// The sheet is read as a stream; only the workbook's shared texts are held in
// memory. A workbook that is damaged or cut short is an error, never an early
// end.
//
// The package knows nothing of what the columns mean.
package xlsx
