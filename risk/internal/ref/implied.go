package ref

import _ "embed"

//go:embed implied.csv.gz
var implied []byte

// Quote is an undiscounted Black price of the out-of-the-money side and the
// total volatility σ√T that it was computed from.
type Quote struct {
	Forward, Strike, TotalVol, Sign, Price float64
}

// Quotes returns the table of quotes.
func Quotes() []Quote {
	var table []Quote
	for _, row := range rows(implied)[1:] { // below the header
		table = append(table, Quote{number(row[0]), number(row[1]), number(row[2]), number(row[3]), number(row[4])})
	}
	return table
}
