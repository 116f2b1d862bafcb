package market

import (
	"cmp"
	"slices"

	"nightbook/risk/vec"
	"nightbook/schema"
)

// Dividend is what one unit of an underlying pays on an ex-date after as_of.
type Dividend struct {
	ExDate schema.Date
	Time   float64 // years from as_of, whole days
	Amount float64
}

// dividends returns the dividends that are still to come, in order, those of one
// ex-date added up.
func dividends(rows []schema.DividendRow, asOf schema.Moment) []Dividend {
	rows = slices.Clone(rows)
	slices.SortStableFunc(rows, func(a, b schema.DividendRow) int {
		return cmp.Or(cmp.Compare(a.ExDate, b.ExDate), cmp.Compare(a.Amount, b.Amount))
	})
	var list []Dividend
	for _, r := range rows {
		n := len(list)
		switch {
		case r.ExDate <= asOf.Day || r.Amount == 0:
		case n > 0 && list[n-1].ExDate == r.ExDate:
			list[n-1].Amount += r.Amount
		default:
			list = append(list, Dividend{r.ExDate, asOf.Years(r.ExDate, schema.NoMinute), r.Amount})
		}
	}
	return list
}

// DividendsUntil returns the dividends that move a contract which ends on a day:
// those with an ex-date up to that day.
func (u *Underlying) DividendsUntil(day schema.Date) []Dividend {
	n, _ := slices.BinarySearchFunc(u.Dividends, day+1, func(d Dividend, day schema.Date) int { return cmp.Compare(d.ExDate, day) })
	return u.Dividends[:n]
}

// PresentValue returns what dividends are worth now at a continuous rate. A
// contract that ends at T during an ex-date meets its dividend at T.
func PresentValue(dividends []Dividend, rate, T float64) float64 {
	var sum float64
	for _, d := range dividends {
		sum += float64(d.Amount * vec.Exp1(-float64(rate*min(d.Time, T))))
	}
	return sum
}

// Forward returns the forward price to T years, which is on the given day, at a
// zero rate.
//
// Computes F = S·e^((r−q)T) − Σ D·e^((r−q)(T−t)) over the dividends D at t up to
// T, with the one rate to T for all. Of kind future and spread, F = S.
// Units: T years, r and q continuous per year.
// Source: the cash-and-carry argument.
func (u *Underlying) Forward(rate, T float64, day schema.Date) float64 {
	if u.Kind == schema.FuturePrice || u.Kind == schema.Spread || T <= 0 {
		return u.Price
	}
	carry := rate - u.Yield
	f := u.Price * vec.Exp1(float64(carry*T))
	for _, d := range u.DividendsUntil(day) {
		f -= float64(d.Amount * vec.Exp1(float64(carry*(T-min(d.Time, T)))))
	}
	return f
}
