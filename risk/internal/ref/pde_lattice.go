//go:build ignore

// A lattice for American and European options with cash dividends: an explicit
// method that shares no code, no mesh and no stencil with package pde. Two programs
// use it, pde_table.go and pde_lines.go.
//
// Along y = ln S − (r − q − σ²/2)·t the equation is the heat equation. With
// h² = 3σ²·dt the weights 1/6, 2/3, 1/6 solve it to fourth order in h. Exercise is
// allowed after every step, so an American value comes out as that of an option
// exercisable on N dates, whose distance to the limit is proportional to 1/N: two
// lattices, N and 2N, extrapolated. How the kinks of exercise lie to the nodes
// leaves some noise: three such pairs are averaged, and half their range is told
// beside the price. A dividend moves the values by a polynomial through six nodes.
// The payoff starts from cell means.
//
// Both programs check it, before anything is written, against the closed form
// without dividends, and against the American premium 0.106952702747 of the
// benchmark option of Andersen, Lake & Offengenden 2016 (from memory, reproduced).
package main

import (
	"fmt"
	"math"
	"slices"
)

type option struct {
	time, rate, yield, sign, strike, vol float64
	american                             bool
	divs                                 [][2]float64 // time, amount
}

const spot = 100

// values are the price and its first two derivatives by the spot.
type values struct{ price, delta, gamma float64 }

// lattice prices with steps steps.
func lattice(o option, steps int) values {
	sd := o.vol * math.Sqrt(o.time)
	dt0 := o.time / float64(steps)
	h := o.vol * math.Sqrt(3*dt0)
	half := int(math.Ceil((7.5*sd + 2*math.Abs(o.rate-o.yield)*o.time) / h))
	drift := o.rate - o.yield - 0.5*o.vol*o.vol
	var sum float64
	for _, d := range o.divs {
		sum += d[1]
	}
	low := half // more room below for the dividends, as far as the price is not exhausted
	if sum > 0 {
		floor := max(0.02*spot*math.Exp(-7.5*sd), spot*math.Exp(-7.5*sd)-sum)
		low = int(math.Ceil((math.Log(spot/floor) + 2*math.Abs(o.rate-o.yield)*o.time) / h))
	}
	n := low + half + 1
	y0 := math.Log(spot) - float64(low)*h // y at node 0, in terms of t = 0
	v, u := make([]float64, n), make([]float64, n)
	e := make([]float64, n) // exp(y)
	for i := range e {
		e[i] = math.Exp(y0 + float64(i)*h)
	}
	// the mean of the payoff over the cell of each node, in ln S
	grow := math.Exp(drift * o.time)
	mean := func(a, b float64) float64 { // of S − K from ln S = a to b
		return (math.Exp(b)-math.Exp(a))/(b-a) - o.strike
	}
	lk := math.Log(o.strike)
	for i := range v {
		a := y0 + (float64(i)-0.5)*h + drift*o.time
		b := a + h
		v[i] = max(0, o.sign*(e[i]*grow-o.strike))
		if a < lk && lk < b {
			if o.sign > 0 {
				v[i] = mean(lk, b) * (b - lk) / h
			} else {
				v[i] = -mean(a, lk) * (lk - a) / h
			}
		}
	}
	divs := slices.Clone(o.divs)
	slices.SortFunc(divs, func(a, b [2]float64) int {
		if a[0] < b[0] {
			return 1
		}
		return -1
	})
	exercise := func(t float64) {
		if !o.american {
			return
		}
		g := math.Exp(drift * t)
		for i := range v {
			v[i] = max(v[i], o.sign*(e[i]*g-o.strike))
		}
	}
	back := func(t, dt float64) {
		p := 0.5 * o.vol * o.vol * dt / (h * h)
		d := math.Exp(-o.rate * dt)
		pd, md := p*d, (1-2*p)*d
		for i := 1; i < n-1; i++ {
			u[i] = pd*(v[i-1]+v[i+1]) + md*v[i]
		}
		// far out the value is linear in S
		for _, k := range [][3]int{{0, 1, 2}, {n - 1, n - 2, n - 3}} {
			u[k[0]] = u[k[1]] + (u[k[1]]-u[k[2]])*(e[k[0]]-e[k[1]])/(e[k[1]]-e[k[2]])
		}
		v, u = u, v
		exercise(t - dt)
	}
	t := o.time
	until := func(s float64) {
		for t-s > 1e-12 {
			dt := min(dt0, t-s)
			if t-s < 1.5*dt0 && t-s > dt0 {
				dt = (t - s) / 2 // two equal steps rather than a very short one
			}
			back(t, dt)
			t -= dt
		}
		t = s
	}
	for _, d := range divs {
		until(d[0])
		g := math.Exp(drift * t)
		for i := range u {
			s := e[i]*g - d[1]
			if s <= e[0]*g { // below the lattice: linear in S, flat below 0
				slope := (v[1] - v[0]) / ((e[1] - e[0]) * g)
				u[i] = v[0] + slope*(max(s, 0)-e[0]*g)
				continue
			}
			x := (math.Log(s) - drift*t - y0) / h
			k := min(max(int(math.Floor(x))-2, 0), n-6)
			var sum float64
			for a := range 6 {
				w := 1.0
				for b := range 6 {
					if b != a {
						w *= (x - float64(k+b)) / float64(a-b)
					}
				}
				sum += w * v[k+a]
			}
			u[i] = sum
		}
		v, u = u, v
		exercise(t)
	}
	until(0)
	// derivatives by y, then by S
	f := func(i int) float64 { return v[low+i] }
	d1 := (8*(f(1)-f(-1)) - (f(2) - f(-2))) / (12 * h)
	d2 := (16*(f(1)+f(-1)) - (f(2) + f(-2)) - 30*f(0)) / (12 * h * h)
	return values{f(0), d1 / spot, (d2 - d1) / (spot * spot)}
}

