// Package aggregate adds lines up: over books along the book tree, over
// underlyings and over currencies.
//
// Every sum is exact until its one rounding at the end (see Sum), so totals
// depend neither on the order of the lines, nor on where batches end, nor on
// the number of workers, to the last bit.
package aggregate
