package american

import "math"

// Newton's method on the equation in the form P = Q of two positive sides,
//
//	P − Q = B·E + b∫B·e^(−bz)·Φ(d₊) du − ∫c du,   c = (a − b·B(u))·g,
//
// which says that the slope of the option is −1 at the boundary; the second term
// belongs to P, or to Q where b < 0. Both sides vary like the tail of a normal
// distribution, so the method is applied to ln P − ln Q. Times P, its linear form
// is δP − ρ·δQ = −P·ln ρ with ρ = P/Q. With β = b·B·e^(−bz)·φ(d₊)/(v√z), which is
// b·B(u)·g, and k = c·d₋/(v√z), the parts change by
//
//	B·E:              −(B·E + ω)·δh(τ)
//	b∫B·e^(−bz)·Φ du: −∫(b·B·e^(−bz)·Φ + β)·δh(τ) du + ∫β·δh(u) du
//	∫c du:             ∫k·δh(τ) du + ∫(β − k)·δh(u) du
//
// and by their derivatives in a, b and v.

// lineariseGeneric sets the rows of the matrix and the right-hand sides: one for
// the step, without its factor ln ρ, for which top and bottom are P and Q, and on
// the last sweep three for the tangents.
func (s *block) lineariseGeneric(last bool) {
	a, b, v, invV := s.a[0], s.b[0], s.v[0], s.invV[0]
	n, row := s.points, s.points+sides
	for i := range n {
		first, o := i*s.inner, s.eq.n+i
		low := 1 / s.ratio[o] // B
		t, w, dm := s.eq.wait[o], s.eq.root[o], s.dm[o]
		omega := float64(float64(s.density[o]*invSqrt2Pi) * float64(invV*s.eq.invRoot[o]))
		be := float64(low * s.tail[o])
		var asset, assetSlope, assetA, assetB, assetV float64
		var cash, cashSlope, cashA, cashB, cashV float64
		for j := first; j < first+s.inner; j++ {
			z, dm := s.eq.wait[j], s.dm[j]
			vz := float64(v * s.eq.root[j])
			g := float64(float64(s.eq.density[j]*s.density[j]) * invV)
			bu := low * s.ratio[j]
			e := float64(s.eq.weight[j]*low) * s.tail[j]
			beta := float64(float64(b*bu) * g)
			c := math.FMA(a, g, 0-beta)
			k := float64(float64(c*dm) * float64(invV*s.eq.invRoot[j]))
			s.beta[j], s.cash[j], s.pull[j] = beta, c, k
			asset = math.FMA(b, e, asset)
			assetSlope += beta
			assetA = math.FMA(beta, z, assetA)
			assetB = math.FMA(e, math.FMA(0-b, z, 1), math.FMA(0-beta, z, assetB))
			assetV = math.FMA(float64(0-beta*vz), dm, assetV)
			cash += c
			cashSlope += k
			cashA = math.FMA(0-(c+k), z, cashA+g)
			cashB = math.FMA(k, z, math.FMA(0-bu, g, cashB))
			cashV = math.FMA(c, math.FMA(dm, dm+vz, -1), cashV)
		}
		assetSlope += asset
		gain := be + larger(asset, 0)
		loss := cash - smaller(asset, 0)
		rho := gain / loss
		sigma := 1.0
		if b < 0 {
			sigma = rho
		}
		slope := math.FMA(rho, cashSlope, math.FMA(sigma, assetSlope, omega+be))
		scale := float64(2*s.h[i]) / slope
		ra := math.FMA(0-rho, cashA, math.FMA(sigma, assetA, float64(omega*t)))
		rb := math.FMA(0-rho, cashB, math.FMA(sigma, assetB, 0-float64(t*(omega+be))))
		rv := math.FMA(math.FMA(0-rho, cashV, float64(sigma*assetV)), invV, 0-float64(float64(omega*w)*dm))
		for j := first; j < first+s.inner; j++ {
			s.pull[j] = float64(math.FMA(rho, s.pull[j], float64((sigma-rho)*s.beta[j]))*0.5) / s.hu[j]
		}
		s.top[i], s.bottom[i], s.scale[i] = gain, loss, scale
		m := s.matrix[i*row : (i+1)*row]
		for k := range n + 1 {
			x := 0.0
			for j := first; j < first+s.inner; j++ {
				x = math.FMA(s.pull[j], s.eq.spread[j*(n+1)+k], x)
			}
			if k == 0 {
				ra = math.FMA(x, s.floorA[0], ra)
				rb = math.FMA(x, s.floorB[0], rb)
				continue
			}
			x = 0 - float64(scale*x)
			if k == i+1 {
				x++
			}
			m[k-1] = x
		}
		m[n] = scale * gain
		if last {
			m[n+1], m[n+2], m[n+3] = scale*ra, scale*rb, scale*rv
		}
	}
}

