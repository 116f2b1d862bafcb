package report

import (
	"math"

	"nightbook/schema"
)

const (
	// sumTolerance is how far apart two ways of adding the same lines may be, in
	// parts of the sum of the absolute values. Every total is rounded once from
	// an exact sum, so only the rounding of the parts remains: 1.1e-16 of each.
	sumTolerance = 1e-12

	// residualTolerance bounds pde_residual: a formula leaves rounding noise of
	// some 1e-12, a mistake in a sensitivity leaves whole per cents.
	residualTolerance = 1e-6

	// integralTolerance bounds that of the boundary integral, whose derivatives
	// come from different sums: some 1e-5 at its coarsest setting.
	integralTolerance = 1e-3
)

// control is a check of the run against itself.
type control struct {
	name            string
	expected, found float64
	tolerance       float64
	whole           bool // counts rather than amounts
	absent          bool // there is nothing to check
}

func (c *control) passes() bool {
	return c.absent || math.Abs(c.found-c.expected) <= c.tolerance
}

// controls makes all checks of a run.
func controls(s *schema.Summary) []control {
	list := []control{{
		name:     "rows in = priced + expired + rejected",
		expected: float64(s.RowsIn), found: float64(s.Total.Priced + s.Total.Expired + s.Rejects), whole: true,
	}}
	cuts := slicings(s)
	for _, cut := range cuts {
		c := control{name: "lines of " + cut.name, expected: float64(s.Total.Lines), whole: true}
		for _, t := range cut.parts {
			c.found += float64(t.Lines)
		}
		list = append(list, c)
	}
	amounts := func(name string, of func(*schema.Totals) float64) {
		for _, cut := range cuts {
			var parts []float64
			for _, t := range cut.parts {
				parts = append(parts, of(t))
			}
			sum, size := sum(parts)
			list = append(list, control{
				name: name + " of " + cut.name, expected: of(&s.Total), found: sum, tolerance: sumTolerance * size,
			})
		}
	}
	amounts("quantity", func(t *schema.Totals) float64 { return t.Quantity })
	for m, name := range schema.MeasureNames {
		amounts(name+"_base", func(t *schema.Totals) float64 { return t.Measures[m] })
	}
	largest := func(name string, found, tolerance float64) {
		list = append(list, control{name: name, found: found, tolerance: tolerance, absent: math.IsNaN(found)})
	}
	largest("largest pde_residual", s.MaxResidual, residualTolerance)
	largest("largest pde_residual of boundary_integral", s.MaxIntegralResidual, integralTolerance)
	largest("largest price_error, share of spot", s.MaxPriceError, s.Config.Models.OrDefault().Tolerance)
	return list
}

// slicing is one way of cutting all lines into parts.
type slicing struct {
	name  string
	parts []*schema.Totals
}

func slicings(s *schema.Summary) []slicing {
	top, own := slicing{name: "top-level books"}, slicing{name: "all books' own lines"}
	under, currency := slicing{name: "underlyings"}, slicing{name: "currencies"}
	for i := range s.Books {
		b := &s.Books[i]
		own.parts = append(own.parts, &b.Own)
		if b.Level == 0 {
			top.parts = append(top.parts, &b.Totals)
		}
	}
	for i := range s.Underlyings {
		under.parts = append(under.parts, &s.Underlyings[i].Totals)
	}
	for i := range s.Currencies {
		currency.parts = append(currency.parts, &s.Currencies[i].Totals)
	}
	return []slicing{top, own, under, currency}
}

// sum adds numbers up with the rounding errors carried along (Neumaier, 1974),
// and their absolute values.
func sum(parts []float64) (total, size float64) {
	var lost float64
	for _, x := range parts {
		t := total + x
		if math.Abs(total) >= math.Abs(x) {
			lost += (total - t) + x
		} else {
			lost += (x - t) + total
		}
		total = t
		size += math.Abs(x)
	}
	return total + lost, size
}
