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

// boundary returns the price at the near or far end of the exercised nodes of
// lane j, NaN if there are none or they reach the end of the mesh.
func (g *grid) boundary(j int) (at, beyond float64) {
	first, edge := g.first[j], g.edge[j]
	at, beyond = math.NaN(), math.NaN()
	if edge < first {
		return at, beyond
	}
	if edge < len(g.s)-1 {
		at = g.within(edge, edge+1, j, g.ghost[j])
	}
	if first > 0 {
		beyond = g.within(first, first-1, j, g.ghostFirst[j])
	}
	return at, beyond
}

// within returns the boundary between the exercised node i and the held node k.
func (g *grid) within(i, k, j int, ghost float64) float64 {
	s, h := g.s[i], g.s[k]-g.s[i]
	if ghost == 0 {
		return s
	}
	return s + float64(h*min(1, math.Sqrt(ghost/g.gain(k, j, h))))
}

// read reads lane j of values v, which are those of now but for a step of time,
// at price x. c is used again if it suits.
func (g *grid) read(c *reading, v []row, j int, x float64) point {
	n := len(g.s)
	from, until := 0, n
	if first, edge := g.first[j], g.edge[j]; edge >= first && g.right != never {
		at, beyond := g.boundary(j)
		// past says that x is further from exercise than b, seen from node i on
		past := func(b float64, i, k int) bool { return b == b && (x > b) == (g.s[k] > g.s[i]) && x != b }
		switch {
		case past(at, edge, edge+1):
			from = edge + 1
		case first > 0 && past(beyond, first, first-1):
			until = first
		default:
			return point{value: float64(g.sign*x) + (g.pay[edge] - float64(g.sign*g.s[edge])) + g.offset[j], slope: g.sign, exercised: true}
		}
	}
	if c.x != x || c.first < from || c.first+c.nodes > until || c.nodes < min(readNodes, until-from) {
		c.aim(&g.mesh, x, from, until)
	}
	return point{value: c.sum(&c.f, v, j), slope: c.sum(&c.fs, v, j), curve: c.sum(&c.fss, v, j)}
}
