package pde

// exDate takes the values back over an ex-date: from just after it to just
// before. drop is what the price falls by, 0 where only what exercise brings
// changes; offset is that just before.
func (g *grid) exDate(drop float64, offset *row) {
	if drop > 0 {
		g.shift(drop)
	}
	g.offset = *offset
	g.ghost = row{}
	if g.right == anywhere {
		clear(g.any.before)
		clear(g.any.after)
	}
	if g.right != never {
		for j := range lanes {
			g.exerciseNow(j)
		}
	}
}

// shift replaces V(S) by V(max(S−drop, 0)).
//
// Computes cell means: the running integral of V over the cells is interpolated
// at the shifted edges, by a cubic through four of them, and differenced. What
// one cell loses its neighbour gains, so that a kink narrower than a cell passes
// without a bias; smooth values pass with a fourth-order error. Below the mesh V
// is linear, and flat below a price of 0.
// Source: conservative semi-Lagrangian remapping, as in R. Laprise & A. Plante,
// Monthly Weather Review 123 (1995).
func (g *grid) shift(drop float64) {
	n := len(g.s)
	e := g.edges[:n+1]
	sum := g.sum[:n+1]
	ascending := e[n] > e[0]
	// from the low prices up, where the small sums are
	if ascending {
		sum[0] = row{}
		for i := range n {
			h := e[i+1] - e[i]
			for j := range lanes {
				sum[i+1][j] = sum[i][j] + float64(h*g.v[i][j])
			}
		}
	} else {
		sum[n] = row{}
		for i := n - 1; i >= 0; i-- {
			h := e[i+1] - e[i]
			for j := range lanes {
				sum[i][j] = sum[i+1][j] - float64(h*g.v[i][j])
			}
		}
	}
	tail := g.tail()
	cell := 0 // the first of four edges around x
	var before row
	for i := range n + 1 {
		x := e[i] - drop
		var at row
		if x < tail.edge {
			tail.integral(&at, x)
		} else {
			for cell < n-3 && (e[cell+2] > x) != ascending {
				cell++
			}
			for cell > 0 && (e[cell+1] > x) == ascending {
				cell--
			}
			w := g.cubic(cell, x)
			g.blend(&at, sum[cell:cell+4:cell+4], &w)
		}
		if i > 0 {
			h := e[i] - e[i-1]
			for j := range lanes {
				g.v[i-1][j] = (at[j] - before[j]) / h
			}
		}
		before = at
	}
}

// cubic returns the weights of the integrals at four edges, the first being cell,
// in the cubic at x.
func (g *grid) cubic(cell int, x float64) (w [4]float64) {
	if len(g.over) == 0 { // for this mesh not known yet
		g.over = resize(g.over, len(g.edges)-3)
		for i := range g.over {
			p := g.edges[i : i+4]
			g.over[i] = [4]float64{
				1 / float64(float64((p[0]-p[1])*(p[0]-p[2]))*(p[0]-p[3])),
				1 / float64(float64((p[1]-p[0])*(p[1]-p[2]))*(p[1]-p[3])),
				1 / float64(float64((p[2]-p[0])*(p[2]-p[1]))*(p[2]-p[3])),
				1 / float64(float64((p[3]-p[0])*(p[3]-p[1]))*(p[3]-p[2])),
			}
		}
	}
	p, o := g.edges[cell:cell+4], &g.over[cell]
	a, b, c, d := x-p[0], x-p[1], x-p[2], x-p[3]
	ab, cd := float64(a*b), float64(c*d)
	return [4]float64{float64(b * cd * o[0]), float64(a * cd * o[1]), float64(ab * d * o[2]), float64(ab * c * o[3])}
}

// lowTail is V below the lowest edge, value + slope·(S−edge), and its integral
// up to there.
type lowTail struct {
	edge              float64
	sum, value, slope row
}

func (g *grid) tail() lowTail {
	n := len(g.s)
	i, k, at := 0, 1, 0
	if g.s[1] < g.s[0] {
		i, k, at = n-1, n-2, n
	}
	t := lowTail{edge: g.edges[at], sum: g.sum[at]}
	for j := range lanes {
		t.slope[j] = (g.v[k][j] - g.v[i][j]) / (g.s[k] - g.s[i])
		t.value[j] = g.v[i][j] + float64(t.slope[j]*(t.edge-g.s[i]))
	}
	return t
}

func (t *lowTail) integral(at *row, x float64) {
	y := max(x, 0)
	for j := range lanes {
		v := t.value[j] + float64(t.slope[j]*(y-t.edge))
		at[j] = t.sum[j] + float64((y-t.edge)*float64(0.5*(v+t.value[j]))) + float64((x-y)*v)
	}
}

// exerciseNow exercises lane j wherever that brings more, in the mean over each
// cell: the kink that this leaves lies anywhere between nodes.
func (g *grid) exerciseNow(j int) {
	n := len(g.s)
	offset := g.offset[j]
	g.edge[j] = -1
	before, d := 0.0, g.pay[0]+offset-g.v[0][j]
	for i := range n {
		after := 0.0
		if i < n-1 {
			after = g.pay[i+1] + offset - g.v[i+1][j]
		}
		a, b := float64(0.5*(before+d)), float64(0.5*(d+after))
		if i == 0 {
			a = d
		}
		if i == n-1 {
			b = d
		}
		if d > 0 && g.edge[j] == i-1 {
			g.edge[j] = i
		}
		if g.right == anywhere {
			g.any.on[j][i] = d > 0
		}
		if a > 0 || d > 0 || b > 0 {
			g.v[i][j] += g.gainMean(i, a, d, b)
		}
		before, d = d, after
	}
}

// gainMean is the mean of max(x, 0) over cell i, x going linearly from a at the
// edge before to d at the node and to b at the edge after.
func (g *grid) gainMean(i int, a, d, b float64) float64 {
	if a >= 0 && d >= 0 && b >= 0 {
		return d
	}
	h, k := g.s[i]-g.edges[i], g.edges[i+1]-g.s[i]
	return (float64(h*positiveMean(a, d, float64(0.5*(a+d)))) + float64(k*positiveMean(d, b, float64(0.5*(d+b))))) / (h + k)
}
