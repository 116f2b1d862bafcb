// Package report lays out the workbook of a run: one file a sheet, and sheets.go
// with the ordered list of them.
//
// Lines and refused rows are written to their sheets while the run goes; the
// other sheets are made of the summary at its end. The workbook holds nothing
// that could differ between two runs over the same inputs: no time of day, no
// path, no name of a machine.
//
// It knows how a sheet looks, not how a file is written (see xlsx) nor how a
// figure is computed.
package report
