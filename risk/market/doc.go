// Package market turns the rows of a market snapshot into zero curves,
// volatility surfaces, currency rates and business days, and says of each
// whether it may be used.
//
// It knows nothing of positions. Every sum of a product is written with an
// explicit rounding (float64(x*y) + z) or an explicit fused operation, so that
// results have the same bits on machines that fuse and machines that do not.
package market
