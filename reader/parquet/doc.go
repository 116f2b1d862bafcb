// Package parquet reads flat Parquet files, column by column, in runs of rows.
//
// The footer and the page headers are read by a general Parquet library; pages
// are unpacked and decoded here, straight into the vectors of a table.Rows, a
// few thousand values at a time, so that what is held in memory is a page a
// column whatever the size of the row groups. A page gives its values
// as they are stored; what they stand for (a date, a decimal, a time) is one
// step further, in the file convert.go. The texts of a dictionary are handed on
// once a row group, and the rows as places among them.
//
// It reads every encoding of the format's first two page layouts (plain,
// dictionary, run lengths, delta binary packed, delta length and delta byte
// array, byte stream split), packed with Snappy, gzip, zstd, LZ4_RAW or not at
// all, and every type that is a number, a date, a time, a text or a truth value.
// What it does not read is refused with the name of the column: columns that
// nest or repeat, other codecs and encodings, annotations it does not know.
//
// A damaged file is an error, never a panic: sizes are checked before memory is
// asked for, and held to the schema.Limits.
//
// The package knows nothing of what the columns mean.
package parquet
