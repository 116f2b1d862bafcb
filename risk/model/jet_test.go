package model

import (
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/vec"
)

// slots are the numbers of a jet in the order of its fields.
func slots(x jet) [10]float64 {
	return [10]float64{x.v, x.s, x.vol, x.t, x.r, x.q, x.ss, x.svol, x.volvol, x.st}
}

// derivedBy names, for each slot, the variables it is differentiated by: S, σ, T, r, q.
var derivedBy = [10][]int{{}, {0}, {1}, {2}, {3}, {4}, {0, 0}, {0, 1}, {1, 1}, {0, 2}}

// Sums and products of whole numbers are exact, so a polynomial's jet must be
// the derivatives of its terms to the last bit.
func TestJetOfAPolynomial(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for range 300 {
		x := [5]float64{}
		for i := range x {
			x[i] = float64(rng.IntN(9) - 4)
		}
		m := jetMarket(x[0], x[1], x[2], x[3], x[4])
		vars := [5]jet{m.s, m.vol, m.t, m.r, m.q}
		var sum jet
		var want [10]float64
		for range 4 {
			c := float64(rng.IntN(19) - 9)
			term := jet{}.constant(1)
			var power [5]int
			for i := range power {
				power[i] = rng.IntN(4)
				for range power[i] {
					term = term.times(vars[i])
				}
			}
			sum = sum.plus(term.scaled(c)).shifted(3).minus(jet{}.constant(3))
			for slot, by := range derivedBy {
				d, p := c, power
				for _, i := range by {
					d *= float64(p[i])
					p[i] = max(p[i]-1, 0)
				}
				for i := range p {
					for range p[i] {
						d *= x[i]
					}
				}
				want[slot] += d
			}
		}
		if got := slots(sum); got != want {
			t.Fatalf("at %v: %v, want %v", x, got, want)
		}
	}
}

// mixed returns two positive jets in which every slot is at work.
func mixed(rng *rand.Rand) (x, y jet) {
	m := jetMarket(0.5+rng.Float64(), 0.5+rng.Float64(), 0.5+rng.Float64(), rng.Float64()-0.5, rng.Float64()-0.5)
	x = m.s.times(m.vol).plus(m.t.times(m.s)).plus(m.r.times(m.vol).times(m.vol)).shifted(1)
	y = m.vol.times(m.vol).times(m.t).plus(m.s.times(m.s)).plus(m.q.times(m.t)).shifted(0.75)
	return x, y
}

func near(t *testing.T, what string, got, want jet, ulp float64) {
	t.Helper()
	g, w := slots(got), slots(want)
	scale := 0.0
	for i := range w {
		scale = max(scale, math.Abs(w[i]))
	}
	for i := range w {
		if !(math.Abs(g[i]-w[i]) <= ulp*0x1p-52*scale) {
			t.Fatalf("%s, slot %d: %v, want %v", what, i, g, w)
		}
	}
}

// Each function against an identity that takes it apart into others, down to
// products, whose rules the polynomials have shown.
func TestJetIdentities(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	for range 2000 {
		x, y := mixed(rng)
		near(t, "x·1/x", x.times(invOf(x)), jet{v: 1}, 64)
		near(t, "√x·√x", sqrtOf(x).times(sqrtOf(x)), x, 16)
		near(t, "exp ln x", expOf(logOf(x, 1)), x, 64)
		near(t, "ln exp x", logOf(expOf(x), 1), x, 64)
		near(t, "e^x·e^y", expOf(x).times(expOf(y)), expOf(x.plus(y)), 64)
		near(t, "ln(x/y)", logRatioOf(x, y), logOf(x, 1).minus(logOf(y, 1)), 64)
		near(t, "ln(x/2)", logOf(x, 2), logOf(x, 1).shifted(-math.Ln2), 64)
		near(t, "ln(1+x)", log1pOf(x), logOf(x.shifted(1), 1), 64)
		near(t, "Φ(x) + Φ(−x)", cdfOf(x).plus(cdfOf(x.scaled(-1))), jet{v: 1}, 64)
		near(t, "x·y", x.of2(y, x.v*y.v, y.v, x.v, 0, 1, 0), x.times(y), 8)
		near(t, "x²·y", x.of2(y, x.v*x.v*y.v, 2*x.v*y.v, x.v*x.v, 2*y.v, 2*x.v, 0), x.times(x).times(y), 16)
	}
}

// dΦ is φ, and e^q·Φ(x) takes products of those, on either side of tailFrom. In
// the tail the reference loses the digits that leg is there to keep.
func TestLeg(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for range 2000 {
		x, q := mixed(rng)
		x = x.shifted(-10 * rng.Float64())
		n := q.minus(x.times(x).scaled(0.5))
		got := leg(q, n, x)
		near(t, "e^q·Φ(x)", got, expOf(q).times(cdfOf(x)), 256+x.v*x.v*x.v*x.v)
		if p := float64(leg(plain(q.v), plain(n.v), plain(x.v))); p != got.v {
			t.Fatalf("leg as a plain number %v, as a jet %v", p, got.v)
		}
		if d, want := cdfOf(jet{v: x.v, s: 1}), vec.NormPDF1(x.v); d.s != want || math.Abs(d.v-vec.NormCDF1(x.v)) > 0 {
			t.Fatalf("Φ(%v) has slope %v, not %v", x.v, d.s, want)
		}
	}
}

func TestMills(t *testing.T) {
	// computed with mpmath at 60 digits
	for _, c := range [][4]float64{
		{5.0, 0.076919304975006296, -0.0143457555264011981, 0.00519052734300030538},
		{6.5, 0.0600156753431718304, -0.00884039067081578016, 0.00255313598286925938},
		{8.0, 0.0491225462124249321, -0.00596191070203322102, 0.00142726059615916396},
		{8.25, 0.0476753907265508522, -0.00562030690738814695, 0.00130785874059863992},
		{12.0, 0.0330189710772145347, -0.0027146274748582612, 0.0004434413789154003},
		{40.0, 0.00996733518830130998, -0.000248872869380278601, 0.0000124204130901659501},
		{1000.0, 0.000398941881460349097, -3.98941083580575566e-7, 7.97879773531405009e-10},
	} {
		m, d, dd := mills(c[0])
		for i, got := range []float64{m, d, dd} {
			if want := c[i+1]; !(math.Abs(got-want) <= 8*0x1p-53*math.Abs(want)) {
				t.Errorf("derivative %d of the Mills ratio at %v = %v, want %v", i, c[0], got, want)
			}
		}
	}
}

func TestLog1p(t *testing.T) {
	for _, x := range []float64{0, 5e-324, 1e-300, 1e-17, 2.3e-16, 3e-9, 0.01, 0.3, 1, 7, 1e9, 1e300} {
		if got, want := log1p(x), math.Log1p(x); !(math.Abs(got-want) <= 4*0x1p-53*want) {
			t.Errorf("ln(1 + %v) = %v, want %v", x, got, want)
		}
	}
}
