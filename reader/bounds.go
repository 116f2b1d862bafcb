package reader

import (
	"math"

	"nightbook/reader/table"
	"nightbook/schema"
)

// bounds are what makes sense for a number, whatever the row.
type bounds struct {
	from, to float64
	open     bool // from itself is out
	scale    float64
	why      *finding
}

// Bounds of the columns. A rate beyond 100 % is most often a percentage where a
// decimal is expected.
var (
	anyNumber = bounds{from: math.Inf(-1), to: math.Inf(1)}
	positive  = bounds{from: 0, to: math.Inf(1), open: true, why: &finding{schema.OutOfRange, "expected a number above 0"}}
	notBelow0 = bounds{from: 0, to: math.Inf(1), why: &finding{schema.OutOfRange, "expected 0 or a number above it"}}
	rateRange = bounds{from: -1, to: 1, why: &finding{schema.OutOfRange, "expected a rate as a decimal, from -1 to 1 (100 %): 0.035 is 3.5 %"}}

	volDecimal = bounds{from: 0, to: 10, why: &finding{schema.OutOfRange,
		`expected a volatility as a decimal, from 0 to 10 (1000 %): 0.20 is 20 %; if the files give percent, set [vols] unit = "percent"`}}
	volPercent = bounds{from: 0, to: 10, scale: 100, why: &finding{schema.OutOfRange,
		`expected a volatility in percent, from 0 to 1000, as [vols] unit = "percent" says`}}

	// The volatility of a spread is in units of its price, whatever the others'.
	volSpread = bounds{from: 0, to: math.Inf(1), why: &finding{schema.OutOfRange, "expected a volatility of 0 or above, in units of the price"}}
	// A line does not tell the kind of its underlying: how high is too high is for the core to say.
	volLine        = bounds{from: 0, to: math.Inf(1), why: &finding{schema.OutOfRange, "expected a volatility of 0 or above, as a decimal: 0.20 is 20 %"}}
	volLinePercent = bounds{from: 0, to: math.Inf(1), scale: 100, why: &finding{schema.OutOfRange, "expected a volatility of 0 or above, in percent: 20 is 20 %"}}
)

// strikeBounds are the bounds of a strike on an underlying of that kind; 0 is an
// underlying that is not known.
func strikeBounds(kind schema.Choice) bounds {
	if kind == 0 || kind == schema.Spread {
		return anyNumber
	}
	return positive
}

// volBounds are the bounds of a volatility of that kind in the unit of the files.
func volBounds(cfg *schema.Config, kind schema.Choice) bounds {
	switch {
	case kind == schema.Spread:
		return volSpread
	case cfg.Vols.Percent:
		return volPercent
	}
	return volDecimal
}

// lineVolBounds are the bounds of a line's own volatility.
func lineVolBounds(cfg *schema.Config) bounds {
	if cfg.Vols.Percent {
		return volLinePercent
	}
	return volLine
}

// check scales a finite number to our unit and holds it to the bounds. A
// percentage is in our unit already. Of a number that is out it returns NaN.
func (b *bounds) check(x float64, kind table.Cell) (float64, *finding) {
	if b.scale != 0 && kind != table.Percent {
		x /= b.scale
	}
	if x < b.from || x > b.to || b.open && x == b.from {
		return math.NaN(), b.why
	}
	return x, nil
}

// plain returns the finite numbers which check takes as they are, as the range
// from lo to hi; ok is false where it takes none as it is.
func (b *bounds) plain() (lo, hi float64, ok bool) {
	lo, hi = max(b.from, -math.MaxFloat64), min(b.to, math.MaxFloat64)
	if b.open {
		lo = math.Nextafter(lo, math.Inf(1))
	}
	return lo, hi, b.scale == 0
}
