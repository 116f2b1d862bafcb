package instrument

import (
	"math"

	"nightbook/risk/model/american"
	"nightbook/risk/model/pde"
	"nightbook/risk/vec"
)

// Quote is an option without a closed form and the price it is quoted at. A
// futures price has the rate as its yield.
type Quote struct {
	Price                                 float64
	Spot, Strike, Time, Rate, Yield, Sign float64
	American                              bool
	Dividends                             []pde.Dividend

	Vol     float64 // found by ImpliedVols; NaN unless Outcome is vec.ImpliedOK
	Outcome vec.Implied

	low, high   float64 // the volatility lies between
	value, vega float64 // at Vol
	done        bool
	onGrid      bool // value is by finite differences
}

// High returns the highest volatility that is sought for the quote.
func (q *Quote) High() float64 { return min(highestVol, highestSpread/math.Sqrt(q.Time)) }

// The search ends at a volatility of 1000 %, and where σ√T is 12.
const (
	highestVol    = 10
	highestSpread = 12
	mostRounds    = 100
	integralNoise = 1e-9 // of the spot: how close the search comes to a price by the integral
)

// ImpliedVols finds for each quote the volatility at which the methods that price
// lines give its price.
//
// Computes a zero of V(σ) − P by Newton's method within a bracket, which is
// halved where a step would leave it.
// Special cases: a price at or below V(0) is vec.ImpliedBelow, one at or above V at
// the end of the search vec.ImpliedAbove; inputs without a V are vec.ImpliedNaN.
// Accuracy: V(σ) = P but for rounding, or for the tolerance of finite differences,
// whose mesh changes with σ.
func (m *Methods) ImpliedVols(quotes []*Quote) {
	m.bracket(quotes)
	active := append([]*Quote(nil), quotes...)
	for range mostRounds {
		n := 0
		for _, q := range active {
			if !q.done {
				active[n] = q
				n++
			}
		}
		if active = active[:n]; n == 0 || m.interrupted() {
			break
		}
		m.evaluate(active, true)
		for _, q := range active {
			q.step()
		}
	}
	for _, q := range quotes {
		tolerance := float64(integralNoise * q.Spot)
		if q.onGrid {
			tolerance = float64(m.grid.Tolerance * q.Spot)
		}
		if q.Outcome == vec.ImpliedOK && !(math.Abs(q.value-q.Price) <= tolerance) {
			q.Outcome = vec.ImpliedNaN
		}
		if q.Outcome != vec.ImpliedOK {
			q.Vol = math.NaN()
		}
	}
}

// bracket sets where each volatility must lie, and sorts out prices that no
// volatility gives.
func (m *Methods) bracket(quotes []*Quote) {
	at := func(vol func(*Quote) float64, judge func(*Quote) vec.Implied) {
		for _, q := range quotes {
			q.Vol = vol(q)
		}
		m.evaluate(quotes, false)
		for _, q := range quotes {
			if out := judge(q); out != vec.ImpliedOK && !q.done {
				q.Outcome, q.done = out, true
			}
		}
	}
	for _, q := range quotes {
		q.Outcome, q.done = vec.ImpliedOK, false
		q.low, q.high = 0, q.High()
	}
	at(func(q *Quote) float64 { return q.low }, func(q *Quote) vec.Implied {
		switch {
		case q.value-q.value != 0 || !(q.Price >= 0):
			return vec.ImpliedNaN
		case q.Price <= q.value:
			return vec.ImpliedBelow
		}
		return vec.ImpliedOK
	})
	at(func(q *Quote) float64 { return q.high }, func(q *Quote) vec.Implied {
		switch {
		case q.value-q.value != 0:
			return vec.ImpliedNaN
		case q.Price >= q.value:
			return vec.ImpliedAbove
		}
		return vec.ImpliedOK
	})
	first(quotes)
}

// first starts the search at the European volatility of the price without
// dividends, or at 30 % where there is none.
func first(quotes []*Quote) {
	n := len(quotes)
	columns := make([]float64, 6*n)
	col := func(k int) []float64 { return columns[k*n : (k+1)*n] }
	forward, strike, time, price, sign, vol := col(0), col(1), col(2), col(3), col(4), col(5)
	for i, q := range quotes {
		forward[i] = q.Spot * vec.Exp1(float64((q.Rate-q.Yield)*q.Time))
		strike[i], time[i], sign[i] = q.Strike, q.Time, q.Sign
		price[i] = q.Price * vec.Exp1(float64(q.Rate*q.Time))
	}
	vec.ImpliedVol(vol, make([]vec.Implied, n), forward, strike, time, price, sign)
	for i, q := range quotes {
		if q.Vol = vol[i]; !(q.Vol > q.low && q.Vol < q.high) {
			q.Vol = min(0.3, 0.5*q.high)
		}
	}
}

// step narrows the bracket by V(σ) and moves σ.
func (q *Quote) step() {
	f := q.value - q.Price
	switch {
	case f > 0:
		q.high = q.Vol
	case f < 0:
		q.low = q.Vol
	default: // there, or lost
		q.done = true
		return
	}
	next := q.Vol - f/q.vega
	if !(next > q.low && next < q.high) {
		next = 0.5 * (q.low + q.high)
	}
	const close = 0x1p-50
	if math.Abs(next-q.Vol) <= close*q.Vol || q.high-q.low <= close*q.high {
		q.done = true
		return
	}
	q.Vol = next
}

// evaluate sets value and, if it is asked for, vega of each quote at its Vol.
func (m *Methods) evaluate(quotes []*Quote, vega bool) {
	var l american.Lines
	var integral, grid []*Quote
	for _, q := range quotes {
		if !q.American || len(q.Dividends) > 0 {
			grid = append(grid, q)
			continue
		}
		integral = append(integral, q)
		l.Spot, l.Strike, l.Time = append(l.Spot, q.Spot), append(l.Strike, q.Strike), append(l.Time, q.Time)
		l.Vol, l.Rate, l.Yield, l.Sign = append(l.Vol, q.Vol), append(l.Rate, q.Rate), append(l.Yield, q.Yield), append(l.Sign, q.Sign)
	}
	m.after.Resize(len(integral))
	m.integral.Solve(&m.after, &l)
	for i, q := range integral {
		if q.value, q.vega = m.after.Price[i], m.after.Vega[i]; m.after.Status[i] == american.OutOfReach {
			grid = append(grid, q)
		}
	}
	clearLines(&m.gridLines)
	m.gridLines.Convention = m.convention
	for _, q := range grid {
		addLine(&m.gridLines, q.Spot, q.Strike, q.Time, q.Vol, q.Rate, q.Yield, q.Sign, q.American, q.Dividends)
	}
	if !vega {
		m.prices = resized(m.prices, len(grid))
		m.grid.Prices(&m.gridLines, m.prices)
		for i, q := range grid {
			q.value, q.onGrid = m.prices[i], true
		}
		return
	}
	m.grid.SolveLines(&m.gridLines, &m.cells)
	for i, q := range grid {
		q.value, q.vega, q.onGrid = m.cells.Price[i], m.cells.Vega[i], true
	}
}
