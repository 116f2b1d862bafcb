package instrument

import (
	"nightbook/risk/model"
	"nightbook/risk/model/pde"
	"nightbook/risk/vec"
)

// AmericanWithDividends prices American calls and puts on a share that pays cash
// dividends before they expire.
func AmericanWithDividends(r *Run) { r.withDividends(true) }

// EuropeanWithDividends prices European calls and puts on such a share.
func EuropeanWithDividends(r *Run) { r.withDividends(false) }

func (r *Run) withDividends(early bool) {
	r.rows = r.rows[:0]
	for i := range r.N {
		r.rows = append(r.rows, int32(i))
	}
	r.onGrid(r.rows, r.Yield, early, func(i int32) *Schedule { return r.Dividends[i] })
}

// terms are what the options of a chain have in common.
type terms struct {
	spot, time, rate, yield, sign float64
	early                         bool
}

// chainKey names a chain of a run.
type chainKey struct {
	terms
	after     [Steps]float64
	dividends *Schedule
}

// longestChain bounds the lines that are solved together, and so how long it takes
// until an interruption is heard.
const longestChain = 256

// onGrid prices rows by finite differences, now and after each step: those that
// differ in strike and volatility only as chains. The results of a line do not
// depend on its chain.
func (r *Run) onGrid(rows []int32, yield []float64, early bool, dividends func(int32) *Schedule) {
	m := r.Methods
	clear(m.chainOf)
	m.chains = m.chains[:0]
	for _, i := range rows {
		key := chainKey{terms: terms{r.Spot[i], r.Time[i], r.Rate[i], yield[i], r.Sign[i], early}, dividends: dividends(i)}
		for step := range key.after {
			key.after[step] = r.TimeAfter[step][i]
		}
		at, ok := m.chainOf[key]
		if !ok || len(m.chains[at].rows) == longestChain {
			at = m.newChain(key)
		}
		m.chains[at].rows = append(m.chains[at].rows, i)
	}
	for k := range m.chains {
		if m.interrupted() {
			return
		}
		r.solveChain(&m.chains[k])
	}
}

// chain is a chain and its rows in the run.
type chain struct {
	key  chainKey
	rows []int32
}

// newChain adds an empty chain in the memory of an earlier one.
func (m *Methods) newChain(key chainKey) int {
	at := len(m.chains)
	if at < cap(m.chains) {
		m.chains = m.chains[:at+1]
	} else {
		m.chains = append(m.chains, chain{})
	}
	c := &m.chains[at]
	c.key, c.rows = key, c.rows[:0]
	m.chainOf[key] = at
	return at
}

func (r *Run) solveChain(c *chain) {
	m, d := r.Methods, c.key.dividends
	m.chain.Strike, m.chain.Vol = m.chain.Strike[:0], m.chain.Vol[:0]
	for _, i := range c.rows {
		m.chain.Strike, m.chain.Vol = append(m.chain.Strike, r.Strike[i]), append(m.chain.Vol, r.Vol[i])
	}
	m.solve(c.key.terms, d.Now)
	from := model.Greeks(m.cells.Greeks)
	for k, s := range r.Greeks.Slices() {
		for j, i := range c.rows {
			(*s)[i] = (*from.Slices()[k])[j]
		}
	}
	for j, i := range c.rows {
		r.Boundary[i], r.PriceError[i] = m.cells.Boundary[j], m.cells.Error[j]
		r.Flags[i] = OnGrid
		switch m.cells.Status[j] {
		case pde.Exercised:
			r.Flags[i] |= ExerciseNow
		case pde.Uncertain:
			r.Flags[i] |= Uncertain
		}
	}
	for step := range r.After {
		later := c.key.terms
		later.time = c.key.after[step]
		if later.spot -= d.Drop[step]; later.spot <= 0 { // the dividend took all, and the price stays 0
			for _, i := range c.rows {
				r.After[step][i] = later.worthless(r.Strike[i])
			}
			continue
		}
		m.solve(later, d.After[step])
		for j, i := range c.rows {
			r.After[step][i] = m.cells.Price[j]
		}
	}
}

// worthless is the value of an option on a share whose price is 0 and stays so.
func (t *terms) worthless(strike float64) float64 {
	switch {
	case t.sign > 0:
		return 0
	case t.early && t.rate > 0:
		return strike
	}
	return float64(strike * vec.Exp1(0-float64(t.rate*t.time)))
}

// solve prices options with the strikes and volatilities that stand in m.chain.
func (m *Methods) solve(t terms, dividends []pde.Dividend) {
	c := &m.chain
	c.Spot, c.Time, c.Rate, c.Yield, c.Sign, c.American = t.spot, t.time, t.rate, t.yield, t.sign, t.early
	c.Dividends, c.Convention = dividends, m.convention
	m.grid.Solve(c, &m.cells)
}
