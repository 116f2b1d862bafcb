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

// sum is that of the amounts.
func (s schedule) sum() float64 {
	var x float64
	for _, d := range s {
		x += d.Amount
	}
	return x
}

// worth is the present value of all amounts at a time, and its derivative by
// the rate.
func (s schedule) worth(rate, time float64) (value, byRate float64) {
	for _, d := range s {
		t := d.Time - time
		v := float64(d.Amount * exp(-float64(rate*t)))
		value += v
		byRate -= float64(t * v)
	}
	return value, byRate
}
