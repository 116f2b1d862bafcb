// Package reader reads a snapshot folder: which file holds which table, what
// run.toml says of them, which header stands for which column, and what each
// cell means. Positions come in batches, the market as a whole.
//
// This is the only place where a cell becomes a number, a date or a choice.
// The packages below it (csv, parquet, xlsx) turn bytes into named columns and
// know nothing of options; this one knows the columns of the schema and no
// file format, and nothing of what a row is worth.
//
// A file is hashed as it is read. One that changes meanwhile is an error, and so
// is one beyond a limit of [limits]; reading ends with the context of the run.
//
// A row that does not say what its table needs is refused with its address, as
// a schema.Reject of the positions or a schema.Fault of the market. A file that
// cannot be read at all, or lacks a column, is an error.
package reader