// eliminateGeneric solves for the step and, on the last sweep, for the tangents.
// The matrix is close to the identity: no pivots are sought. Its factors stay, for
// resolve.
func (s *block) eliminateGeneric(last bool) {
	n, row := s.points, s.points+sides
	used := n + 1
	if last {
		used = row
	}
	for i, x := range s.top {
		s.matrix[i*row+n] *= x
	}
	for p := range n {
		pivot := s.matrix[p*row : p*row+used]
		inv := 1 / pivot[p]
		pivot[p] = inv
		for r := p + 1; r < n; r++ {
			m := s.matrix[r*row : r*row+used]
			f := 0 - float64(m[p]*inv)
			m[p] = f
			for k := p + 1; k < used; k++ {
				m[k] = math.FMA(f, pivot[k], m[k])
			}
		}
	}
	s.substituteGeneric(s.step, n)
	if last {
		s.tangent[0][0], s.tangent[1][0], s.tangent[2][0] = s.floorA[0], s.floorB[0], 0
		for k := range s.tangent {
			s.substituteGeneric(s.tangent[k][1:], n+1+k)
		}
	}
}

// substituteGeneric solves the triangle that elimination leaves for a right-hand side.
func (s *block) substituteGeneric(x []float64, side int) {
	n, row := s.points, s.points+sides
	for i := n - 1; i >= 0; i-- {
		m := s.matrix[i*row : (i+1)*row]
		sum := m[side]
		for k := i + 1; k < n; k++ {
			sum = math.FMA(0-m[k], x[k], sum)
		}
		x[i] = sum * m[i]
	}
}

// advanceGeneric takes the step.
func (s *block) advanceGeneric() {
	least := larger(float64(s.floor[0]*s.floor[0]), leastH*leastH)
	for i, x := range s.step {
		x = larger(s.square[i+1]+x, least)
		s.square[i+1] = x
		s.h[i] = math.Sqrt(x)
	}
}

// bendGeneric sets bent to the right-hand side for ∂²H/∂v²; pull holds ∂H/∂v at
// the nodes. With a dot for the derivative along v, H moving by its tangent,
//
//	ḋ₋ = ((ḣ(u) − ḣ(τ))/√z − d₊)/v,  ḋ₊ = ḋ₋ + √z,  γ = −d₋ḋ₋ − 1/v = ġ/g,
//
// and the second derivative of R is the sum of
//
//	ḣ²·B·E − ω(ḣḋ₊ + d₋ḋ₋ḋ₊ + (ḋ₋+ḋ₊)/v),
//	b∫(ḣ²·B·e^(−bz)·Φ(d₊)) du − ∫β·v√z((ḣ + ḣ(u) + d₋ḋ₋)ḋ₊ + (ḋ₋+ḋ₊)/v) du,
//	∫(β(ḣ(u)² − 2ḣ(u)γ) − c(γ² + γ̇) − k·ḣ(u)²/h(u)) du.
func (s *block) bendGeneric() {
	b, v, invV := s.b[0], s.v[0], s.invV[0]
	for i := range s.points {
		o := s.eq.n + i
		low := 1 / s.ratio[o]
		hi := float64(s.tangent[2][i+1]*0.5) / s.h[i]
		w, dm := s.eq.root[o], s.dm[o]
		omega := float64(float64(s.density[o]*invSqrt2Pi) * float64(invV*s.eq.invRoot[o]))
		dp := math.FMA(v, w, dm)
		dmDot := float64(math.FMA(0-hi, s.eq.invRoot[o], 0-dp) * invV)
		dpDot := dmDot + w
		bend := math.FMA(float64(dm*dmDot), dpDot, math.FMA(hi, dpDot, float64((dmDot+dpDot)*invV)))
		q := math.FMA(float64(hi*hi), float64(low*s.tail[o]), 0-float64(float64(omega*float64(v*w))*bend))
		for j := i * s.inner; j < (i+1)*s.inner; j++ {
			dm, root := s.dm[j], s.eq.root[j]
			vz := float64(v * root)
			e := float64(s.eq.weight[j]*low) * s.tail[j]
			beta, c := s.beta[j], s.cash[j]
			half := 0.5 / s.hu[j]
			hu := float64(s.pull[j] * half)
			dmDot := float64(math.FMA(hu-hi, s.eq.invRoot[j], 0-(dm+vz)) * invV)
			dpDot := dmDot + root
			sum := float64((dmDot + dpDot) * invV)
			gamma := math.FMA(0-dm, dmDot, 0-invV)
			gammaDot := math.FMA(dm, sum, math.FMA(0-dmDot, dmDot, float64(invV*invV)))
			square := float64(hu * hu)
			q = math.FMA(float64(b*e), float64(hi*hi), q)
			q = math.FMA(0-float64(beta*vz), math.FMA(hi+math.FMA(dm, dmDot, hu), dpDot, sum), q)
			q = math.FMA(beta, math.FMA(float64(-2*hu), gamma, square), q)
			q = math.FMA(0-c, math.FMA(gamma, gamma, gammaDot), q)
			k := float64(float64(c*dm) * float64(invV*s.eq.invRoot[j]))
			q = math.FMA(0-float64(2*half), float64(k*square), q)
		}
		s.bent[i] = math.FMA(s.scale[i], q, float64(2*float64(hi*hi)))
	}
}

// resolveGeneric solves for ∂²H/∂v² with the factors eliminate left.
func (s *block) resolveGeneric() {
	n, row := s.points, s.points+sides
	for i := range n {
		m := s.matrix[i*row : (i+1)*row]
		x := s.bent[i]
		for p := range i {
			x = math.FMA(m[p], s.bent[p], x)
		}
		s.bent[i], m[n] = x, x
	}
	s.second[0] = 0
	s.substituteGeneric(s.second[1:], n)
}
