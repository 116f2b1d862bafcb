package reader

import (
	"fmt"
	"strings"
	"testing"
	"time"

	"nightbook/schema"
)

func TestParseDate(t *testing.T) {
	for _, c := range []struct{ format, text, want string }{
		{"", "2026-03-20", "2026-03-20"},
		{"", "2024-02-29", "2024-02-29"},
		{"", "0001-01-01", "0001-01-01"},
		{"", "9999-12-31", "9999-12-31"},
		{"", "2026-03-20T15:30", "2026-03-20T15:30"},
		{"", "2026-03-20 15:30:59", "2026-03-20T15:30"},
		{"", "2026-03-20T00:00", "2026-03-20T00:00"},
		{"", "2026-03-20T23:59:59", "2026-03-20T23:59"},
		{"DD.MM.YYYY", "20.03.2026", "2026-03-20"},
		{"MM/DD/YYYY", "03/20/2026 09:05", "2026-03-20T09:05"},
		{"YYYYMMDD", "20260320", "2026-03-20"},
		{"YYYYMMDD", "20260320T1530", "! HH:MM"},
		{"DD.MM.YYYY", "2026-03-20", "! form DD.MM.YYYY"},
		{"DD.MM.YYYY", "20/03/2026", "! form DD.MM.YYYY"},
		{"DD.MM.YYYY", "20.03.2026x", "! form DD.MM.YYYY"},
		{"", "20.03.2026", "! expected a date such as"},
		{"", "2026-3-20", "! expected a date such as"},
		{"", "2026-03-2", "! expected a date such as"},
		{"", "26-03-20", "! expected a date such as"},
		{"", "2026-03-20x", "! expected a date such as"},
		{"", "2026-0a-20", "! expected a date such as"},
		{"", "", "! expected a date such as"},
		{"", "2026-02-30", "! no such day"},
		{"", "2023-02-29", "! no such day"},
		{"", "2026-13-01", "! no such day"},
		{"", "2026-00-10", "! no such day"},
		{"", "0000-01-01", "! no such day"},
		{"", "2026-03-20T", "! HH:MM"},
		{"", "2026-03-20T1:30", "! HH:MM"},
		{"", "2026-03-20T24:00", "! HH:MM"},
		{"", "2026-03-20T15:60", "! HH:MM"},
		{"", "2026-03-20T15:30:60", "! HH:MM"},
		{"", "2026-03-20T15:30:5", "! HH:MM"},
		{"", "2026-03-20T15:30:59.5", "2026-03-20T15:30"},
		{"", "2026-03-20T15:30:59.", "! HH:MM"},
		{"", "2026-03-20T15:30:59.5x", "! HH:MM"},
		{"", "2026-03-20T15:30:59.5Z", "! desk's own clock"},
		{"", "2026-03-20T15:30Z", "! desk's own clock"},
		{"", "2026-03-20T15:30:00+01:00", "! desk's own clock"},
		{"", "2026-03-20 15:30-05:00", "! desk's own clock"},
	} {
		var f dateFormat
		if c.format != "" {
			var err error
			if f, err = parseDateFormat(c.format); err != nil {
				t.Fatal(err)
			}
		}
		day, minute, why := f.parse([]byte(c.text))
		want, refused := strings.CutPrefix(c.want, "! ")
		switch {
		case refused && (why == nil || why.code != schema.BadDate || !strings.Contains(why.reason, want)):
			t.Errorf("%q as %s: %v %v, want it refused for %q", c.text, f.String(), day, why, want)
		case !refused && why != nil:
			t.Errorf("%q as %s: %s", c.text, f.String(), why.reason)
		case !refused:
			if got := (schema.Moment{Day: day, Minute: minute}).String(); got != want {
				t.Errorf("%q as %s: %s, want %s", c.text, f.String(), got, want)
			}
		}
	}
}

func TestParseDateFormat(t *testing.T) {
	for _, good := range []string{"YYYY-MM-DD", "DD.MM.YYYY", "MM/DD/YYYY", "YYYYMMDD", "DD MM YYYY", "YYYY. MM. DD."} {
		_, err := parseDateFormat(good)
		if strings.Contains(good, " ") != (err != nil) {
			t.Errorf("%s: %v", good, err)
		}
	}
	for _, bad := range []string{"", "YYYY", "YY-MM-DD", "YYYY-MM-DD-DD", "YYYYY-MM-DD", "YYYY-MM-DDTHH", "dd.mm.yyyy", "YYYY-M-D", "DD1MM1YYYY"} {
		if _, err := parseDateFormat(bad); err == nil {
			t.Errorf("%q is taken for a format", bad)
		}
	}
}

