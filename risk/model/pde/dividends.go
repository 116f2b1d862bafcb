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
		v, by := d.escrow(carry, time)
		value += v
		byCarry += by
	}
	return value, byCarry
}

func (d Dividend) escrow(carry, time float64) (value, byCarry float64) {
	t := d.Time - time
	value = float64(d.Amount * exp(-float64(carry*t)))
	return value, -float64(t * value)
}

// Escrow is what the dividends within (0, expiry] take from a price under the
// escrowed model, Σ D·e^(−(r−q)t), and its derivative by the carry r − q.
func Escrow(dividends []Dividend, expiry, carry float64) (value, byCarry float64) {
	for _, d := range dividends {
		if d.Time > 0 && d.Time <= expiry {
			v, by := d.escrow(carry, 0)
			value += v
			byCarry += by
		}
	}
	return value, byCarry
}
