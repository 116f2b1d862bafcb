package vec

// Tiers lists the tiers this build and machine can run, "scalar" first.
func Tiers() []string { return tierNames[:bestTier()+1] }

// SetTier forces a tier and returns a function that restores the former one.
func SetTier(name string) (restore func()) {
	was := active
	active, _ = chooseTier(name, bestTier())
	if Tier() != name {
		panic("no such tier here: " + name)
	}
	return func() { active = was }
}

// ChooseTier is chooseTier by name.
func ChooseTier(asked, best string) (name, note string) {
	b, _ := chooseTier(best, avx512)
	t, note := chooseTier(asked, b)
	return tierNames[t], note
}

// InBox reports whether a line is left to vector code.
var InBox = inBox

// EdgeValue values a line as if it were outside the box.
func EdgeValue(s, k, t, v, r, q, w float64) [11]float64 {
	o := bsmEdge(s, k, t, v, r, q, w)
	return [11]float64{o.price, o.delta, o.gamma, o.vega, o.theta, o.rho, o.carryRho, o.vanna, o.volga, o.charm, o.residual}
}
