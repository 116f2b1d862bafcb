package pde

import "math"

// Dividend is a cash amount for one unit of the underlying, with the years from
// now to its ex-date. One whose Time is 0 or less, or after expiry, has no effect.
type Dividend struct{ Time, Amount float64 }

// Convention says what a cash dividend does to the lognormal price.
type Convention int

const (
	// Piecewise: S is lognormal between ex-dates and drops by the amount on
	// each, floored at 0, so V(S, t⁻) = V(max(S−D, 0), t⁺).
	Piecewise Convention = iota
	// Escrowed: S less the value Σ D·e^(−(r−q)t) of the dividends until expiry is
	// lognormal. Exercise brings S itself.
	Escrowed
)

// Chain is a set of options that differ in strike and volatility only.
//
// Units: prices in one currency; Time in years; Rate and Yield continuous, a
// year; Vol per √year; Sign +1 for calls and −1 for puts.
type Chain struct {
	Spot, Time, Rate, Yield, Sign float64
	American                      bool
	Dividends                     []Dividend // in any order
	Convention                    Convention
	Strike, Vol                   []float64
}

// Greeks are the values of a chain and their derivatives, row i being line i;
// units and signs as in package model. Residual is what the other columns leave
// of the equation, over max(|Price|, 10⁻⁴·Spot): a control, since Theta is read
// from the values of two times. It is NaN where exercise is optimal, for there
// the equation does not hold.
type Greeks struct {
	Price, Delta, Gamma, Vega, Theta, Rho, CarryRho, Vanna, Volga, Charm, Residual []float64
}

// Results are what Solve fills, row i being line i.
type Results struct {
	Greeks
	// Error estimates how far Price may be off.
	Error []float64
	// Boundary is the price at which exercise is optimal now: at or below it for
	// a put, at or above it for a call. NaN if there is none within 4σ√T of Spot, or
	// 2σ√T where exercise is optimal now.
	Boundary []float64
	// Beyond is the price past which exercise is no longer optimal, for options
	// with a second boundary (puts with yield < rate < 0, calls with
	// rate < yield < 0). NaN otherwise.
	Beyond []float64
	Status []Status
}

// Status says how a line came out.
type Status uint8

const (
	Held      Status = iota // worth more than exercise
	Exercised               // immediate exercise is optimal, or the line is at its expiry in the money
	Uncertain               // held, but Error is above the tolerance even on the finest mesh
	Invalid                 // the inputs make no sense; all results are NaN
)

// columns returns the numbers in a fixed order.
func (r *Results) columns() [14]*[]float64 {
	return [14]*[]float64{
		&r.Price, &r.Delta, &r.Gamma, &r.Vega, &r.Theta, &r.Rho, &r.CarryRho, &r.Vanna, &r.Volga, &r.Charm, &r.Residual,
		&r.Error, &r.Boundary, &r.Beyond,
	}
}

// Resize makes room for n lines, reusing what is there.
func (r *Results) Resize(n int) {
	for _, c := range r.columns() {
		*c = resize(*c, n)
	}
	r.Status = resize(r.Status, n)
}

func resize[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}

// fill sets line i to x throughout.
func (r *Results) fill(i int, x float64, s Status) {
	for _, c := range r.columns() {
		(*c)[i] = x
	}
	r.Status[i] = s
}

// widest bounds the exponent of the prices on a mesh: beyond it a product of
// three of them may overflow.
const widest = 200

// valid reports whether line i of the chain makes sense. core is the part of the
// spot that is lognormal.
func (c *Chain) valid(i int, core float64) bool {
	finite := func(x float64) bool { return math.Abs(x) <= math.MaxFloat64 }
	k, v := c.Strike[i], c.Vol[i]
	ok := core > 0 && c.Spot > 0 && finite(c.Spot) && k > 0 && finite(k) && c.Time >= 0 && finite(c.Time) && v >= 0 && finite(v) &&
		finite(c.Rate) && finite(c.Yield) && (c.Sign == 1 || c.Sign == -1) && (c.Convention == Piecewise || c.Convention == Escrowed)
	for _, d := range c.Dividends {
		ok = ok && d.Amount >= 0 && finite(d.Amount) && finite(d.Time)
	}
	if !ok {
		return false
	}
	sd := v * math.Sqrt(c.Time)
	return float64(8*sd)+float64(0.5*float64(sd*sd))+float64((math.Abs(c.Rate)+math.Abs(c.Yield))*c.Time)+math.Abs(lnRatio(core, k)) < widest
}
