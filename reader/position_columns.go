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

// optionNeeds says why a line of that instrument needs what options need.
func optionNeeds(i schema.Choice) *finding {
	if i == schema.Option {
		return optionNeedsIt
	}
	return nil
}

// datedNeeds says why a line of that instrument needs a strike and an expiry.
func datedNeeds(i schema.Choice) *finding {
	if i == schema.Forward {
		return forwardNeedsIt
	}
	return optionNeeds(i)
}
