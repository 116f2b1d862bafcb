package american

import "math"

// legendre returns the nodes and weights of the Gauss–Legendre rule on [0, 1], by
// Newton's method on the recurrence of the polynomials.
func legendre(n int) (x, w []float64) {
	x, w = make([]float64, n), make([]float64, n)
	for i := range n {
		_, cos := quarterTurn((float64(i) + 0.75) / (float64(n) + 0.5)) // half of the angle
		z := float64(2*cos*cos) - 1
		var slope float64
		for last := 2.0; math.Abs(z-last) > 1e-15; {
			p, before := 1.0, 0.0
			for j := range n {
				p, before = (float64(float64(2*j+1)*z*p)-float64(float64(j)*before))/float64(j+1), p
			}
			slope = float64(n) * (float64(z*p) - before) / (float64(z*z) - 1)
			last, z = z, z-p/slope
		}
		x[i], w[i] = (1-z)/2, 1/((1-float64(z*z))*slope*slope)
	}
	return x, w
}

// quarterTurn returns the sine and the cosine of x·π/2 for x in [0, 1]. Unlike
// those of package math it gives the same bits on every machine.
func quarterTurn(x float64) (sin, cos float64) {
	if x > 0.5 {
		cos, sin = quarterTurn(1 - x)
		return sin, cos
	}
	angle := x * (math.Pi / 2)
	z := angle * angle
	for k := 20.0; k > 0; k -= 2 {
		sin = 1 - float64(z*sin)/(k*(k+1)) // the series from its end
		cos = 1 - float64(z*cos)/(k*(k-1))
	}
	return sin * angle, cos
}

// chebyshev interpolates on [0, 1] through the extrema of a Chebyshev polynomial.
type chebyshev struct{ at []float64 }

func newChebyshev(n int) *chebyshev {
	c := &chebyshev{at: make([]float64, n+1)}
	for k := range c.at {
		sin, _ := quarterTurn(float64(k) / float64(n))
		c.at[k] = sin * sin
	}
	return c
}

// weights returns the factors of the values at the points in the value at x, by
// the barycentric formula.
func (c *chebyshev) weights(x float64) []float64 {
	n := len(c.at) - 1
	out := make([]float64, n+1)
	var sum float64
	for k, at := range c.at {
		if math.Abs(x-at) < 1e-15 {
			clear(out)
			out[k] = 1
			return out
		}
		b := 1 / (x - at)
		if k%2 == 1 {
			b = -b
		}
		if k == 0 || k == n {
			b /= 2
		}
		out[k] = b
		sum += b
	}
	for k := range out {
		out[k] /= sum
	}
	return out
}
