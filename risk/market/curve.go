package market

import (
	"fmt"
	"sort"

	"nightbook/risk/vec"
	"nightbook/schema"
)

// Curve is a zero curve.
//
// Computes the continuous zero rate r(T): r·T is linear in T between nodes, and
// r is flat before the first node and beyond the last.
// Units: T in years of 365 days, r per year.
type Curve struct {
	Name string
	t    []float64 // ascending, > 0
	rt   []float64 // rate × time
}

// newCurve sorts the rows of one curve into nodes.
func newCurve(name string, rows []schema.RateRow, asOf schema.Moment) (*Curve, error) {
	rows = append([]schema.RateRow(nil), rows...)
	sort.SliceStable(rows, func(i, j int) bool { return rows[i].Day < rows[j].Day })
	c := &Curve{Name: name}
	for i, r := range rows {
		t := asOf.Years(r.Day, schema.NoMinute)
		if t <= 0 {
			return nil, fmt.Errorf("node %s is not after as_of", r.Day)
		}
		if i > 0 && r.Day == rows[i-1].Day {
			return nil, fmt.Errorf("two nodes on %s", r.Day)
		}
		rt := float64(r.Zero * t)
		if r.Discount == r.Discount {
			rt = -vec.Log1(r.Discount)
		}
		c.t, c.rt = append(c.t, t), append(c.rt, rt)
	}
	return c, nil
}

// Rate returns the zero rate to T > 0, and whether T lies within the nodes.
func (c *Curve) Rate(T float64) (rate float64, inside bool) {
	n := len(c.t)
	i := sort.SearchFloat64s(c.t, T) // first node at or after T
	switch {
	case i == 0:
		return c.rt[0] / c.t[0], T == c.t[0]
	case i == n:
		return c.rt[n-1] / c.t[n-1], false
	}
	u := (T - c.t[i-1]) / (c.t[i] - c.t[i-1])
	return (c.rt[i-1] + float64(u*(c.rt[i]-c.rt[i-1]))) / T, true
}
