package risk

import "nightbook/schema"

// EarlyExercise lists the American options of a priced batch that should be
// exercised at as_of, and the calls in the money whose time value is below the
// next cash dividend, for which that day will come before the ex-date.
func (e *Engine) EarlyExercise(b *schema.Batch, list []schema.ExerciseRow) []schema.ExerciseRow {
	for i := range b.N {
		if b.Exercise[i] != schema.American || b.Status[i] != schema.Priced || b.Instrument[i] != schema.Option {
			continue
		}
		x := schema.ExerciseRow{Index: i, ExDate: schema.NoDate, Dividend: nan}
		if paid := e.market.Underlying(b.Underlying[i]).DividendsUntil(b.Expiry[i]); len(paid) > 0 {
			x.ExDate, x.Dividend = paid[0].ExDate, paid[0].Amount
		}
		intrinsic := b.Spot[i] - b.Strike[i]
		switch {
		case b.ExerciseNow[i]:
			x.Reason = schema.PastBoundary
		case b.OptionType[i] == schema.Call && intrinsic > 0 && b.Price[i]-intrinsic < x.Dividend:
			x.Reason = schema.BeforeDividend
		default:
			continue
		}
		list = append(list, x)
	}
	return list
}
