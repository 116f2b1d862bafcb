// Package shortest writes numbers as text: a double as the shortest decimal
// that reads back to the same bits, of those the closest, and integers.
//
//   - Whole numbers below 1e15 are written as integers.
//   - From 1e-6 up to below 1e21 in magnitude there is no exponent: 0.000125.
//   - All else is written with one: 1.25e-07, 1e+21.
//
// The digits are those of package strconv, to which whatever is rare or hard is
// left; the method for the rest is in float.go.
//
// It knows nothing of tables, cells or files.
package shortest
