package aggregate

import (
	"context"
	"strings"
	"testing"

	"nightbook/schema"
)

// Lines that are finite, whose sums are not, end the run with the name of the
// lowest book at fault.
func TestSumsBeyondTheRange(t *testing.T) {
	const huge = 1.5e308 / float64(schema.NumMeasures) // the lots' last measure is this times their number
	for _, c := range []struct {
		want string
		lots []lot
	}{
		{"of book N1 ", []lot{
			{book: "N1", underlying: "A", currency: "EUR", status: schema.Priced, base: huge},
			{book: "N1", underlying: "B", currency: "EUR", status: schema.Priced, base: huge}}},
		{"of book House ", []lot{
			{book: "N1", underlying: "A", currency: "EUR", status: schema.Priced, base: huge},
			{book: "South", underlying: "B", currency: "EUR", status: schema.Priced, base: huge}}},
		{"on A in JPY ", []lot{
			{book: "N1", underlying: "A", currency: "JPY", status: schema.Priced, value: -huge, base: 1},
			{book: "South", underlying: "A", currency: "JPY", status: schema.Priced, value: -huge, base: 1}}},
		{"in JPY ", []lot{
			{book: "N1", underlying: "A", currency: "JPY", status: schema.Priced, value: -huge, base: 1},
			{book: "South", underlying: "B", currency: "JPY", status: schema.Priced, value: -huge, base: 1}}},
		{"of all books ", []lot{
			{book: "Lone", underlying: "A", currency: "JPY", status: schema.Priced, base: huge, quantity: 1},
			{book: "North", underlying: "B", currency: "EUR", status: schema.Priced, base: huge, quantity: 1}}},
		{"", []lot{
			{book: "N1", underlying: "A", currency: "EUR", status: schema.Priced, base: huge},
			{book: "N1", underlying: "A", currency: "EUR", status: schema.Priced, base: -huge},
			{book: "N1", underlying: "A", currency: "EUR", status: schema.Priced, base: huge}}},
	} {
		d := schema.NewDicts()
		totals, err := NewTotals(tree3, d)
		if err != nil {
			t.Fatal(err)
		}
		totals.AddLines(batchOf(d, c.lots), kindOf)
		err = totals.Summary(context.Background(), new(schema.Summary))
		switch {
		case c.want == "" && err != nil:
			t.Errorf("sums within the range: %v", err)
		case c.want != "" && (err == nil || !strings.Contains(err.Error(), c.want)):
			t.Errorf("%q expected: %v", c.want, err)
		}
	}
}
