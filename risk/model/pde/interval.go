package pde

// Where exercise is optimal between two prices only: puts with r < 0 and q < r,
// calls with q < 0 and r < q. Such lines are few, so a lane at a time.

// stepInterval is step for two boundaries. g.z and g.sum hold the right-hand
// side eliminated from the far end and from the near one.
func (g *grid) stepInterval(offsetMid, offset *row) {
	n := len(g.s)
	for j := range lanes {
		g.eliminateNear(j)
		for i := range n {
			g.rhs[i] = g.trapezoid(i, j, offsetMid)
		}
		g.stageInterval(j, g.mid, offsetMid[j])
		for i := range n {
			g.rhs[i] = fma(bdfMid, g.mid[i][j], float64(-bdfOld*g.v[i][j]))
		}
		g.stageInterval(j, g.prev, offset[j])
	}
	g.v, g.prev = g.prev, g.v
	g.offset = *offset
}

// eliminateNear factors lane j of M from the near end: 1/pivot and, over the
// pivot, the neighbour after.
func (g *grid) eliminateNear(j int) {
	var up, inv float64
	for i := range len(g.s) {
		lo := g.lo[i][j]
		inv = 1 / (g.di[i][j] - float64(float64(lo*inv)*up))
		up = g.up[i][j]
		g.nearInv[i], g.nearUp[i] = inv, float64(up*inv)
	}
}

// stageInterval completes a stage of lane j.
//
// Computes the complementarity problem by substitution outwards from the
// exercised nodes in both directions. The exercised nodes are found from those
// of the stage before; where there were none, from the node where holding
// throughout falls furthest short of exercise.
func (g *grid) stageInterval(j int, dst []row, offset float64) {
	n := len(g.s)
	var y, x float64
	for i := n - 1; i >= 0; i-- {
		y = fma(g.f[i][j], y, g.rhs[i])
		g.z[i][j] = y * g.inv[i][j]
	}
	y = 0
	for i := range n {
		y = fma(g.lo[i][j], y, g.rhs[i])
		y *= g.nearInv[i]
		g.near[i] = y
	}
	first, edge := g.first[j], g.edge[j]
	if first <= edge {
		first, edge = g.narrow(j, first, edge, offset)
	}
	if first >= edge { // one node or none: hold throughout, and see
		worst := 0.0
		first, edge = 0, -1
		for i := range n {
			x = fma(g.g[i][j], x, g.z[i][j])
			dst[i][j] = x
			if short := g.pay[i] + offset - x; short > worst {
				worst, first, edge = short, i, i
			}
		}
		if edge >= 0 {
			first, edge = g.narrow(j, first, edge, offset)
		}
	}
	g.first[j], g.edge[j] = first, edge
	g.ghost[j], g.ghostFirst[j] = 0, 0
	if edge < first {
		return
	}
	for i := first; i <= edge; i++ {
		dst[i][j] = g.pay[i] + offset
	}
	if i := edge + 1; i < n {
		c := g.cell(i, j, offset)
		g.ghost[j] = c.ghost()
		dst[i][j] = g.pay[i] + offset + fma(c.pull, g.ghost[j], c.excess)
		for i++; i < n; i++ {
			dst[i][j] = fma(g.g[i][j], dst[i-1][j], g.z[i][j])
		}
	}
	if i := first - 1; i >= 0 {
		c := g.nearCell(i, j, offset)
		g.ghostFirst[j] = c.ghost()
		dst[i][j] = g.pay[i] + offset + fma(c.pull, g.ghostFirst[j], c.excess)
		for i--; i >= 0; i-- {
			dst[i][j] = fma(g.nearUp[i], dst[i+1][j], g.near[i])
		}
	}
}

// narrow moves both boundaries, never past one another.
func (g *grid) narrow(j, first, edge int, offset float64) (int, int) {
	n := len(g.s)
	held := func(i int) bool { c := g.cell(i, j, offset); return c.held() }
	nearHeld := func(i int) bool { c := g.nearCell(i, j, offset); return c.held() }
	if edge+1 < n && !held(edge+1) {
		for edge+1 < n && !held(edge+1) {
			edge++
		}
	} else {
		for edge > first && held(edge) {
			edge--
		}
	}
	if first > 0 && !nearHeld(first-1) {
		for first > 0 && !nearHeld(first-1) {
			first--
		}
	} else {
		for first < edge && nearHeld(first) {
			first++
		}
	}
	return first, edge
}

// nearCell is cell seen from the other side: if all nodes after i are exercised.
func (g *grid) nearCell(i, j int, offset float64) edgeCell {
	c := edgeCell{pull: g.nearUp[i]}
	c.excess = fma(c.pull, g.pay[i+1]+offset, g.near[i]-(g.pay[i]+offset))
	c.gain = g.gain(i, j, g.s[i+1]-g.s[i])
	return c
}
