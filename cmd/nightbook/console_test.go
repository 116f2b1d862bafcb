package main

import (
	"math"
	"testing"
)

func TestGrouped(t *testing.T) {
	for _, c := range []struct {
		x        float64
		decimals int
		want     string
	}{
		{0, 0, "0"}, {-0.4, 0, "0"}, {999, 0, "999"}, {-1000, 0, "-1,000"}, {1234567.891, 2, "1,234,567.89"},
		{1 << 53, 0, "9,007,199,254,740,992"}, {math.Nextafter(1<<53, math.Inf(1)), 0, "9.00720e+15"}, {-1e300, 2, "-1.00000e+300"},
	} {
		if got := grouped(c.x, c.decimals); got != c.want {
			t.Errorf("grouped(%v, %d) = %s, want %s", c.x, c.decimals, got, c.want)
		}
	}
}
