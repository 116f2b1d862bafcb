package pde

// operator is the backward equation on one mesh, in every lane: what the lines of
// a strip have in common. It depends on no strike.
type operator struct {
	mesh
	terms
	lo, di, up []row   // the rows (−lo, di, −up) of M = I − k·L
	f, inv, g  []row   // the factors of M, from the far end
	k          float64 // of M; 0 if there is none yet
	drop       drop    // the latest ex-date's
	perVar     row     // 1/σ²
	signYield  row     // w·q

	mid, z  []row   // scratch of a step: the values of its first stage, a right-hand side half solved
	sum, at []row   // and of an ex-date, see shift
	more    []uint8 // lanes in which exercise brings more at a node
	held    []uint8 // of a search, the lanes of a node that are
}

// open lays out the mesh of a level.
func (o *operator) open(l *layout, level int, sign float64) {
	o.place(l, level, sign)
	o.k, o.drop.by = 0, 0
	for j := range lanes {
		o.signYield[j] = float64(sign * o.yield[j])
		o.perVar[j] = 1 / float64(o.vol[j]*o.vol[j])
	}
	n := len(o.s)
	for _, p := range [...]*[]row{&o.lo, &o.di, &o.up, &o.f, &o.inv, &o.g, &o.mid, &o.z} {
		*p = resize(*p, n)
	}
	o.more, o.held = resize(o.more, n), resize(o.held, n)
	o.sum, o.at = resize(o.sum, n+1), resize(o.at, n+1)
}

// factor sets up M = I − k·L and its factors.
func (o *operator) factor(k float64) {
	o.k = k
	var drift, halfVar, growth row
	for j := range lanes {
		drift[j] = float64(k * (o.rate[j] - o.yield[j]))
		halfVar[j] = float64(float64(0.5*k) * float64(o.vol[j]*o.vol[j]))
		growth[j] = 1 + float64(k*o.rate[j])
	}
	o.factorLanes(&drift, &halfVar, &growth)
}
