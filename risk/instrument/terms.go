package instrument

import "nightbook/risk/model"

// Terms are the columns that only some payoffs have. They are gathered for the
// products that ask for them.
type Terms struct {
	Payout             []float64 // of a cash digital
	model.BarrierTerms           // of a barrier option
	AverageStart       []float64 // years from now to the start of the average, below 0 once it has begun
	Average            []float64 // the average so far; not looked at before the start

	passed, startAfter, averageAfter []float64 // scratch of the averages' revaluation
}

func (t *Terms) slices() [11]*[]float64 {
	return [...]*[]float64{
		&t.Payout, &t.Barrier, &t.Rebate, &t.Interval, &t.Side, &t.Knock, &t.AverageStart, &t.Average,
		&t.passed, &t.startAfter, &t.averageAfter,
	}
}

// atExpiry makes of a run of expired lines one that expires this moment: what
// the models then give is the payoff.
func (r *Run) atExpiry() {
	for _, s := range [][]float64{r.Time, r.Vol, r.Rate, r.Yield} {
		clear(s)
	}
	for i := range r.TimeAfter {
		clear(r.TimeAfter[i])
	}
}
