package schema

import (
	"testing"
	"time"
)

// Every day there is, and the days there are not, against package time.
func TestDateOf(t *testing.T) {
	for y := -1; y <= 10_001; y++ {
		for m := -1; m <= 14; m++ {
			for d := -1; d <= 33; d++ {
				day := time.Date(y, time.Month(m), d, 0, 0, 0, 0, time.UTC)
				is := y >= 1 && y <= 9999 && day.Year() == y && int(day.Month()) == m && day.Day() == d
				got, ok := DateOf(y, m, d)
				if ok != is || ok && int64(got) != day.Unix()/86400 {
					t.Fatalf("%d-%d-%d: %d, %v", y, m, d, got, ok)
				}
			}
		}
	}
}
