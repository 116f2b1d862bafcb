package pde

import (
	"math"

	"nightbook/risk/vec"
)

// layout describes a family of meshes, each twice as dense as the one before.
//
// Nodes are even in ξ, with ln S = width·sinh(ξ): prices are in units of the
// centre of the mesh, where the nodes are densest.
type layout struct {
	width        float64 // of the dense part, in ln S
	step         float64 // in ξ, on level 0
	below, above int     // nodes on either side of S = 1 on level 0
}

// mesh is where a sweep keeps values: prices of the underlying, ordered from the
// side where exercise is sought (ascending for a put, descending for a call),
// with the weights of central differences between them.
type mesh struct {
	s        []float64
	edges    []float64    // of the cells, halfway between nodes: len(s)+1
	span     []float64    // from edge to edge
	perSpan  []float64    // 1/span
	ratio2   []float64    // (the way from the node before, over S)²
	lo2, up2 []float64    // weights of the neighbours before and after in S²·∂²/∂S²
	lo1, up1 []float64    // and in S·∂/∂S
	over     [][4]float64 // denominators of cubics through four edges; see cubic
}

// place lays out the mesh of a level.
func (m *mesh) place(l *layout, level int, sign float64) {
	below, above := l.below<<level, l.above<<level
	d := l.step / float64(int(1)<<level)
	n := below + above + 1
	m.s, m.span = resize(m.s, n), resize(m.span, n)
	x := m.span // not in use yet
	for i := range n {
		k := i - below
		if sign > 0 {
			k = above - i
		}
		x[i] = float64(k) * d
	}
	vec.Exp(m.s, x)
	for i, e := range m.s { // good to some ulp of 1: nodes need to be somewhere, not at a place
		x[i] = l.width * float64(0.5*(e-1/e))
	}
	vec.Exp(m.s, x)
	m.over = m.over[:0]
	m.weigh()
}

// weigh finds the weights.
//
// Computes, for cells h before and k after S, the three-point differences
// −k/(h(h+k)), h/(k(h+k)) of ∂/∂S and 2/(h(h+k)), 2/(k(h+k)) of ∂²/∂S²; the
// node itself has minus their sum, so that constants and S are exact. At both
// ends V is taken to be linear in S.
// Accuracy: second order on meshes whose cells change smoothly.
func (m *mesh) weigh() {
	n := len(m.s)
	m.lo1, m.up1, m.lo2, m.up2 = resize(m.lo1, n), resize(m.up1, n), resize(m.lo2, n), resize(m.up2, n)
	m.edges = resize(m.edges, n+1)
	m.span, m.perSpan, m.ratio2 = resize(m.span, n), resize(m.perSpan, n), resize(m.ratio2, n)
	for i := 1; i < n-1; i++ {
		s := m.s[i]
		h, k := s-m.s[i-1], m.s[i+1]-s
		f := s / (h + k)
		m.lo1[i], m.up1[i] = -f*(k/h), f*(h/k)
		m.lo2[i], m.up2[i] = 2*f*(s/h), 2*f*(s/k)
	}
	m.lo1[0], m.lo2[0], m.up2[0] = 0, 0, 0
	m.up1[0] = m.s[0] / (m.s[1] - m.s[0])
	m.up1[n-1], m.lo2[n-1], m.up2[n-1] = 0, 0, 0
	m.lo1[n-1] = m.s[n-1] / (m.s[n-2] - m.s[n-1])
	m.edges[0], m.edges[n] = m.s[0]-float64(0.5*(m.s[1]-m.s[0])), m.s[n-1]+float64(0.5*(m.s[n-1]-m.s[n-2]))
	m.ratio2[0] = 0
	for i := 1; i < n; i++ {
		m.edges[i] = 0.5 * (m.s[i-1] + m.s[i])
		x := (m.s[i] - m.s[i-1]) / m.s[i]
		m.ratio2[i] = x * x
	}
	for i := range n {
		m.span[i] = m.edges[i+1] - m.edges[i]
		m.perSpan[i] = 1 / m.span[i]
	}
}

// rows are numbers of a mesh at its nodes, by lane: what the loops over all lanes
// read.
type rows struct {
	s, span, perSpan, ratio2, lo2, up2, lo1, up1 []row
}

// numbers are those of a mesh, and where the rows of them are.
type numbers struct {
	to   *[]row
	from []float64
}

func (r *rows) of(m *mesh) [8]numbers {
	return [8]numbers{
		{&r.s, m.s}, {&r.span, m.span}, {&r.perSpan, m.perSpan}, {&r.ratio2, m.ratio2},
		{&r.lo2, m.lo2}, {&r.up2, m.up2}, {&r.lo1, m.lo1}, {&r.up1, m.up1},
	}
}

func (r *rows) size(n int) {
	for _, p := range r.of(new(mesh)) {
		*p.to = resize(*p.to, n)
	}
}

// set has lanes from from to until−1 on a mesh.
func (r *rows) set(from, until int, m *mesh) {
	for _, c := range r.of(m) {
		to := *c.to
		for i, x := range c.from {
			for j := from; j < until; j++ {
				to[i][j] = x
			}
		}
	}
}

// beyond returns the first node past price x in the order of the mesh, len(s)
// if there is none.
func (m *mesh) beyond(x float64) int {
	ascending := m.s[1] > m.s[0]
	lo, hi := 0, len(m.s)
	for lo < hi {
		mid := int(uint(lo+hi) / 2)
		if m.s[mid] != x && (m.s[mid] > x) == ascending {
			hi = mid
		} else {
			lo = mid + 1
		}
	}
	return lo
}

func asinh(x float64) float64 {
	a := math.Abs(x)
	return math.Copysign(vec.Log1(a+math.Sqrt(math.FMA(a, a, 1))), x)
}
