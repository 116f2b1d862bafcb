// Package parquet reads flat Parquet files, column by column, in runs of rows.
//
// The footer and the page headers are read by a general Parquet library; pages
// are unpacked and decoded here, straight into the vectors of a table.Rows, a
// few thousand values at a time, so that what is held in memory is a page a
// column whatever the size of the row groups. A page gives its values
// as they are stored; what they stand for (a date, a decimal, a time) is one
// step further, in the file convert.go.
//
// Columns that nest or repeat are refused, with their names. A damaged file is
// an error, never a panic: sizes are checked before memory is asked for.
//
// The package knows nothing of what the columns mean.
package parquet
