package main

import (
	"testing"
	"time"
)

func TestProgressText(t *testing.T) {
	for _, c := range []struct {
		rows, bytes, size int64
		took              time.Duration
		want              string
	}{
		{0, 0, 1000, 0, "0 rows"},
		{250_000, 250, 1000, 2 * time.Second, "250,000 rows, 125,000 a second, 6s left"},
		{4_096, 1, 1001, 250 * time.Millisecond, "4,096 rows, 16,384 a second, 4m10s left"},
		{1_000_000, 1000, 1000, 4 * time.Second, "1,000,000 rows, 250,000 a second, 0s left"},
		{1_000, 1001, 1000, time.Second, "1,000 rows, 1,000 a second, 0s left"}, // a file that has grown
	} {
		if got := progressText(c.rows, c.bytes, c.size, c.took); got != c.want {
			t.Errorf("%d rows: %q, want %q", c.rows, got, c.want)
		}
	}
}
