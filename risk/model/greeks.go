package model

// Greeks are the results of a model, row i of each slice being one contract:
// the value V and its partial derivatives.
//
// Units: V in the price currency; Delta ∂V/∂S; Gamma ∂²V/∂S²; Vega ∂V/∂σ per
// 1.00; Theta ∂V/∂t per year, calendar time passing; Rho ∂V/∂r and CarryRho
// ∂V/∂q per 1.00; Vanna ∂²V/∂S∂σ; Volga ∂²V/∂σ²; Charm ∂²V/∂S∂t.
// Residual is |Θ + ½σ²S²Γ + (r−q)SΔ − rV| / max(|V|, 10⁻⁴·S), NaN where the
// model does not rest on that equation.
type Greeks struct {
	Price, Delta, Gamma, Vega, Theta, Rho, CarryRho, Vanna, Volga, Charm, Residual []float64
}

// Slices returns the columns in a fixed order.
func (g *Greeks) Slices() [11]*[]float64 {
	return [11]*[]float64{&g.Price, &g.Delta, &g.Gamma, &g.Vega, &g.Theta, &g.Rho, &g.CarryRho, &g.Vanna, &g.Volga, &g.Charm, &g.Residual}
}

// zero sets every result to 0 but the residual, which does not apply.
func (g *Greeks) zero() {
	for _, s := range g.Slices() {
		clear(*s)
	}
	fill(g.Residual, nan)
}

func fill(s []float64, x float64) {
	for i := range s {
		s[i] = x
	}
}
