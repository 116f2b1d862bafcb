package pde

// Levels returns price, delta and gamma of the first line on each level up to
// the finest, not extrapolated.
func Levels(c *Chain, finest int) [][3]float64 {
	var w work
	w.divs = w.divs.take(c)
	w.group = []int{0}
	core := c.Spot
	w.similar = w.isSimilar(0, c, core)
	unit := core
	if w.similar {
		unit = c.Strike[0]
		w.plan.lay(1, core/unit, core/unit, c.Vol[0], c, w.divs, 1e-4)
	} else {
		w.plan.lay(core, core, core, c.Vol[0], c, w.divs, 1e-4)
	}
	w.op.terms = bumped(c, c.Vol[0])
	w.aim(c)
	var out [][3]float64
	o := make([]outcome, 1)
	for level := range finest + 1 {
		w.run(level, c, o)
		out = append(out, [3]float64{o[0].price * unit, o[0].delta, o[0].gamma / unit})
	}
	return out
}
