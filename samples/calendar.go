package samples

import (
	"time"

	"nightbook/schema"
)

// day returns a date that is known to exist.
func day(y, m, d int) schema.Date {
	x, ok := schema.DateOf(y, m, d)
	if !ok {
		panic("samples: no such day")
	}
	return x
}

// thirdFriday is the day on which the invented exchanges let options expire.
func thirdFriday(y, m int) schema.Date {
	first := day(y, m, 1)
	toFriday := (int(time.Friday) - int(first.Time().Weekday()) + 7) % 7
	return first + schema.Date(toFriday+14)
}

// expiriesAfter returns n expiries after asOf, the way listed options run:
// the next six months, then the quarters.
func expiriesAfter(asOf schema.Date, n int) []schema.Date {
	var days []schema.Date
	y, m := asOf.Time().Year(), int(asOf.Time().Month())
	for len(days) < n {
		if x := thirdFriday(y, m); x > asOf && (len(days) < 6 || m%3 == 0) {
			days = append(days, x)
		}
		if m++; m > 12 {
			y, m = y+1, 1
		}
	}
	return days
}

// lastExpiry returns the expiry before asOf.
func lastExpiry(asOf schema.Date) schema.Date {
	y, m := asOf.Time().Year(), int(asOf.Time().Month())
	for {
		if x := thirdFriday(y, m); x < asOf {
			return x
		}
		if m--; m == 0 {
			y, m = y-1, 12
		}
	}
}
