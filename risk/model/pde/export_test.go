package pde

// Levels returns price, delta and gamma of the first line on each level up to
// the finest, not extrapolated.
func Levels(c *Chain, finest int) [][3]float64 {
	var w work
	w.divs = w.divs.take(c)
	w.group = []int{0}
	core := c.Spot
	w.plan.lay(core, core, c.Strike[0], c.Vol[0], c, w.divs, 1e-4)
	w.fine.terms = bumped(c, c.Vol[0])
	w.fine.sign, w.fine.right = c.Sign, w.right(c)
	w.aim(c, c.Strike[0])
	var out [][3]float64
	o := make([]outcome, 1)
	for level := range finest + 1 {
		w.run(&w.fine, level, c, c.Strike[0], o)
		out = append(out, [3]float64{o[0].price * w.plan.unit, o[0].delta, o[0].gamma / w.plan.unit})
	}
	return out
}
