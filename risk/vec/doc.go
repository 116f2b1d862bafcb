// Package vec holds the arithmetic that runs once for every option: exp, ln, the
// normal distribution, the Black–Scholes–Merton formula with its sensitivities,
// and its inverse, the implied volatility, over slices.
//
// The scalar code (exp.go, log.go, normal.go, bsm_generic.go, implied_generic.go) is
// the specification. It uses no function of package math beyond FMA, Sqrt and the
// bit conversions, all of which are exact or correctly rounded everywhere, and
// it writes every other sum of a product as float64(x*y) + z, so that a compiler
// may not fuse it. The AVX2 and AVX-512 forms, built with GOEXPERIMENT=simd,
// take the same steps in the same order. A result therefore has the same bits on
// every machine and in every tier, and neither the length of a slice nor the
// place of a line in it matters.
//
// Vector code covers a box of ordinary inputs only. A lane outside the box
// (zero volatility, an expiry within seconds, NaN) is handed to the scalar code,
// where it can be dealt with in plain words.
//
// Folder gen holds the generators of the constants and of the 4-lane files, the
// checks that go with them, and the same loop in C to compare times with.
//
// The package knows nothing of positions, currencies or dates. It allocates
// nothing, keeps no state besides the chosen tier, and may be called from
// several goroutines at once on slices that do not overlap.
package vec
