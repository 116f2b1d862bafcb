package vec_test

import (
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// Values printed in books, to the printed digits.
//
// haug: E. G. Haug, The Complete Guide to Option Pricing Formulas, 2nd ed., 2007.
// hull: J. C. Hull, Options, Futures and Other Derivatives.
// All are quoted from memory and were reproduced to the printed digits by an
// independent calculation. b is the cost of carry, r − q.
func TestPublishedValues(t *testing.T) {
	const call, put = 1, -1
	for _, c := range []struct {
		source string
		line   line
		output string
		want   string
	}{
		{"haug, Black–Scholes call", line{60, 65, .25, .30, .08, 0, call}, "price", "2.1334"},
		{"haug, Merton put with yield", line{100, 95, .5, .20, .10, .05, put}, "price", "2.4648"},
		{"haug, Black-76 call", line{19, 19, .75, .28, .10, .10, call}, "price", "1.7011"},
		{"haug, Black-76 put", line{19, 19, .75, .28, .10, .10, put}, "price", "1.7011"},
		{"haug, Garman–Kohlhagen call", line{1.56, 1.60, .5, .12, .06, .08, call}, "price", "0.0291"},
		{"haug, delta of a futures call", line{105, 100, .5, .36, .10, .10, call}, "delta", "0.5946"},
		{"haug, delta of a futures put", line{105, 100, .5, .36, .10, .10, put}, "delta", "-0.3566"},
		{"haug, gamma", line{55, 60, .75, .30, .10, 0, call}, "gamma", "0.0278"},
		{"haug, vega, b .0695", line{55, 60, .75, .30, .105, .105 - .0695, call}, "vega", "18.5027"},
		{"haug, theta of a put, b .02", line{430, 405, 1.0 / 12, .20, .07, .05, put}, "theta", "-31.1924"},
		{"haug, rho of a call", line{72, 75, 1, .19, .09, 0, call}, "rho", "38.7325"},
		{"haug, vanna", line{90, 80, .25, .20, .05, 0, call}, "vanna", "-1.0008"},
		{"haug, charm of a put, b 0", line{105, 90, .25, .24, .14, .14, put}, "charm", "0.3700"},
		{"hull, call", line{42, 40, .5, .20, .10, 0, call}, "price", "4.7594"},
		{"hull, put", line{42, 40, .5, .20, .10, 0, put}, "price", "0.8086"},
		{"hull, chapter on hedging, call", line{49, 50, .3846, .20, .05, 0, call}, "price", "2.4005"},
		{"hull, delta", line{49, 50, .3846, .20, .05, 0, call}, "delta", "0.5216"},
		{"hull, gamma", line{49, 50, .3846, .20, .05, 0, call}, "gamma", "0.0655"},
		{"hull, vega", line{49, 50, .3846, .20, .05, 0, call}, "vega", "12.105"},
		{"hull, theta a year", line{49, 50, .3846, .20, .05, 0, call}, "theta", "-4.305"},
		{"hull, rho", line{49, 50, .3846, .20, .05, 0, call}, "rho", "8.907"},
		{"hull, index call", line{930, 900, 2.0 / 12, .20, .08, .03, call}, "price", "51.83"},
		{"hull, futures put", line{20, 20, 4.0 / 12, .25, .09, .09, put}, "price", "1.12"},
	} {
		want, half := printed(t, c.want)
		got := c.line.value()[outputIndex(t, c.output)]
		if math.Abs(got-want) > half {
			t.Errorf("%s: %s is %.7g, printed %s", c.source, c.output, got, c.want)
		}
	}
}

// printed returns a decimal number and half a unit of its last digit.
func printed(t *testing.T, s string) (value, half float64) {
	t.Helper()
	value, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	_, decimals, _ := strings.Cut(s, ".")
	return value, 0.5001 * math.Pow10(-len(decimals))
}

func outputIndex(t *testing.T, name string) int {
	t.Helper()
	i := slices.Index(outputNames, name)
	if i < 0 {
		t.Fatalf("no output called %s", name)
	}
	return i
}
