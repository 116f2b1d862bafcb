package pde

// schedule is the cash dividends within (0, expiry], in order of time.
type schedule []Dividend

// take sets the schedule to the dividends of a chain that have an effect.
func (s schedule) take(c *Chain) schedule {
	s = s[:0]
	for _, d := range c.Dividends {
		if !(d.Time > 0 && d.Time <= c.Time && d.Amount > 0) {
			continue
		}
		s = append(s, d)
		for i := len(s) - 1; i > 0 && s[i-1].Time > d.Time; i-- {
			s[i], s[i-1] = s[i-1], s[i]
		}
	}
	return s
}

// core is the part of the spot that is lognormal.
func (s schedule) core(c *Chain) float64 {
	if c.Convention != Escrowed {
		return c.Spot
	}
	escrow, _ := s.worth(c.Rate-c.Yield, 0)
	return c.Spot - escrow
}

// sum is that of the amounts.
func (s schedule) sum() float64 {
	var x float64
	for _, d := range s {
		x += d.Amount
	}
	return x
}

// worth is what all amounts take from the price at a time, and its derivative by
// the carry r − q, at which it grows: a yield on the whole price is one on what is
// in escrow too, and the forward then is that of the cash-and-carry argument.
func (s schedule) worth(carry, time float64) (value, byCarry float64) {
	for _, d := range s {
		t := d.Time - time
		v := float64(d.Amount * exp(-float64(carry*t)))
		value += v
		byCarry -= float64(t * v)
	}
	return value, byCarry
}
