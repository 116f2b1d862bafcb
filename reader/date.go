package reader

import (
	"bytes"
	"errors"
	"fmt"
	"strings"

	"nightbook/schema"
)

// dateFormat is a house's way of writing dates: where the digits of the year,
// the month and the day stand, and what stands between them. The zero value is
// YYYY-MM-DD.
type dateFormat struct {
	pattern          string
	year, month, day int
}

// parseDateFormat reads a pattern in the letters YYYY, MM and DD.
func parseDateFormat(pattern string) (dateFormat, error) {
	f := dateFormat{pattern: pattern, year: strings.Index(pattern, "YYYY"), month: strings.Index(pattern, "MM"), day: strings.Index(pattern, "DD")}
	rest := pattern
	for _, part := range []string{"YYYY", "MM", "DD"} {
		rest = strings.Replace(rest, part, "", 1)
	}
	if f.year < 0 || f.month < 0 || f.day < 0 || strings.ContainsAny(rest, "YMD0123456789T :") || len(rest) > 8 {
		return f, errors.New("expected YYYY, MM and DD once each, such as DD.MM.YYYY")
	}
	return f, nil
}

func (f *dateFormat) String() string {
	if f.pattern == "" {
		return "YYYY-MM-DD"
	}
	return f.pattern
}

// Findings on dates. They carry no value: a Reject has its own place for it.
var (
	notDate     = &finding{schema.BadDate, "expected a date such as 2026-03-20, or a date and time such as 2026-03-20T15:30; if the file writes dates in another order, say so in [csv] date_format"}
	notDay      = &finding{schema.BadDate, "there is no such day in the calendar"}
	notClock    = &finding{schema.BadDate, "expected a time of day as HH:MM or HH:MM:SS behind the date"}
	offCalendar = &finding{schema.BadDate, "the date is outside the years 1 to 9999"}
	// A moment of UTC is a time of the desk's clock only for one who knows the desk's zone.
	notDesksClock = &finding{schema.BadDate, "the time is of UTC, and dates are those of the desk's own clock: write the column as a date, or as a timestamp without a zone (isAdjustedToUTC false); if the times are the desk's all the same, set utc = \"as_is\" under [parquet] in run.toml"}
	zoned         = &finding{schema.BadDate, "times are the desk's own clock: write the time without Z or offset"}
)

// The first and the last date that are written with four digits of the year.
const (
	firstDay schema.Date = -719162 // 0001-01-01
	lastDay  schema.Date = 2932896 // 9999-12-31
)

// parse reads a date, and the time of day behind it if there is one: after a T
// or a space, as HH:MM or HH:MM:SS. Seconds and their
// fraction are rounded down to the minute.
func (f *dateFormat) parse(text []byte) (day schema.Date, minute int16, why *finding) {
	if f.pattern == "" {
		f = &isoDate
	}
	n := len(f.pattern)
	if len(text) < n {
		return schema.NoDate, schema.NoMinute, f.expected()
	}
	for i := range n {
		if c := f.pattern[i]; c != 'Y' && c != 'M' && c != 'D' && c != text[i] {
			return schema.NoDate, schema.NoMinute, f.expected()
		}
	}
	y1, ok1 := twoDigits(text[f.year:])
	y2, ok2 := twoDigits(text[f.year+2:])
	m, ok3 := twoDigits(text[f.month:])
	d, ok4 := twoDigits(text[f.day:])
	if !(ok1 && ok2 && ok3 && ok4) {
		return schema.NoDate, schema.NoMinute, f.expected()
	}
	if minute, why = parseClock(text[n:]); why != nil {
		if why == notDate {
			why = f.expected()
		}
		return schema.NoDate, schema.NoMinute, why
	}
	day, ok := schema.DateOf(100*y1+y2, m, d)
	if !ok {
		return schema.NoDate, schema.NoMinute, notDay
	}
	return day, minute, nil
}

var isoDate = dateFormat{"YYYY-MM-DD", 0, 5, 8}

func (f *dateFormat) expected() *finding {
	if f.pattern == isoDate.pattern {
		return notDate
	}
	return &finding{schema.BadDate, fmt.Sprintf("expected a date in the form %s, as [csv] date_format says", f.pattern)}
}

// parseClock reads what follows a date: nothing, or a time of day.
func parseClock(text []byte) (minute int16, why *finding) {
	if len(text) == 0 {
		return schema.NoMinute, nil
	}
	if text[0] != 'T' && text[0] != ' ' {
		return 0, notDate
	}
	text = text[1:]
	if len(text) < 5 || text[2] != ':' {
		return 0, notClock
	}
	h, ok1 := twoDigits(text)
	m, ok2 := twoDigits(text[3:])
	if !ok1 || !ok2 || h > 23 || m > 59 {
		return 0, notClock
	}
	rest := text[5:]
	if len(rest) >= 3 && rest[0] == ':' {
		if s, ok := twoDigits(rest[1:]); !ok || s > 59 {
			return 0, notClock
		}
		rest = rest[3:]
		if len(rest) > 1 && rest[0] == '.' { // the fraction of a second
			rest = bytes.TrimLeft(rest[1:], "0123456789")
		}
	}
	if len(rest) > 0 {
		if c := rest[0]; c == 'Z' || c == 'z' || c == '+' || c == '-' {
			return 0, zoned
		}
		return 0, notClock
	}
	return int16(60*h + m), nil
}

// twoDigits reads the first two bytes of text.
func twoDigits(text []byte) (n int, ok bool) {
	if len(text) < 2 {
		return 0, false
	}
	a, b := text[0]-'0', text[1]-'0'
	return int(a)*10 + int(b), a <= 9 && b <= 9
}
