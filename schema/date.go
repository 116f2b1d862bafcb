package schema

import (
	"fmt"
	"time"
)

// Date is a calendar date as days since 1970-01-01.
type Date int32

// NoDate is the absent date.
const NoDate Date = -1 << 31

// NoMinute marks a date that carries no time of day.
const NoMinute = -1

const minutesPerYear = 365 * 24 * 60

// DateOf returns the date of y-m-d; ok is false where there is no such day.
func DateOf(y, m, d int) (Date, bool) {
	if y < 1 || y > 9999 || m < 1 || m > 12 || d < 1 || d > daysIn(y, m) {
		return NoDate, false
	}
	if m < 3 { // the year begins in March: the leap day is its last
		y, m = y-1, m+12
	}
	days := 365*y + y/4 - y/100 + y/400 + (153*(m-3)+2)/5 + d - 1
	const epoch = 719_468 // 1970-01-01, from 0000-03-01
	return Date(days - epoch), true
}

func daysIn(y, m int) int {
	switch {
	case m == 2 && y%4 == 0 && (y%100 != 0 || y%400 == 0):
		return 29
	case m == 2:
		return 28
	case m == 4 || m == 6 || m == 9 || m == 11:
		return 30
	}
	return 31
}

// Time returns midnight UTC of the date.
func (d Date) Time() time.Time { return time.Unix(int64(d)*86400, 0).UTC() }

// String returns the date as YYYY-MM-DD, or "" for NoDate.
func (d Date) String() string {
	if d == NoDate {
		return ""
	}
	return d.Time().Format(time.DateOnly)
}

// AppendDate appends the date as YYYY-MM-DD; NoDate appends nothing.
func (d Date) AppendDate(b []byte) []byte {
	if d == NoDate {
		return b
	}
	return d.Time().AppendFormat(b, time.DateOnly)
}

// Weekend reports whether the date is a Saturday or a Sunday.
func (d Date) Weekend() bool {
	w := (int(d)%7 + 7) % 7 // day 0 was a Thursday
	return w == 2 || w == 3
}

// Moment is a date, with a time of day where one was given.
type Moment struct {
	Day    Date
	Minute int16 // minutes after midnight, or NoMinute
}

// Years returns the time from m to the moment (day, minute) in years of 365
// days: whole days when either side carries no time of day, else to the minute.
func (m Moment) Years(day Date, minute int16) float64 {
	days := int64(day) - int64(m.Day)
	if m.Minute == NoMinute || minute == NoMinute {
		return float64(days) / 365
	}
	return float64(days*1440+int64(minute)-int64(m.Minute)) / minutesPerYear
}

// String returns YYYY-MM-DD, with THH:MM where there is a time of day.
func (m Moment) String() string {
	if m.Minute == NoMinute {
		return m.Day.String()
	}
	return m.Day.String() + "T" + Clock(m.Minute)
}

// Clock returns minutes after midnight as HH:MM, "" for NoMinute.
func Clock(minute int16) string {
	if minute == NoMinute {
		return ""
	}
	return fmt.Sprintf("%02d:%02d", minute/60, minute%60)
}
