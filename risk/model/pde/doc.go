// Package pde prices European and American vanilla options by finite
// differences: the backward equation
//
//	∂V/∂t + ½σ²S²·∂²V/∂S² + (r−q)S·∂V/∂S − rV = 0
//
// with a continuous rate and yield of either sign and a list of cash dividends,
// under which the price of the underlying drops on each ex-date.
//
// A Solver takes a Chain, the options of one type, style and expiry on one
// underlying, and gives each line its value, all its sensitivities, an estimate
// of its error, and what is known of early exercise. Lines of one volatility are
// swept together, and have the bits that they have alone. Where the price alone is
// asked for, Prices gives it with the same bits, for a third to a quarter of the
// time. The work goes through these files:
//
//	chain.go     what goes in and what comes out
//	lines.go     lines of any kinds → chains
//	solver.go    lines → sweeps, two meshes each, finer ones where the error asks
//	outcome.go   a sweep, and what is read of its lines
//	prices.go    lines → prices alone, eight options to a sweep
//	sweep.go     from expiry to now
//	plan.go      how wide, how dense, how many steps
//	mesh.go      nodes dense at the spot, differences between them, by lane
//	operator.go  the equation in eight lanes: one for each set of parameters of an
//	             option, or one for each option
//	grid.go      a lane on its way back in time, from the kink of its payoff
//	step.go      one step back in time, TR-BDF2
//	exercise.go  where exercise begins, found inside its cell
//	anywhere.go  the same where the exercised prices may be any set
//	jump.go      an ex-date
//	read.go      values and derivatives between nodes
//	certain.go   options whose underlying has no volatility to speak of
//
// The package knows nothing of positions, currencies or dates. Its arithmetic
// gives the same bits on every machine; see package vec for how.
package pde