// Every day of four centuries, the length of the calendar's cycle, reads back.
func TestEveryDay(t *testing.T) {
	var f dateFormat
	for day := schema.Date(0); day < 146097; day++ {
		got, _, why := f.parse([]byte(day.String()))
		if why != nil || got != day {
			t.Fatalf("%s: %v %v", day, got, why)
		}
	}
}

func TestFirstAndLastDay(t *testing.T) {
	if got := firstDay.String() + " " + lastDay.String(); got != "0001-01-01 9999-12-31" {
		t.Error(got)
	}
}

func FuzzDate(f *testing.F) {
	f.Add("", "2026-03-20T15:30:59")
	f.Add("DD.MM.YYYY", "20.03.2026 15:30")
	f.Add("YYYYMMDD", "20260320")
	f.Fuzz(func(t *testing.T, pattern, text string) {
		form, err := parseDateFormat(pattern)
		if err != nil {
			form = dateFormat{}
		}
		day, minute, why := form.parse([]byte(text))
		if why != nil {
			return
		}
		if day < firstDay || day > lastDay || minute < schema.NoMinute || minute >= 24*60 {
			t.Errorf("%q: %v %d", text, day, minute)
		}
		if form.pattern != "" {
			return
		}
		want, err := time.Parse(time.DateOnly, text[:10])
		if err != nil || want.Unix() != int64(day)*86400 {
			t.Errorf("%q: %v, the standard library says %v %v", text, day, want, err)
		}
	})
}

func TestParseTenor(t *testing.T) {
	on := func(s string) schema.Date {
		d, _, why := isoDate.parse([]byte(s))
		if why != nil {
			t.Fatal(s)
		}
		return d
	}
	for _, c := range []struct{ from, tenor, want string }{
		{"2026-03-20", "1D", "2026-03-21"}, {"2026-03-20", "2w", "2026-04-03"}, {"2026-03-20", "3M", "2026-06-20"}, {"2026-03-20", "5Y", "2031-03-20"},
		{"2026-03-20", "0D", "2026-03-20"}, {"2026-03-20", "18m", "2027-09-20"}, {"2026-12-31", "2M", "2027-02-28"}, {"2026-01-31", "1M", "2026-02-28"},
		{"2024-01-31", "1M", "2024-02-29"}, {"2024-02-29", "1Y", "2025-02-28"}, {"2024-02-29", "4Y", "2028-02-29"}, {"2026-08-31", "1M", "2026-09-30"},
		{"2026-11-30", "3M", "2027-02-28"}, {"2026-03-20", "365D", "2027-03-20"}, {"2026-03-20", "007D", "2026-03-27"},
	} {
		got, why := parseTenor([]byte(c.tenor), on(c.from))
		if why != nil || got.String() != c.want {
			t.Errorf("%s after %s: %v %v, want %s", c.tenor, c.from, got, why, c.want)
		}
	}
	for _, bad := range []string{"", "M", "3", "3 M", "-3M", "+3M", "3MM", "3M ", "1.5Y", "3Q", "ON", "99999999999999999999D", "36501D", "3m2d"} {
		if d, why := parseTenor([]byte(bad), 0); why == nil {
			t.Errorf("%q reads as %v", bad, d)
		}
	}
}

// Months and weeks never come out of order, and a month moves by 28 to 31 days.
func FuzzTenor(f *testing.F) {
	f.Add("3M", int32(20532))
	f.Add("36500Y", int32(0))
	f.Add("12w", int32(-5))
	f.Fuzz(func(t *testing.T, tenor string, from int32) {
		start := schema.Date(from % 1_000_000)
		day, why := parseTenor([]byte(tenor), start)
		if why != nil {
			return
		}
		var n int
		var unit string
		if _, err := fmt.Sscanf(tenor, "%d%1s", &n, &unit); err != nil {
			t.Fatalf("%q is taken for a tenor", tenor)
		}
		least := map[string]int{"d": 1, "w": 7, "m": 28, "y": 365}[strings.ToLower(unit)]
		most := map[string]int{"d": 1, "w": 7, "m": 31, "y": 366}[strings.ToLower(unit)]
		if moved := int(day - start); moved < least*n || moved > most*n {
			t.Errorf("%s moves %v to %v", tenor, start, day)
		}
	})
}
