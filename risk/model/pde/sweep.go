package pde

// course is what a lane of a sweep goes by. In Solve the lanes have one course, in
// Prices each its own; the courses of a sweep are alike, see compare.
type course struct {
	plan *plan
	divs schedule
}

// sweep takes grids from expiry to now on one level.
func (w *work) sweep(level int, convention Convention, grids []grid) {
	var from, dt, drop, left, end row
	for k, l := range w.course[0].plan.legs {
		for j := range lanes {
			p := w.course[j].plan
			l := &p.legs[k]
			from[j], dt[j] = l.from, l.dt/float64(int(1)<<level)
			left[j] = p.legs[0].from - l.from
			if drop[j] = l.drop / p.unit; convention == Escrowed {
				drop[j] = 0
			}
		}
		if l.event {
			w.escrow(&end, convention, k, &from)
			for i := range grids {
				grids[i].exDate(&drop, &left, &end)
			}
		}
		for m := range l.steps << level {
			w.step(convention, grids, k, &from, m, &dt)
		}
	}
}

// step takes grids back by dt, after so many steps of leg k.
func (w *work) step(convention Convention, grids []grid, k int, from *row, after int, dt *row) {
	var t, mid, end row
	if convention == Escrowed {
		for j := range lanes {
			t[j] = from[j] - float64((float64(after)+gamma)*dt[j])
		}
		w.escrow(&mid, convention, k, &t)
		for j := range lanes {
			t[j] = from[j] - float64(float64(after+1)*dt[j])
		}
		w.escrow(&end, convention, k, &t)
	}
	for i := range grids {
		grids[i].step(dt, &mid, &end)
	}
}

// escrow sets what exercise brings beyond the lognormal part of the price, at
// times on leg k.
func (w *work) escrow(offset *row, convention Convention, k int, time *row) {
	if convention != Escrowed {
		return
	}
	var before float64
	for j := range lanes {
		o := &w.course[j]
		carry := w.op.rate[j] - w.op.yield[j]
		if j > 0 && w.op.owner[j] == w.op.owner[j-1] && carry == before {
			offset[j] = offset[j-1]
			continue
		}
		x, _ := o.divs[o.plan.legs[k].ahead:].worth(carry, time[j])
		offset[j], before = float64(w.grids[0].sign/o.plan.unit*x), carry
	}
}
