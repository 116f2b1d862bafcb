// Package risk prices batches of lines: it finds for each line its underlying,
// curve, volatility and model, gathers like lines into runs, has them priced,
// and scatters value, sensitivities and position measures back to the lines.
//
// It knows no file format. What it refuses, it refuses with a code and a reason
// on the line; an error is returned only for what ends the run.
package risk