// extrapolated is without the error in 1/N.
func extrapolated(o option, steps int) values {
	a, b := lattice(o, steps), lattice(o, 2*steps)
	return values{2*b.price - a.price, 2*b.delta - a.delta, 2*b.gamma - a.gamma}
}

// price is the mean of three, and half their range.
func price(o option, steps int) (mean, spread values) {
	var x [3]values
	for i, n := range []int{steps, steps * 9 / 8, steps * 5 / 4} {
		x[i] = extrapolated(o, n)
	}
	each := func(of func(*values) *float64) {
		a, b, c := *of(&x[0]), *of(&x[1]), *of(&x[2])
		*of(&mean) = a/3 + b/3 + c/3
		*of(&spread) = (max(a, b, c) - min(a, b, c)) / 2
	}
	each(func(v *values) *float64 { return &v.price })
	each(func(v *values) *float64 { return &v.delta })
	each(func(v *values) *float64 { return &v.gamma })
	return mean, spread
}

func closed(o option) float64 {
	sd := o.vol * math.Sqrt(o.time)
	d := (math.Log(spot/o.strike)+(o.rate-o.yield)*o.time)/sd + sd/2
	phi := func(x float64) float64 { return 0.5 * math.Erfc(-x/math.Sqrt2) }
	return o.sign * (spot*math.Exp(-o.yield*o.time)*phi(o.sign*d) - o.strike*math.Exp(-o.rate*o.time)*phi(o.sign*(d-sd)))
}

// check panics unless the lattice gives the closed form and the benchmark.
func check(steps int) {
	o := option{time: 1, rate: 0.05, yield: 0.05, sign: -1, strike: 100, vol: 0.25}
	if v, _ := price(o, steps); math.Abs(v.price-closed(o)) > 2e-6 {
		panic(fmt.Sprint("European off by ", v.price-closed(o)))
	}
	a := o
	a.american = true
	if v, _ := price(a, steps); math.Abs(v.price-closed(o)-0.106952702747) > 2e-5 {
		panic(fmt.Sprint("American premium off by ", v.price-closed(o)-0.106952702747))
	}
}
