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
	for i := range r.N {
		if r.Methods.interrupted() {
			return
		}
		r.onGrid(i, r.Yield[i], early, r.Dividends[i])
	}
}

var noDividends Schedule

// option is one option on a spot price.
type option struct {
	spot, strike, time, vol, rate, yield, sign float64
	early                                      bool
}

func (r *Run) option(i int, yield float64, early bool) option {
	return option{r.Spot[i], r.Strike[i], r.Time[i], r.Vol[i], r.Rate[i], yield, r.Sign[i], early}
}

// onGrid prices line i by finite differences, now and after each step.
func (r *Run) onGrid(i int, yield float64, early bool, d *Schedule) {
	m, o := r.Methods, r.option(i, yield, early)
	m.solve(&o, d.Now)
	from := model.Greeks(m.cell.Greeks)
	for k, s := range r.Greeks.Slices() {
		(*s)[i] = (*from.Slices()[k])[0]
	}
	r.Boundary[i], r.PriceError[i] = m.cell.Boundary[0], m.cell.Error[0]
	r.Flags[i] = OnGrid
	switch m.cell.Status[0] {
	case pde.Exercised:
		r.Flags[i] |= ExerciseNow
	case pde.Uncertain:
		r.Flags[i] |= Uncertain
	}
	for step := range r.After {
		r.gridAfter(i, step, yield, early, d)
	}
}

// gridAfter revalues line i after a step.
func (r *Run) gridAfter(i, step int, yield float64, early bool, d *Schedule) {
	o := r.option(i, yield, early)
	o.time = r.TimeAfter[step][i]
	if o.spot -= d.Drop[step]; o.spot <= 0 { // the dividend took all, and the price stays 0
		r.After[step][i] = o.worthless()
		return
	}
	r.Methods.solve(&o, d.After[step])
	r.After[step][i] = r.Methods.cell.Price[0]
}

// worthless is the value on a share whose price is 0 and stays so.
func (o *option) worthless() float64 {
	switch {
	case o.sign > 0:
		return 0
	case o.early && o.rate > 0:
		return o.strike
	}
	return float64(o.strike * vec.Exp1(0-float64(o.rate*o.time)))
}

// solve prices an option as a chain of its own, so that its value does not depend
// on the lines it stands among.
func (m *Methods) solve(o *option, dividends []pde.Dividend) {
	c := &m.chain
	c.Spot, c.Time, c.Rate, c.Yield, c.Sign, c.American = o.spot, o.time, o.rate, o.yield, o.sign, o.early
	c.Dividends, c.Convention = dividends, m.convention
	c.Strike, c.Vol = append(c.Strike[:0], o.strike), append(c.Vol[:0], o.vol)
	m.grid.Solve(c, &m.cell)
}
