package market

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"sort"

	"nightbook/risk/vec"
	"nightbook/schema"
)

// Surface is an implied volatility surface.
//
// Computes the total variance w(k, T) = σ²T at log forward moneyness
// k = ln(K/F(T)), of a spread at absolute moneyness k = K − F(T). Within a slice, w is the monotone piecewise cubic of Fritsch
// and Butland in k, flat beyond the end strikes. Between two expiries, w is
// linear in T at the same k. Before the first and beyond the last expiry, σ is
// that of the end slice at the same k.
// Units: T in years, k dimensionless, σ per √year; of a spread k and σ in units
// of its price.
// Source: F. N. Fritsch and J. Butland, A method for constructing local
// monotone piecewise cubic interpolants, SIAM J. Sci. Stat. Comput. 5 (1984).
type Surface struct {
	slices   []slice // by T ascending
	absolute bool    // of a spread
}

func moneyness(strike, forward float64, absolute bool) float64 {
	if absolute {
		return strike - forward
	}
	return vec.LogRatio1(strike, forward)
}

// slice is the smile of one expiry: w at each strike, and the curves between.
type slice struct {
	T      float64
	k, w   []float64
	pieces []piece
}

// piece is the cubic from one strike to the next, in Bernstein form.
type piece struct{ k, h, b0, b1, b2, b3 float64 }

// point is one quoted volatility.
type point struct{ strike, vol float64 }

// newSlice builds the smile of one expiry from points with different strikes.
func newSlice(T, forward float64, points []point, absolute bool) (slice, error) {
	sort.Slice(points, func(i, j int) bool { return points[i].strike < points[j].strike })
	s := slice{T: T}
	for i, p := range points {
		k := moneyness(p.strike, forward, absolute)
		if k-k != 0 {
			return s, fmt.Errorf("strike %v cannot be set against the forward %v of the expiry in %.6g years", p.strike, forward, T)
		}
		if i > 0 && !(k > s.k[i-1]) {
			return s, fmt.Errorf("strikes %v and %v of the expiry in %.6g years cannot be told apart", points[i-1].strike, p.strike, T)
		}
		s.k = append(s.k, k)
		s.w = append(s.w, float64(p.vol*p.vol)*T)
	}
	m := slopes(s.k, s.w)
	for i := 1; i < len(s.k); i++ {
		h, b0, b3 := s.k[i]-s.k[i-1], s.w[i-1], s.w[i]
		s.pieces = append(s.pieces, piece{s.k[i-1], h, b0, b0 + float64(h*m[i-1])/3, b3 - float64(h*m[i])/3, b3})
	}
	return s, nil
}

// slopes returns the Fritsch–Butland derivatives of y over x, with the
// three-point end condition, limited so that the curve stays monotone.
func slopes(x, y []float64) []float64 {
	n := len(x)
	m := make([]float64, n)
	switch n {
	case 1:
		return m
	case 2:
		d := (y[1] - y[0]) / (x[1] - x[0])
		m[0], m[1] = d, d
		return m
	}
	h, d := make([]float64, n-1), make([]float64, n-1)
	for i := range h {
		h[i] = x[i+1] - x[i]
		d[i] = (y[i+1] - y[i]) / h[i]
	}
	for i := 1; i < n-1; i++ {
		if d[i-1]*d[i] > 0 { // a weighted harmonic mean; 0 at a turning point
			a, b := float64(2*h[i])+h[i-1], h[i]+float64(2*h[i-1])
			m[i] = (a + b) / (a/d[i-1] + b/d[i])
		}
	}
	m[0] = endSlope(h[0], h[1], d[0], d[1])
	m[n-1] = endSlope(h[n-2], h[n-3], d[n-2], d[n-3])
	return m
}

