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
func EuropeanWithDividends(r *Run) {
	if r.Methods.convention == pde.Escrowed {
		r.escrowed()
		return
	}
	r.withDividends(false)
}

func (r *Run) withDividends(early bool) {
	r.rows = r.rows[:0]
	for i := range r.N {
		r.rows = append(r.rows, int32(i))
	}
	r.onGrid(r.rows, r.Yield, early, r.Dividends)
}

// onGrid prices rows by finite differences, now and after each step. The schedules
// are by row of the run; nil stands for no dividends.
func (r *Run) onGrid(rows []int32, yield []float64, early bool, schedules []*Schedule) {
	if len(rows) == 0 {
		return
	}
	m := r.Methods
	l, cells := &m.gridLines, &m.cells
	clearLines(l)
	l.Convention = m.convention
	schedule := func(i int32) *Schedule {
		if schedules == nil {
			return &noDividends
		}
		return schedules[i]
	}
	for _, i := range rows {
		addLine(l, r.Spot[i], r.Strike[i], r.Time[i], r.Vol[i], r.Rate[i], yield[i], r.Sign[i], early, schedule(i).Now)
	}
	m.grid.SolveLines(l, cells)
	from := model.Greeks(cells.Greeks)
	for k, s := range r.Greeks.Slices() {
		for j, i := range rows {
			(*s)[i] = (*from.Slices()[k])[j]
		}
	}
	for j, i := range rows {
		r.Boundary[i], r.PriceError[i] = cells.Boundary[j], cells.Error[j]
		r.Flags[i] = OnGrid
		switch cells.Status[j] {
		case pde.Exercised:
			r.Flags[i] |= ExerciseNow
		case pde.Uncertain:
			r.Flags[i] |= Uncertain
		}
	}
	for step := range r.revaluations {
		for j, i := range rows {
			d := schedule(i)
			l.Spot[j], l.Time[j], l.Dividends[j] = r.Spot[i]-d.Drop[step], r.TimeAfter[step][i], d.After[step]
		}
		m.prices = resized(m.prices, len(rows))
		m.grid.Prices(l, m.prices)
		for j, i := range rows {
			r.After[step][i] = m.prices[j]
			if l.Spot[j] <= 0 { // the dividend took all, and the price stays 0
				r.After[step][i] = worthless(r.Strike[i], r.Rate[i], l.Time[j], r.Sign[i], early)
			}
		}
	}
}

var noDividends Schedule

// worthless is the value of an option on a share whose price is 0 and stays so.
func worthless(strike, rate, time, sign float64, early bool) float64 {
	switch {
	case sign > 0:
		return 0
	case early && rate > 0:
		return strike
	}
	return float64(strike * vec.Exp1(0-float64(rate*time)))
}

func clearLines(l *pde.Lines) {
	for _, s := range []*[]float64{&l.Spot, &l.Strike, &l.Time, &l.Vol, &l.Rate, &l.Yield, &l.Sign} {
		*s = (*s)[:0]
	}
	l.American, l.Dividends = l.American[:0], l.Dividends[:0]
}

func addLine(l *pde.Lines, spot, strike, time, vol, rate, yield, sign float64, early bool, dividends []pde.Dividend) {
	l.Spot, l.Strike, l.Time, l.Vol = append(l.Spot, spot), append(l.Strike, strike), append(l.Time, time), append(l.Vol, vol)
	l.Rate, l.Yield, l.Sign = append(l.Rate, rate), append(l.Yield, yield), append(l.Sign, sign)
	l.American, l.Dividends = append(l.American, early), append(l.Dividends, dividends)
}
