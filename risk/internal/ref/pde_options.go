package ref

import (
	"bytes"
	"compress/gzip"
	_ "embed"
	"encoding/csv"
	"strconv"
	"strings"
)

//go:embed pde_options.csv.gz
var pdeOptions []byte

// PDEOption is an American or European option on a spot of 100, with cash
// dividends as pairs of time and amount, and its value from the lattice of
// pde_lattice.go. Spread says how far Price may be off, 1e-6 as a rule. Vega, Rho
// and CarryRho are there for the options that HasGreeks.
type PDEOption struct {
	Strike, Time, Vol, Rate, Yield, Sign float64
	American                             bool
	Dividends                            [][2]float64
	Price, Spread, Delta, Gamma          float64
	HasGreeks                            bool
	Vega, Rho, CarryRho                  float64
}

// PDEOptions returns the table. It is part of the program text: a fault in it is
// a programmer's mistake.
func PDEOptions() []PDEOption {
	r, err := gzip.NewReader(bytes.NewReader(pdeOptions))
	if err != nil {
		panic(err)
	}
	rows, err := csv.NewReader(r).ReadAll()
	if err != nil {
		panic(err)
	}
	parse := func(s string) float64 {
		x, err := strconv.ParseFloat(s, 64)
		if err != nil {
			panic(err)
		}
		return x
	}
	var table []PDEOption
	for _, row := range rows[1:] { // below the header
		o := PDEOption{American: row[6] == "true", HasGreeks: row[12] != ""}
		for i, p := range []*float64{&o.Strike, &o.Time, &o.Vol, &o.Rate, &o.Yield, &o.Sign} {
			*p = parse(row[i])
		}
		for i, p := range []*float64{&o.Price, &o.Spread, &o.Delta, &o.Gamma} {
			*p = parse(row[8+i])
		}
		if o.HasGreeks {
			for i, p := range []*float64{&o.Vega, &o.Rho, &o.CarryRho} {
				*p = parse(row[12+i])
			}
		}
		if row[7] != "" {
			for _, d := range strings.Split(row[7], ";") {
				t, amount, _ := strings.Cut(d, ":")
				o.Dividends = append(o.Dividends, [2]float64{parse(t), parse(amount)})
			}
		}
		table = append(table, o)
	}
	return table
}