// endSlope is the three-point derivative at the end of an interval of length
// h0 and slope d0 that is followed by one of length h1 and slope d1.
func endSlope(h0, h1, d0, d1 float64) float64 {
	m := (float64((float64(2*h0)+h1)*d0) - float64(h0*d1)) / (h0 + h1)
	switch {
	case m*d0 <= 0:
		return 0
	case d0*d1 <= 0 && math.Abs(m) > 3*math.Abs(d0):
		return 3 * d0
	}
	return m
}

// variance returns w(k) of the slice.
func (s *slice) variance(k float64) float64 {
	n := len(s.k)
	if k <= s.k[0] {
		return s.w[0]
	}
	if k >= s.k[n-1] {
		return s.w[n-1]
	}
	// The piece with k[i] < k <= k[i+1]. There is no telling which way a step of the
	// search goes, so that none is a jump: the difference bears the sign of less.
	i := 0
	for left := n - 1; left > 1; {
		half := left / 2
		less := int(int64(math.Float64bits(s.k[i+half]-k)) >> 63)
		i += half & less
		left -= half
	}
	p := &s.pieces[i]
	u := (k - p.k) / p.h
	v := 1 - u
	// a convex combination of four ordinates
	uv3 := float64(3 * float64(u*v))
	return float64(float64(v*v)*v*p.b0) + float64(uv3*(float64(v*p.b1)+float64(u*p.b2))) + float64(float64(u*u)*u*p.b3)
}

// Smile is a surface at one time to expiry.
type Smile struct {
	Inside    bool    // the time lies within the expiries
	near, far *slice  // far is nil where near counts alone
	share     float64 // of far
	over      float64 // the time over which w stands
}

// Smile returns the surface at T > 0.
func (s *Surface) Smile(T float64) Smile {
	n := len(s.slices)
	i := sort.Search(n, func(i int) bool { return s.slices[i].T >= T })
	switch {
	case i == n:
		last := &s.slices[n-1]
		return Smile{near: last, over: last.T}
	case i == 0 || s.slices[i].T == T:
		next := &s.slices[i]
		return Smile{Inside: next.T == T, near: next, over: next.T}
	}
	prev, next := &s.slices[i-1], &s.slices[i]
	return Smile{Inside: true, near: prev, far: next, share: (T - prev.T) / (next.T - prev.T), over: T}
}

// Vol returns σ at a moneyness: k = ln(K/F), of a spread k = K − F.
func (s *Smile) Vol(k float64) float64 {
	w := s.near.variance(k)
	if s.far != nil {
		w = float64((1-s.share)*w) + float64(s.share*s.far.variance(k))
	}
	return math.Sqrt(w / s.over)
}

// calendarFall returns the first slice whose total variance at the money is
// below that of the slice before it, or -1.
func (s *Surface) calendarFall() int {
	for i := 1; i < len(s.slices); i++ {
		if s.slices[i].variance(0) < s.slices[i-1].variance(0) {
			return i
		}
	}
	return -1
}

// newSurface builds a surface from the rows of one underlying. forward gives
// the forward price to a time. It returns the days of the slices that are not
// after as_of, which are left out; without any other slice the surface is nil.
func newSurface(rows []schema.VolRow, asOf schema.Moment, absolute bool, forward func(T float64, day schema.Date) float64) (*Surface, []schema.Date, error) {
	byTime := map[float64][]point{}
	day := map[float64]schema.Date{}
	var past []schema.Date
	for _, r := range rows {
		T := asOf.Years(r.Day, r.Minute)
		if T <= 0 {
			past = append(past, r.Day)
			continue
		}
		byTime[T] = append(byTime[T], point{r.Strike, r.Vol})
		day[T] = r.Day
	}
	slices.Sort(past)
	past = slices.Compact(past)
	s := &Surface{absolute: absolute}
	for _, T := range slices.Sorted(maps.Keys(byTime)) {
		sl, err := newSlice(T, forward(T, day[T]), byTime[T], absolute)
		if err != nil {
			return nil, past, err
		}
		s.slices = append(s.slices, sl)
	}
	if len(s.slices) == 0 {
		return nil, past, nil
	}
	return s, past, nil
}
