// Package table is the form in which the readers of the file formats hand on
// what they found: a Frame of named columns, where each row stands in its file,
// the row as it came, and the rows that could not be taken apart. A column of
// text may be held as places among its different texts, as its file has it.
//
// It knows no file format and gives no cell a meaning: what a text stands for
// is decided by the package above.
package table
