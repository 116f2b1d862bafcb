package reader

import "nightbook/schema"

// Our columns of the position file, in the order of schema.PositionsTable.
const (
	lineID = iota
	book
	underlying
	instrument
	quantity
	multiplier
	currency
	optionType
	exercise
	payoff
	strike
	expiry
	vol
	mark
	payout
	barrierType
	barrier
	rebate
	monitoring
	averageStart
	averageSoFar
	entryPrice
	strategy
	positionColumns
)

// positionChoices are the closed lists among them and what to say of a word
// that is in none.
type positionChoices struct {
	instrument, optionType, exercise, payoff, barrierType, monitoring *finding
}

func newPositionChoices() positionChoices {
	return positionChoices{
		instrument: choiceFinding("instrument"), optionType: choiceFinding("option_type"), exercise: choiceFinding("exercise"),
		payoff: choiceFinding("payoff"), barrierType: choiceFinding("barrier_type"), monitoring: choiceFinding("monitoring"),
	}
}

// Findings on cells that only some instruments need.
var (
	optionNeedsIt  = &finding{schema.MissingValue, "the cell is empty and an option needs it"}
	forwardNeedsIt = &finding{schema.MissingValue, "the cell is empty and a forward needs it"}
)

// needs says, by the instrument of a row, why it needs a cell that is empty; nil
// is that it does not. An instrument that could not be read is the first.
type needs [schema.Cash + 1]*finding

var (
	nobody   = needs{}
	everyone = needs{missing, missing, missing, missing, missing, missing}
	options  = needs{schema.Option: optionNeedsIt}
	dated    = needs{schema.Option: optionNeedsIt, schema.Forward: forwardNeedsIt}
)
