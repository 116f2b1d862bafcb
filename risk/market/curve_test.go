package market

import (
	"math"
	"testing"

	"nightbook/schema"
)

func asOf(t *testing.T) schema.Moment {
	t.Helper()
	d, ok := schema.DateOf(2026, 3, 31)
	if !ok {
		t.Fatal("no such day")
	}
	return schema.Moment{Day: d, Minute: schema.NoMinute}
}

var nan = math.NaN()

func TestCurveIsLinearInRateTimesTime(t *testing.T) {
	as := asOf(t)
	c, err := newCurve("EUR", []schema.RateRow{
		{Day: as.Day + 730, Zero: 0.03, Discount: nan},
		{Day: as.Day + 365, Zero: 0.02, Discount: nan},
		{Day: as.Day + 1825, Zero: nan, Discount: math.Exp(-0.04 * 5)},
	}, as)
	if err != nil {
		t.Fatal(err)
	}
	for _, x := range []struct {
		T, rate float64
		inside  bool
	}{
		{0.001, 0.02, false}, {0.5, 0.02, false}, // flat before the first node
		{1, 0.02, true}, {2, 0.03, true},
		{1.5, (0.02 + 0.5*(0.06-0.02)) / 1.5, true}, // by hand
		{3.5, (0.06 + 0.5*(0.2-0.06)) / 3.5, true},
		{5, 0.04, true}, {6, 0.04, false}, {50, 0.04, false},
	} {
		rate, inside := c.Rate(x.T)
		if math.Abs(rate-x.rate) > 1e-15 || inside != x.inside {
			t.Errorf("Rate(%v) = %v, %v; want %v, %v", x.T, rate, inside, x.rate, x.inside)
		}
	}
	// the forward rate over (1, 2) is constant: exp(r·T) multiplies up
	r15, _ := c.Rate(1.5)
	if f := (r15*1.5 - 0.02) / 0.5; math.Abs(f-0.04) > 1e-15 {
		t.Errorf("forward rate %v, want 0.04", f)
	}
}

func TestCurveRefusesNodesItCannotUse(t *testing.T) {
	as := asOf(t)
	if _, err := newCurve("X", []schema.RateRow{{Day: as.Day, Zero: 0.01, Discount: nan}}, as); err == nil {
		t.Error("a node at as_of was taken")
	}
	if _, err := newCurve("X", []schema.RateRow{{Day: as.Day + 9, Zero: 0.01, Discount: nan}, {Day: as.Day + 9, Zero: 0.02, Discount: nan}}, as); err == nil {
		t.Error("two nodes on one day were taken")
	}
}

func TestCalendar(t *testing.T) {
	d := func(y, m, dd int) schema.Date { x, _ := schema.DateOf(y, m, dd); return x }
	c, n := newCalendar("home", []schema.HolidayRow{
		{Calendar: "home", Day: d(2026, 4, 3)}, {Calendar: "home", Day: d(2026, 4, 6)}, {Calendar: "away", Day: d(2026, 4, 1)},
	})
	if n != 2 {
		t.Fatalf("%d holidays, want 2", n)
	}
	for _, x := range [][2]schema.Date{
		{d(2026, 3, 31), d(2026, 4, 1)}, // Tuesday to Wednesday: the other calendar's holiday is none here
		{d(2026, 4, 2), d(2026, 4, 7)},  // Thursday before Easter, ISO 8601 weekdays
		{d(2026, 4, 10), d(2026, 4, 13)},
		{d(1969, 12, 31), d(1970, 1, 1)},
		{d(1960, 1, 1), d(1960, 1, 4)}, // a Friday, before day 0
	} {
		if got := c.Next(x[0]); got != x[1] {
			t.Errorf("after %s comes %s, want %s", x[0], got, x[1])
		}
	}
}
