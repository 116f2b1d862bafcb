// Package interop holds tests alone: Parquet files written by an independent
// library, Apache Arrow for Go, are read by reader/parquet, and files written by
// writer/parquet are read by that library, with values equal to the bit.
//
// It is a module of its own so that the library, and all that it needs, are
// dependencies of these tests and not of the program.
package interop
