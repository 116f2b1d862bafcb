package pde

// operator is the backward equation in every lane, on one mesh or on a mesh for
// each: what the lines of a strip have in common. It depends on no strike.
type operator struct {
	on    [lanes]*mesh // the mesh of each lane
	owner [lanes]int   // the lane whose mesh that is, and whose drops
	own   [lanes]mesh
	rows  // those meshes, as the loops read them
	terms
	lo, di, up []row       // the rows (−lo, di, −up) of M = I − k·L
	f, inv, g  []row       // the factors of M, from the far end
	k          row         // of M; 0 if there is none yet
	drops      [lanes]drop // the latest ex-date's, on each mesh
	perVar     row         // 1/σ²
	signYield  row         // w·q

	mid, z  []row   // scratch of a step: the values of its first stage, a right-hand side half solved
	sum, at []row   // and of an ex-date, see shift
	more    []uint8 // lanes in which exercise brings more at a node
	held    []uint8 // of a search, the lanes of a node that are
}

// open lays out one mesh of a level for all lanes.
func (o *operator) open(l *layout, level int, sign float64) {
	var layouts [lanes]*layout
	layouts[0] = l
	o.openEach(&layouts, level, sign)
}

// openEach lays out meshes of a level, all of one size: one for each lane that has
// a layout; the others are on the mesh of the lane before.
func (o *operator) openEach(l *[lanes]*layout, level int, sign float64) {
	owner := 0
	for j := range lanes {
		if l[j] != nil {
			owner = j
			o.own[j].place(l[j], level, sign)
		}
		o.owner[j], o.on[j] = owner, &o.own[owner]
	}
	o.rows.size(len(o.own[0].s))
	if o.alike() {
		o.rows.repeat(&o.own[0])
	} else {
		for from, until := 0, 0; from < lanes; from = until {
			for until = from + 1; until < lanes && o.owner[until] == from; until++ {
			}
			o.rows.set(from, until, o.on[from])
		}
	}
	o.begin(sign)
}

// alike reports whether all lanes are on one mesh.
func (o *operator) alike() bool { return o.owner == [lanes]int{} }

// ascending reports whether the nodes go up in price.
func (o *operator) ascending() bool { return o.on[0].s[1] > o.on[0].s[0] }

// begin prepares for a sweep.
func (o *operator) begin(sign float64) {
	o.k = row{}
	for j := range o.drops {
		o.drops[j].by = 0
	}
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
func (o *operator) factor(k *row) {
	o.k = *k
	var drift, halfVar, growth row
	for j := range lanes {
		drift[j] = float64(k[j] * (o.rate[j] - o.yield[j]))
		halfVar[j] = float64(float64(0.5*k[j]) * float64(o.vol[j]*o.vol[j]))
		growth[j] = 1 + float64(k[j]*o.rate[j])
	}
	o.factorLanes(&drift, &halfVar, &growth)
}
