// Package samples makes the snapshot folders that nightbook is shown and
// tried with: Demo writes an invented desk of any size, and Regenerate the
// small desks that stand in this folder, each with a README that says what to
// look at.
//
// Everything in them is made up: desks, books, companies, indices, goods and
// levels. Only the currency codes are real.
//
// All bytes come from integer arithmetic and the PCG generator, so a folder is
// the same on every machine. The package knows the names of schema and nothing
// of readers, prices or writers.
package samples

//go:generate go run ./generate .
