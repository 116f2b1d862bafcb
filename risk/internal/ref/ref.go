package ref

import (
	"bytes"
	"compress/gzip"
	_ "embed"
	"encoding/csv"
	"math/big"
	"strconv"
)

//go:embed functions.csv.gz
var functions []byte

//go:embed bsm.csv.gz
var bsm []byte

// Precision is that of Value.Want, in bits: about the 34 digits of the table.
const Precision = 113

// Value is one value of a function: "exp", "log", "logratio", "normpdf" or
// "normcdf". Y is 0 for functions of one argument.
type Value struct {
	Func string
	X, Y float64
	Want *big.Float
}

// Functions returns the table of functions.
func Functions() []Value {
	var table []Value
	for _, row := range rows(functions) {
		v := Value{Func: row[0], X: number(row[1])}
		if row[2] != "" {
			v.Y = number(row[2])
		}
		want, _, err := big.ParseFloat(row[3], 10, Precision, big.ToNearestEven)
		if err != nil {
			panic(err)
		}
		v.Want = want
		table = append(table, v)
	}
	return table
}

// Option is a European option and its value. Units as in vec.BSM.
type Option struct {
	Spot, Strike, Time, Vol, Rate, Yield, Sign                           float64
	Price, Delta, Gamma, Vega, Theta, Rho, CarryRho, Vanna, Volga, Charm float64
}

// Options returns the table of options.
func Options() []Option {
	var table []Option
	for _, row := range rows(bsm)[1:] { // below the header
		var o Option
		for i, p := range []*float64{
			&o.Spot, &o.Strike, &o.Time, &o.Vol, &o.Rate, &o.Yield, &o.Sign,
			&o.Price, &o.Delta, &o.Gamma, &o.Vega, &o.Theta, &o.Rho, &o.CarryRho, &o.Vanna, &o.Volga, &o.Charm,
		} {
			*p = number(row[i])
		}
		table = append(table, o)
	}
	return table
}

// rows unpacks a table. The tables are part of the program text: a fault in one
// is a programmer's mistake.
func rows(packed []byte) [][]string {
	r, err := gzip.NewReader(bytes.NewReader(packed))
	if err != nil {
		panic(err)
	}
	all, err := csv.NewReader(r).ReadAll()
	if err != nil {
		panic(err)
	}
	return all
}

// number parses a float64. Numbers below the smallest float64 are 0 to the tests.
func number(s string) float64 {
	x, err := strconv.ParseFloat(s, 64)
	if err != nil {
		panic(err)
	}
	return x
}
