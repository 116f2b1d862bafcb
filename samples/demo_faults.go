package samples

import "nightbook/schema"

// fault is one way in which a position line can be wrong.
type fault struct {
	code   schema.RejectCode
	append func(b []byte, c *cells) []byte
}

const numFaults = 9

// faults are spread evenly over the broken lines. Each makes a line wrong in
// one way only, whatever its instrument. The first line is never broken, so
// that its name is there to be repeated.
var faults = [numFaults]fault{
	{schema.BadNumber, func(b []byte, c *cells) []byte { return c.option().with(b, "1.2.3", "") }},
	{schema.BadDate, func(b []byte, c *cells) []byte { return c.option().with(b, "", "2027-02-30") }},
	{schema.MissingValue, func(b []byte, c *cells) []byte {
		x := c.option()
		x.strike = ""
		return x.append(b)
	}},
	{schema.UnknownUnderlying, func(b []byte, c *cells) []byte {
		x := c.option()
		x.underlying = "NOSUCHNAME"
		return x.append(b)
	}},
	{schema.BadChoice, func(b []byte, c *cells) []byte {
		x := c.option()
		x.optionType = "straddle"
		return x.append(b)
	}},
	{schema.OutOfRange, func(b []byte, c *cells) []byte { return c.option().with(b, "-10", "") }},
	{schema.DuplicateLineID, func(b []byte, c *cells) []byte {
		x := *c
		x.id = 1
		return x.append(b)
	}},
	{schema.KindMismatch, func(b []byte, c *cells) []byte {
		x := *c
		x.underlying, x.instrument = "ALDER40", "future"
		x.optionType, x.strike, x.expiry = "", "", ""
		return x.append(b)
	}},
	{schema.BadRow, func(b []byte, c *cells) []byte {
		b = c.append(b)
		return append(b[:len(b)-1], ",one,cell,too,many\n"...)
	}},
}

// option returns the line as an option, so that a fault in a strike or an
// expiry is a fault.
func (c *cells) option() *cells {
	x := *c
	if x.instrument != "option" {
		x.underlying, x.instrument, x.optionType = "ALDER40", "option", "call"
		x.strike, x.expiry = "5000", "2026-12-18"
	}
	return &x
}

// with appends the line with another strike or expiry.
func (c *cells) with(b []byte, strike, expiry string) []byte {
	if strike != "" {
		c.strike = strike
	}
	if expiry != "" {
		c.expiry = expiry
	}
	return c.append(b)
}
