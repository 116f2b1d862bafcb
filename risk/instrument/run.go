package instrument

import "nightbook/risk/model"

// Steps are the days to which every line is revalued for theta.
const (
	NextDay = iota
	NextBusinessDay
	Steps
)

// Run is a run of lines of one product, gathered: row i of every slice is one
// line. Pricing functions read the inputs and fill Greeks and After.
type Run struct {
	N int

	Spot, Strike, Time, Vol, Rate, Yield []float64
	Sign                                 []float64 // +1 call, −1 put, 0 neither
	Entry                                []float64 // last margined price of a future
	TimeAfter                            [Steps][]float64
	SameDay                              bool // the next day is a business day, and the steps are one
	Terms
	Dividends []*Schedule // of the products that know them

	Methods *Methods
	rows    []int32   // scratch
	rest    []float64 // scratch: prices without what is in escrow

	model.Greeks
	Exercise                  // of the products that know it
	After    [Steps][]float64 // price with TimeAfter to expiry, all else held
}

// Resize makes every slice n rows long, keeping memory.
func (r *Run) Resize(n int) {
	r.N = n
	for _, s := range r.slices() {
		*s = resized(*s, n)
	}
	r.Dividends = resized(r.Dividends, n)
	r.Exercise.resize(n)
}

func resized[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n, n+n/4)
	}
	return s[:n]
}

func (r *Run) slices() (s [13 + 11 + 11]*[]float64) {
	k := copy(s[:], []*[]float64{
		&r.Spot, &r.Strike, &r.Time, &r.Vol, &r.Rate, &r.Yield, &r.Sign, &r.Entry, &r.rest,
		&r.TimeAfter[NextDay], &r.TimeAfter[NextBusinessDay], &r.After[NextDay], &r.After[NextBusinessDay],
	})
	greeks, terms := r.Greeks.Slices(), r.Terms.slices()
	k += copy(s[k:], greeks[:])
	copy(s[k:], terms[:])
	return s
}

// revaluations are the steps to price After for, one where they are one.
func (r *Run) revaluations(price func(step int) bool) {
	if !price(NextDay) {
		return
	}
	if r.SameDay {
		copy(r.After[NextBusinessDay], r.After[NextDay])
		return
	}
	price(NextBusinessDay)
}

// held says that the passing of a day changes nothing.
func (r *Run) held() {
	for i := range r.After {
		copy(r.After[i], r.Price)
	}
}
