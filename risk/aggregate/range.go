package aggregate

import (
	"fmt"
	"math"
	"slices"

	"nightbook/schema"
)

// checkRange returns an error where lines that are finite add up to a sum beyond
// the range of doubles. Of several books it names one that no other such book is
// below.
func checkRange(s *schema.Summary) error {
	for _, b := range slices.Backward(s.Books) {
		if !finite(b.Quantity) || !finite(b.Measures[:]...) {
			return outOfRange("of book " + b.Book)
		}
	}
	for _, u := range s.Underlyings {
		if !finite(u.Quantity, u.DeltaUnits) || !finite(u.Local[:]...) || !finite(u.Measures[:]...) {
			return outOfRange("on " + u.Underlying + " in " + u.Currency)
		}
	}
	for _, c := range s.Currencies {
		if !finite(c.Quantity) || !finite(c.Local[:]...) || !finite(c.Measures[:]...) {
			return outOfRange("in " + c.Currency)
		}
	}
	if !finite(s.Total.Quantity) || !finite(s.Total.Measures[:]...) {
		return outOfRange("of all books")
	}
	return nil
}

func outOfRange(lines string) error {
	return fmt.Errorf("the sums of the lines %s are beyond the range of numbers, which ends at 1.8e308: look among them for a quantity, multiplier or price out of all proportion", lines)
}

func finite(numbers ...float64) bool {
	return !slices.ContainsFunc(numbers, func(x float64) bool { return math.IsInf(x, 0) || x != x })
}
