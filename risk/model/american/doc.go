// Package american prices American options on a spot price with a continuous rate
// and yield, by the integral equation of their exercise boundary.
//
// The price is the European one plus what exercise earns: interest on the strike
// less the yield of the asset, from where the price of the underlying is beyond
// the boundary. The boundary is the one for which the slope of the price is −1
// there. It depends on (rT, qT, σ√T) only, so one solution serves every strike.
// The work goes through these files:
//
//	lines.go       what goes in and what comes out
//	solver.go      lines → boundaries; a finer rung for those that do not converge
//	groups.go      lines that share a boundary
//	rule.go        points in time, quadrature nodes, interpolation weights
//	quadrature.go  Gauss–Legendre, Chebyshev, sines that are the same everywhere
//	block.go       boundaries side by side, one a lane, and the order of the loops
//	start.go       a first boundary, from a fitted polynomial
//	kernel_generic.go, newton_generic.go   Newton's method, first and second tangents
//	curve.go, price_generic.go, values_generic.go   price and derivatives
//	near_generic.go   what the nodes do not see close to the boundary
//	*8_simd_amd64.go, *4_simd_amd64.go   the same loops for eight and four lanes
//	store.go       from units of the strike to money; options without a boundary
//	european.go    options for which exercise is never optimal
//
// Errors of 1,000 random options (K 100, S/K ½ … 2, T 1 week … 3 years, σ 5 … 80 %,
// r 0 … 10 %, q 0 … 12 %, calls and puts) against a solution with 76 points, 88 and
// 221 nodes: root of the mean square / largest. Gamma is times S, the others from
// vega to volga over S, the boundary over K.
//
//	               fast             default            exact
//	points, nodes  7, 6 and 13      11, 10 and 19      60, 64 and 141
//	sweeps         2                3                  7
//	price          4e-6  / 4e-5     5e-7  / 9e-6       1e-11 / 3e-10
//	delta          3e-7  / 4e-6     3e-8  / 5e-7       1e-11 / 4e-10
//	gamma          2e-5  / 3e-4     3e-6  / 5e-5       2e-9  / 7e-8
//	vega           1e-5  / 3e-4     5e-7  / 1e-5       3e-11 / 9e-10
//	theta          8e-7  / 2e-5     4e-7  / 1e-5       1e-10 / 3e-9
//	rho            4e-5  / 1e-3     3e-6  / 4e-5       1e-9  / 3e-8
//	carry_rho      5e-5  / 2e-3     2e-6  / 3e-5       1e-9  / 3e-8
//	vanna          4e-4  / 4e-3     2e-4  / 3e-3       3e-9  / 8e-8
//	volga          1e-3  / 2e-2     4e-4  / 1e-2       5e-9  / 1e-7
//	charm          4e-4  / 1e-2     8e-5  / 2e-3       2e-8  / 7e-7
//	boundary       1e-5  / 2e-4     4e-7  / 9e-6       4e-12 / 1e-10
//
// Lines a second on one core with AVX-512, price and all sensitivities, fast and
// default: 780,000 and 340,000 if no two share a boundary, 4,700,000 and 3,400,000
// where twenty strikes do; an eighth to a quarter of that without vector code.
//
// The largest errors of vanna, volga and charm are those of options within a
// thousandth of the boundary, those of rho of options with nearly equal r and q,
// about which the boundary at expiry has a kink.
//
// The package knows nothing of positions, currencies, dates or cash dividends. Its
// arithmetic gives the same bits on every machine; see package vec for how.
package american
