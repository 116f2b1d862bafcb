package samples

// smile is a volatility surface in integers. With d the number of standard
// deviations between strike and forward, and s(T) = atm(T)·√T,
//
//	atm(T)  = level + term·100/(days+100)
//	vol     = atm(T)·(1 − skew·d + wing·d²)
//	strike  = forward·(1 + d·s)   above the forward
//	          forward/(1 + |d|·s) below it
//
// which is the same smile at every expiry but for its width. Such a family has
// total variance rising with expiry at every moneyness and call prices convex
// in the strike as long as skew and wing stay small; a test checks both for
// every surface that is ever written.
type smile struct {
	level int64 // hundredths of a volatility point
	term  int64 // hundredths of a volatility point, at the short end
	skew  int64 // thousandths of atm for one standard deviation
	wing  int64 // thousandths of atm for one standard deviation squared
}

// smileNodes are the points of a slice, in hundredths of a standard deviation.
var smileNodes = []int64{-250, -200, -150, -100, -50, 0, 50, 100, 150, 200, 250}

func (s smile) atm(days int64) int64 { return s.level + s.term*100/(days+100) }

// vol returns the volatility at d hundredths of a standard deviation, in
// hundredths of a volatility point.
func (s smile) vol(days, d int64) int64 {
	return s.atm(days) * (10_000_000 - s.skew*d*100 + s.wing*d*d) / 10_000_000
}

// deviation returns s(T) in millionths.
func (s smile) deviation(days int64) int64 {
	// √(days/365) in millionths, times atm in ten-thousandths
	return s.atm(days) * isqrt(days*1_000_000_000_000/365) / 10_000
}

// strike returns the strike at d hundredths of a standard deviation from the
// forward, in the forward's units.
func (s smile) strike(forward, days, d int64) int64 {
	x := s.deviation(days) * d / 100
	if x >= 0 {
		return forward * (1_000_000 + x) / 1_000_000
	}
	return forward * 1_000_000 / (1_000_000 - x)
}

// forwardPrice is price·(1 + (rate − yield)·T), near enough to the true
// forward to hang a smile on. rate and yield are in ten-thousandths a year.
func forwardPrice(price, rate, yield, days int64) int64 {
	return price + price*(rate-yield)*days/(10_000*365)
}

// isqrt is the integer square root, by Newton's method from above.
func isqrt(n int64) int64 {
	if n < 2 {
		return n
	}
	x := n
	for y := (x + 1) / 2; y < x; y = (x + n/x) / 2 {
		x = y
	}
	return x
}

// niceStep returns the largest of 1, 2 or 5 times a power of ten that is at
// most n: the distance of listed strikes.
func niceStep(n int64) int64 {
	step := int64(1)
	for step*10 <= n {
		step *= 10
	}
	switch {
	case step*5 <= n:
		return step * 5
	case step*2 <= n:
		return step * 2
	}
	return step
}
