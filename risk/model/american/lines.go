package american

// Lines are options, row i of every slice being one.
//
// Units: Spot and Strike in one currency; Time T in years; Vol σ per √year; Rate r
// and Yield q continuous per year; Sign +1 for calls and −1 for puts.
type Lines struct {
	Spot, Strike, Time, Vol, Rate, Yield, Sign []float64
}

// Greeks are values and their partial derivatives, row i being line i; units and
// signs as in package model. Theta is what the equation
//
//	Θ + ½σ²S²Γ + (r−q)SΔ − rV = 0
//
// gives, and Residual is what is left of it, over max(|V|, 10⁻⁴·S), if Theta is
// taken from the scaling of time instead: TΘ + rρ + qψ + ½σ·vega = 0. It compares
// the derivatives in the parameters with those in the spot, which come from
// different sums. It is NaN where the equation does not hold, in the exercise
// region and at expiry.
type Greeks struct {
	Price, Delta, Gamma, Vega, Theta, Rho, CarryRho, Vanna, Volga, Charm, Residual []float64
}

// Results are what Solve fills.
type Results struct {
	Greeks
	// Boundary is the price of the underlying at which exercise is optimal now: at
	// or below it for a put, at or above it for a call. NaN if there is none.
	Boundary []float64
	Status   []Status
}

// Status says how a line came out.
type Status uint8

const (
	Held       Status = iota // worth more than exercise now
	Exercised                // to be exercised now: the price is the payoff, delta ±1, the rest 0
	Never                    // exercise before expiry is never optimal: the European option
	Expired                  // at expiry: the payoff
	OutOfReach               // two boundaries, or one too sharp for this method; all results are NaN
	Invalid                  // the inputs make no sense; all results are NaN
)

// columns returns the numbers in a fixed order.
func (r *Results) columns() [12]*[]float64 {
	return [12]*[]float64{
		&r.Price, &r.Delta, &r.Gamma, &r.Vega, &r.Theta, &r.Rho, &r.CarryRho, &r.Vanna, &r.Volga, &r.Charm, &r.Residual,
		&r.Boundary,
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

func (l *Lines) check(r *Results) {
	n := len(l.Spot)
	for _, c := range []int{len(l.Strike), len(l.Time), len(l.Vol), len(l.Rate), len(l.Yield), len(l.Sign), len(r.Status)} {
		if c != n {
			panic(lengthMismatch)
		}
	}
	for _, c := range r.columns() {
		if len(*c) != n {
			panic(lengthMismatch)
		}
	}
}

const lengthMismatch = "american: slices of different lengths"

// The widest inputs that make sense.
const (
	mostPrice    = 1e100
	mostTime     = 1000
	mostVol      = 100
	mostExponent = 100 // of a discount factor
)

// valid reports whether line i makes sense.
func (l *Lines) valid(i int) bool {
	price := func(x float64) bool { return x >= 1/mostPrice && x <= mostPrice }
	exponent := func(x float64) bool { return x >= -mostExponent && x <= mostExponent }
	t, v, w := l.Time[i], l.Vol[i], l.Sign[i]
	return price(l.Spot[i]) && price(l.Strike[i]) && t >= 0 && t <= mostTime && v >= 0 && v <= mostVol &&
		exponent(l.Rate[i]) && exponent(l.Yield[i]) && exponent(l.Rate[i]*t) && exponent(l.Yield[i]*t) && (w == 1 || w == -1)
}
