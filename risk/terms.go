package risk

import (
	"math"

	"nightbook/risk/instrument"
	"nightbook/schema"
)

// intervals are the years between two looks at a barrier. 252 business days a
// year are common practice, no source.
var intervals = [...]float64{
	0: 0, schema.Continuous: 0, schema.Daily: 1.0 / 252, schema.Weekly: 7.0 / 365, schema.Monthly: 1.0 / 12,
}

// given reports whether a term is filled in. Systems that write every column
// write 0 for a term that does not apply; no term of ours can be 0 in earnest
// but a rebate, which then changes nothing.
func given(x float64) bool { return !math.IsNaN(x) && x != 0 }

// checkTerms refuses an option that lacks a term its payoff needs, or that has
// one its payoff does not know: priced without it, it would be another contract.
func (e *Engine) checkTerms(b *schema.Batch, i int) bool {
	missing := func(column, what string) bool {
		refuse(b, i, schema.MissingValue, column, "", "the cell is empty and payoff "+schema.Payoffs[b.Payoff[i]]+" needs "+what)
		return false
	}
	stray := func(column, value string) bool {
		refuse(b, i, schema.TermsMismatch, column, value, "payoff "+schema.Payoffs[b.Payoff[i]]+" knows no "+column+": mend the payoff, or empty the cell")
		return false
	}
	wrong := func(column, value, reason string) bool {
		refuse(b, i, schema.OutOfRange, column, value, reason)
		return false
	}
	payoff := b.Payoff[i]
	asian := payoff == schema.AsianGeometric || payoff == schema.AsianArithmetic

	switch {
	case payoff == schema.CashDigital && math.IsNaN(b.Payout[i]):
		return missing("payout", "the amount it pays")
	case payoff != schema.CashDigital && given(b.Payout[i]):
		return stray("payout", number(b.Payout[i]))
	case payoff != schema.Barrier && b.BarrierType[i] != 0:
		return stray("barrier_type", schema.BarrierTypes[b.BarrierType[i]])
	case payoff != schema.Barrier && given(b.Barrier[i]):
		return stray("barrier", number(b.Barrier[i]))
	case payoff != schema.Barrier && given(b.Rebate[i]):
		return stray("rebate", number(b.Rebate[i]))
	case payoff != schema.Barrier && b.Monitoring[i] > schema.Continuous:
		return stray("monitoring", schema.Monitorings[b.Monitoring[i]])
	case !asian && b.AverageStart[i] != schema.NoDate:
		return stray("average_start", b.AverageStart[i].String())
	case !asian && given(b.AverageSoFar[i]):
		return stray("average_so_far", number(b.AverageSoFar[i]))
	}
	switch {
	case payoff == schema.Barrier && b.BarrierType[i] == 0:
		return missing("barrier_type", "the kind of barrier")
	case payoff == schema.Barrier && math.IsNaN(b.Barrier[i]):
		return missing("barrier", "its level")
	case payoff == schema.Barrier && b.Barrier[i] <= 0:
		return wrong("barrier", number(b.Barrier[i]), "the barrier must be positive")
	case payoff == schema.Barrier && b.Rebate[i] < 0:
		return wrong("rebate", number(b.Rebate[i]), "the rebate must not be negative")
	case asian && b.AverageStart[i] == schema.NoDate:
		return missing("average_start", "the first day of the average")
	case asian && b.AverageStart[i] > b.Expiry[i]:
		return wrong("average_start", b.AverageStart[i].String(), "the average must start on or before the expiry")
	case asian && b.AverageStart[i] < e.market.AsOf.Day && math.IsNaN(b.AverageSoFar[i]):
		return missing("average_so_far", "the average since average_start, which is past")
	case asian && b.AverageStart[i] < e.market.AsOf.Day && b.AverageSoFar[i] <= 0:
		return wrong("average_so_far", number(b.AverageSoFar[i]), "the average so far must be positive")
	}
	return true
}

// plainTerms refuses a line that is no option and yet has what only options
// have: most often an option that bears the wrong word.
func plainTerms(b *schema.Batch, i int) bool {
	stray := func(column, value string) bool {
		refuse(b, i, schema.TermsMismatch, column, value, "instrument "+schema.Instruments[b.Instrument[i]]+" knows no "+column+": mend the instrument, or empty the cell")
		return false
	}
	switch {
	case b.OptionType[i] != 0:
		return stray("option_type", schema.OptionTypes[b.OptionType[i]])
	case b.Instrument[i] != schema.Forward && given(b.Strike[i]):
		return stray("strike", number(b.Strike[i]))
	}
	return true
}

// gatherTerms gathers the columns that only some payoffs have.
func (e *Engine) gatherTerms(b *schema.Batch, r *instrument.Run, rows []int32) {
	for j, i := range rows {
		r.Payout[j] = b.Payout[i]
		r.Barrier[j] = b.Barrier[i]
		r.Rebate[j] = b.Rebate[i]
		if math.IsNaN(r.Rebate[j]) {
			r.Rebate[j] = 0
		}
		r.Interval[j] = intervals[b.Monitoring[i]]
		r.Side[j], r.Knock[j] = -1, -1
		if t := b.BarrierType[i]; t == schema.UpIn || t == schema.UpOut {
			r.Side[j] = 1
		}
		if t := b.BarrierType[i]; t == schema.DownIn || t == schema.UpIn {
			r.Knock[j] = 1
		}
		r.AverageStart[j], r.Average[j] = nan, b.AverageSoFar[i]
		if b.AverageStart[i] != schema.NoDate {
			// An average that starts on the day of expiry starts no later than its time of day.
			r.AverageStart[j] = min(e.market.AsOf.Years(b.AverageStart[i], schema.NoMinute), r.Time[j])
		}
	}
}
