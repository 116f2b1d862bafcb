package reader

import (
	"time"

	"nightbook/schema"
)

// maxTenor bounds the count in a tenor: more is a slip of the keyboard.
const maxTenor = 36500

var badTenor = &finding{schema.BadDate, "expected a tenor such as 1D, 2W, 3M or 5Y"}

// parseTenor returns the date that lies a tenor after from. Months and years
// are calendar months: the same day of the month, or the last day of a month
// that has no such day.
func parseTenor(text []byte, from schema.Date) (schema.Date, *finding) {
	n, digits := 0, 0
	for digits < len(text) && '0' <= text[digits] && text[digits] <= '9' && n <= maxTenor {
		n = 10*n + int(text[digits]-'0')
		digits++
	}
	if digits == 0 || digits != len(text)-1 || n > maxTenor {
		return schema.NoDate, badTenor
	}
	switch text[digits] | 0x20 {
	case 'd':
		return from + schema.Date(n), nil
	case 'w':
		return from + schema.Date(7*n), nil
	case 'm':
		return addMonths(from, n), nil
	case 'y':
		return addMonths(from, 12*n), nil
	}
	return schema.NoDate, badTenor
}

func addMonths(from schema.Date, n int) schema.Date {
	t := from.Time()
	// Day 0 of the month after is the last day of the month.
	last := time.Date(t.Year(), t.Month()+time.Month(n+1), 0, 0, 0, 0, 0, time.UTC)
	day := time.Date(t.Year(), t.Month()+time.Month(n), min(t.Day(), last.Day()), 0, 0, 0, 0, time.UTC)
	return schema.Date(day.Unix() / 86400)
}
