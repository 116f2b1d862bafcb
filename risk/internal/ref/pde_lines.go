//go:build ignore

// Prices the options of a snapshot's lines on the lattice:
//
//	python3 snapshot/expected.py --options SNAPSHOT | go run pde_lines.go pde_lattice.go > snapshot/lattice/SNAPSHOT.csv
//
// What comes in is one option a row, once as it stands and once for each moment to
// which it is revalued; what goes out is its price with half the range of three
// lattices, and delta, gamma and vega of the option as it stands.
package main

import (
	"bufio"
	"encoding/csv"
	"fmt"
	"os"
	"strconv"
	"strings"
	"sync"
)

const steps = 2000

// row is an option of any spot; the lattice's is 100.
type row struct {
	id, step string
	spot     float64
	option
}

func parse(cells []string) (r row, err error) {
	number := func(s string) float64 {
		x, e := strconv.ParseFloat(s, 64)
		if e != nil && err == nil {
			err = e
		}
		return x
	}
	r.id, r.step, r.american = cells[0], cells[1], cells[2] == "american"
	r.sign, r.spot = number(cells[3]), number(cells[4])
	r.strike = number(cells[5]) / r.spot * spot
	r.time, r.vol, r.rate, r.yield = number(cells[6]), number(cells[7]), number(cells[8]), number(cells[9])
	if cells[10] != "" {
		for _, d := range strings.Split(cells[10], ";") {
			t, amount, _ := strings.Cut(d, ":")
			r.divs = append(r.divs, [2]float64{number(t), number(amount) / r.spot * spot})
		}
	}
	return r, err
}

func (r row) String() string {
	v, spread := price(r.option, steps)
	scale := r.spot / spot
	s := fmt.Sprintf("%s,%s,%.8f,%.1e", r.id, r.step, v.price*scale, spread.price*scale)
	if r.step != "now" {
		return s + ",,,,,"
	}
	a, b := r.option, r.option
	a.vol, b.vol = 0.98*r.vol, 1.02*r.vol
	low, _ := price(a, steps)
	high, _ := price(b, steps)
	vega := (high.price - low.price) / (b.vol - a.vol) * scale
	return s + fmt.Sprintf(",%.7f,%.1e,%.8f,%.1e,%.5f", v.delta, spread.delta, v.gamma/scale, spread.gamma/scale, vega)
}

func main() {
	check(2 * steps)
	cells, err := csv.NewReader(os.Stdin).ReadAll()
	if err != nil {
		panic(err)
	}
	cells = cells[1:] // below the header
	out := make([]string, len(cells))
	next := make(chan int)
	var wait sync.WaitGroup
	for range 2 {
		wait.Go(func() {
			for i := range next {
				r, err := parse(cells[i])
				if err != nil {
					panic(err)
				}
				out[i] = r.String()
			}
		})
	}
	for i := range cells {
		next <- i
	}
	close(next)
	wait.Wait()
	w := bufio.NewWriter(os.Stdout)
	defer w.Flush()
	fmt.Fprintln(w, "line_id,step,price,price_spread,delta,delta_spread,gamma,gamma_spread,vega")
	for _, s := range out {
		fmt.Fprintln(w, s)
	}
}
