//go:build ignore

// Writes the table of reference values for package pde:
//
//	go run pde_table.go pde_lattice.go | gzip -9n > pde_options.csv.gz
package main

import (
	"bufio"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"sync"
)

func short(x float64, digits int) float64 {
	y, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'g', digits, 64), 64)
	return y
}

func random(rng *rand.Rand) option {
	logUniform := func(a, b float64) float64 { return a * math.Exp(rng.Float64()*math.Log(b/a)) }
	o := option{
		time: short(logUniform(7, 1500), 3) / 365, rate: short(-0.02+0.12*rng.Float64(), 3), yield: short(-0.03+0.12*rng.Float64(), 3),
		sign: float64(1 - 2*rng.IntN(2)), vol: short(logUniform(0.08, 0.8), 3), american: rng.IntN(4) > 0,
	}
	sd := o.vol * math.Sqrt(o.time)
	o.strike = short(spot*math.Exp((o.rate-o.yield)*o.time+2*sd*(2*rng.Float64()-1)), 4)
	if rng.IntN(4) > 0 {
		for range 1 + rng.IntN(5) {
			o.divs = append(o.divs, [2]float64{short(0.99*o.time*rng.Float64(), 3), short(logUniform(0.1, 6), 3)})
		}
	}
	return o
}

const (
	lines      = 1000
	withGreeks = 240 // of them: vega, rho and carry_rho by differences
	steps      = 4000
)

func main() {
	check(steps)
	rng := rand.New(rand.NewPCG(20260105, 7))
	options := make([]option, lines)
	for i := range options {
		options[i] = random(rng)
	}
	out := make([]string, lines)
	next := make(chan int)
	var wait sync.WaitGroup
	for range 2 {
		wait.Go(func() {
			for i := range next {
				o := options[i]
				v, spread := price(o, steps)
				s := fmt.Sprintf("%v,%v,%v,%v,%v,%v,%v,", o.strike, o.time, o.vol, o.rate, o.yield, o.sign, o.american)
				for k, d := range o.divs {
					if k > 0 {
						s += ";"
					}
					s += fmt.Sprintf("%v:%v", d[0], d[1])
				}
				s += fmt.Sprintf(",%.7f,%.1e,%.7f,%.8f", v.price, spread.price, v.delta, v.gamma)
				if i < withGreeks {
					diff := func(p func(*option) *float64, h float64) float64 {
						a, b := o, o
						*p(&a) -= h
						*p(&b) += h
						u, _ := price(a, steps)
						v, _ := price(b, steps)
						return (v.price - u.price) / (2 * h)
					}
					s += fmt.Sprintf(",%.4f,%.4f,%.4f",
						diff(func(o *option) *float64 { return &o.vol }, 0.01*o.vol),
						diff(func(o *option) *float64 { return &o.rate }, 2e-3/max(1, o.time)),
						diff(func(o *option) *float64 { return &o.yield }, 2e-3/max(1, o.time)))
				} else {
					s += ",,,"
				}
				out[i] = s
			}
		})
	}
	for i := range options {
		next <- i
	}
	close(next)
	wait.Wait()
	w := bufio.NewWriter(os.Stdout)
	defer w.Flush()
	fmt.Fprintln(w, "strike,time,vol,rate,yield,sign,american,dividends,price,spread,delta,gamma,vega,rho,carry_rho")
	for _, s := range out {
		fmt.Fprintln(w, s)
	}
}
