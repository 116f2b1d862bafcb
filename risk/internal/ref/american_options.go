package ref

import _ "embed"

//go:embed american_options.csv.gz
var americanOptions []byte

// AmericanOption is an American option on a spot of 100 with a continuous rate and
// yield, and its value from the lattice of american_lattice.go: the price to 1e-6,
// delta to 1e-7, gamma to 1e-7, the others to 2e-2 or so.
type AmericanOption struct {
	Strike, Time, Vol, Rate, Yield, Sign     float64
	Price, Delta, Gamma, Vega, Rho, CarryRho float64
}

// AmericanOptions returns the table.
func AmericanOptions() []AmericanOption {
	var table []AmericanOption
	for _, row := range rows(americanOptions)[1:] { // below the header
		var o AmericanOption
		for i, p := range []*float64{
			&o.Strike, &o.Time, &o.Vol, &o.Rate, &o.Yield, &o.Sign,
			&o.Price, &o.Delta, &o.Gamma, &o.Vega, &o.Rho, &o.CarryRho,
		} {
			*p = number(row[i])
		}
		table = append(table, o)
	}
	return table
}
