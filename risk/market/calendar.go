package market

import "nightbook/schema"

// Calendar knows the business days of one place: Monday to Friday, less its
// holidays.
type Calendar struct {
	closed map[schema.Date]bool
}

// newCalendar returns the calendar of that name, and how many holidays it has.
func newCalendar(name string, rows []schema.HolidayRow) (*Calendar, int) {
	c := &Calendar{closed: map[schema.Date]bool{}}
	for _, r := range rows {
		if r.Calendar == name {
			c.closed[r.Day] = true
		}
	}
	return c, len(c.closed)
}

// Next returns the first business day after day.
func (c *Calendar) Next(day schema.Date) schema.Date {
	for {
		day++
		if !day.Weekend() && !c.closed[day] {
			return day
		}
	}
}
