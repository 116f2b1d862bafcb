package pde

import "math"

// readNodes is how many nodes a value between nodes is read from.
const readNodes = 6

// reading is how V and its derivatives by S are read at a price: by the
// polynomial through nodes on the same side of any boundary.
type reading struct {
	x            float64
	first, nodes int
	f, fs, fss   [readNodes]float64
}

// aim prepares to read at price x from nodes from to until−1.
//
// Computes Lagrange's polynomials and their first two derivatives at x.
// Accuracy: sixth order for V, fifth and fourth for its derivatives.
func (c *reading) aim(m *mesh, x float64, from, until int) {
	k := min(readNodes, until-from)
	i := min(max(m.beyond(x)-k/2, from), until-k)
	c.x, c.first, c.nodes = x, i, k
	p := m.s[i : i+k]
	for a := range k {
		v, d, dd, q := 1.0, 0.0, 0.0, 1.0
		for b := range k {
			if b == a {
				continue
			}
			t := x - p[b]
			dd = float64(dd*t) + float64(2*d)
			d = float64(d*t) + v
			v = float64(v * t)
			q = float64(q * (p[a] - p[b]))
		}
		c.f[a], c.fs[a], c.fss[a] = v/q, d/q, dd/q
	}
}

func (c *reading) sum(w *[readNodes]float64, v []row, j int) float64 {
	var x float64
	for i := range c.nodes {
		x += float64(w[i] * v[c.first+i][j])
	}
	return x
}

// point is what is read in one lane at one price.
type point struct {
	value, slope, curve float64
	exercised           bool
}

// within returns the boundary between the exercised node i and its held
// neighbour k.
func (g *grid) within(i, k, j int) float64 {
	ghost := g.ghost[j]
	if g.right == anywhere {
		ghost = g.any.before[k][j]
		if k < i {
			ghost = g.any.after[k][j]
		}
	}
	s, h := g.s[i][j], g.s[k][j]-g.s[i][j]
	if ghost == 0 {
		return s
	}
	return s + float64(h*min(1, math.Sqrt(ghost/g.gain(k, j, h))))
}

// region returns nodes from to until−1, those around price x that are all held,
// or all exercised, in lane j.
func (g *grid) region(x float64, j int) (from, until int, exercised bool) {
	n := len(g.s)
	if g.right == never {
		return 0, n, false
	}
	k := g.on[j].beyond(x) // the first node past x
	i := max(k-1, 0)
	k = min(k, n-1)
	exercised = g.exercised(i, j)
	if exercised != g.exercised(k, j) { // a boundary between them
		b := 0.0
		if exercised {
			b = g.within(i, k, j)
		} else {
			b = g.within(k, i, j)
		}
		if x != b && (x > b) == (g.s[k][j] > g.s[i][j]) {
			i = k
			exercised = g.exercised(k, j)
		} else if x == b {
			exercised = true
			if !g.exercised(i, j) {
				i = k
			}
		}
	}
	from, until = i, i+1
	for from > 0 && g.exercised(from-1, j) == exercised {
		from--
	}
	for until < n && g.exercised(until, j) == exercised {
		until++
	}
	return from, until, exercised
}

// boundaries returns the ends of the exercised prices nearest to x in lane j: the
// one that a price leaves upwards for a put and downwards for a call, and the
// other. An end off the mesh, or too close to its end to be known, is NaN.
func (g *grid) boundaries(x float64, j int) (at, beyond float64) {
	n := len(g.s)
	from, until, exercised := g.region(x, j)
	if !exercised { // on to the exercised prices, those on the side where they are sought first
		switch {
		case from > 0:
			until = from
		case until < n:
			from = until
		default:
			return math.NaN(), math.NaN()
		}
		for from > 0 && g.exercised(from-1, j) {
			from--
		}
		for until < n && g.exercised(until, j) {
			until++
		}
	}
	const margin = 4 // held nodes beyond a boundary
	at, beyond = math.NaN(), math.NaN()
	if until <= n-margin {
		at = g.within(until-1, until, j)
	}
	if from >= margin {
		beyond = g.within(from, from-1, j)
	}
	return at, beyond
}

// read reads lane j of values v, which are those of now but for a step of time,
// at price x. c is used again if it suits.
func (g *grid) read(c *reading, v []row, j int, x float64) point {
	from, until, exercised := g.region(x, j)
	if exercised {
		return point{value: float64(g.sign*x) + (g.pay(from, j) - float64(g.sign*g.s[from][j])) + g.offset[j], slope: g.sign, exercised: true}
	}
	if c.x != x || c.first < from || c.first+c.nodes > until || c.nodes < min(readNodes, until-from) {
		c.aim(g.on[j], x, from, until)
	}
	return point{value: c.sum(&c.f, v, j), slope: c.sum(&c.fs, v, j), curve: c.sum(&c.fss, v, j)}
}
