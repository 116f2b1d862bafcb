// Package model holds the pricing formulas, one file a model: functions over
// plain []float64 that know nothing of lines, books or files.
//
// All slices of a call have one length; row i is one contract. Sensitivities
// are the mathematical partial derivatives for one unit of the contract. An
// input that makes no sense (NaN, negative time) gives NaN, never an error: the
// caller checks its lines before and after.
package model
