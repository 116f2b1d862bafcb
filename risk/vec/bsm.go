package vec

// BSM is a batch of European options under the generalised Black–Scholes–Merton
// formula, row i of every slice being one option.
//
// Computes, with w = Sign and the usual letters for the other inputs,
//
//	d₁,₂     = (ln(S/K) + (r−q)T)/(σ√T) ± ½σ√T
//	Price    = w(S·e^(−qT)·Φ(w·d₁) − K·e^(−rT)·Φ(w·d₂))
//	Delta    = ∂V/∂S    = w·e^(−qT)·Φ(w·d₁)
//	Gamma    = ∂²V/∂S²  = e^(−qT)·φ(d₁)/(S·σ√T)
//	Vega     = ∂V/∂σ    = S·e^(−qT)·φ(d₁)·√T
//	Theta    = ∂V/∂t    = −S·e^(−qT)·φ(d₁)·σ/(2√T) + w(q·S·e^(−qT)·Φ(w·d₁) − r·K·e^(−rT)·Φ(w·d₂))
//	Rho      = ∂V/∂r    = w·T·K·e^(−rT)·Φ(w·d₂), spot and yield fixed
//	CarryRho = ∂V/∂q    = −w·T·S·e^(−qT)·Φ(w·d₁), spot and rate fixed
//	Vanna    = ∂²V/∂S∂σ = −e^(−qT)·φ(d₁)·d₂/σ
//	Volga    = ∂²V/∂σ²  = Vega·d₁·d₂/σ
//	Charm    = ∂²V/∂S∂t = q·Delta + e^(−qT)·φ(d₁)·(½d₂/T − (r−q)/(σ√T))
//	Residual = |Theta + ½σ²S²·Gamma + (r−q)S·Delta − r·Price| / max(|Price|, 10⁻⁴·S)
//
// The residual is taken from the finished outputs: it is what their rounding
// errors leave of the Black–Scholes equation, and shows a fault in any of the
// four it is made of.
//
// Shapes: all slices have the length of Spot. Core and Prices need only the
// outputs they fill. No output may share memory with an input or with another
// output; inputs may share with one another.
// Units: Spot, Strike and Price in one currency; Time T in years; Vol σ per
// √year; Rate r and Yield q continuous per year; Sign +1 for a call and −1 for a
// put. Derivatives are per unit of the variable: theta and charm per year of
// calendar time passing, vega per 1.00 of volatility.
//
// Special cases, none of which gives NaN:
//   - σ√T = 0, expiry or no volatility: the forward is certain. With
//     S·e^(−qT) on the profitable side of K·e^(−rT) the option is worth their
//     difference and its derivatives are the derivatives of that; on the other
//     side all are 0. Exactly between, the price is 0 and Delta, Theta, Rho,
//     CarryRho and Charm are the mean of the two sides. Gamma, Vega, Vanna and
//     Volga are 0 in all three.
//   - S, K, T, σ, r and q may otherwise be any finite number (S, K > 0; T, σ ≥ 0).
//     A result too large for a float64 is ±MaxFloat64; its Residual says nothing.
//
// NaN in all outputs: any input NaN or infinite, S or K ≤ 0, T or σ < 0, or a
// Sign other than ±1.
//
// Accuracy: for |d₁| up to 30, the price within 1e-15 of S·e^(−qT)·Φ(w·d₁) +
// K·e^(−rT)·Φ(w·d₂), the two terms whose difference it is, and within 5e-16 of
// S·e^(−qT) + K·e^(−rT). The sensitivities within 2.5e-14 of themselves while |d₁| < 6
// (2.5e-13 to |d₁| = 30), or of the sum of their terms where they cross 0: the
// rounding of ln(S/K) and of r − q is in them, times d/(σ√T). Measured for 1 day to
// 20 years and 1 % to 200 %, in bsm_reference_test.go; beyond the box of
// bsm_generic.go, lines are valued by the textbook formula as it stands.
// Source: F. Black & M. Scholes, J. Political Economy 81 (1973); R. C. Merton,
// Bell J. Economics 4 (1973).
type BSM struct {
	Spot, Strike, Time, Vol, Rate, Yield, Sign []float64

	Price, Delta, Gamma, Vega, Theta, Rho   []float64
	CarryRho, Vanna, Volga, Charm, Residual []float64
}

// All fills all eleven outputs.
func (b *BSM) All() {
	b.checkInputs()
	b.checkCore()
	n := len(b.Spot)
	if len(b.CarryRho) != n || len(b.Vanna) != n || len(b.Volga) != n || len(b.Charm) != n || len(b.Residual) != n {
		panic(lengthMismatch)
	}
	b.run(allOutputs)
}

// Core fills Price, Delta, Gamma, Vega, Theta and Rho, with the bits All gives.
func (b *BSM) Core() {
	b.checkInputs()
	b.checkCore()
	b.run(coreOutputs)
}

// Prices fills Price, with the bits All gives.
func (b *BSM) Prices() {
	b.checkInputs()
	if len(b.Price) != len(b.Spot) {
		panic(lengthMismatch)
	}
	b.run(priceOnly)
}

// outputs says which outputs a run fills.
type outputs int

const (
	priceOnly outputs = iota
	coreOutputs
	allOutputs
)

const lengthMismatch = "vec: slices of different lengths"

func (b *BSM) checkInputs() {
	n := len(b.Spot)
	if len(b.Strike) != n || len(b.Time) != n || len(b.Vol) != n || len(b.Rate) != n || len(b.Yield) != n || len(b.Sign) != n {
		panic(lengthMismatch)
	}
}

func (b *BSM) checkCore() {
	n := len(b.Spot)
	if len(b.Price) != n || len(b.Delta) != n || len(b.Gamma) != n || len(b.Vega) != n || len(b.Theta) != n || len(b.Rho) != n {
		panic(lengthMismatch)
	}
}
