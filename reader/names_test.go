package reader

import (
	"bytes"
	"testing"
)

// Every byte is told at every place of names short and long.
func TestCheckName(t *testing.T) {
	for n := range 35 {
		name := bytes.Repeat([]byte("x~ "), 12)[:n]
		if why := checkName(name); why != nil {
			t.Errorf("%q: %s", name, why.reason)
		}
		for at := range name {
			was := name[at]
			for c := range 256 {
				name[at] = byte(c)
				var want *finding
				switch {
				case c < 0x20 || c == 0x7f:
					want = hasControl
				case c >= 0x80:
					want = notUTF8
				}
				if got := checkName(name); got != want {
					t.Fatalf("%q: %v, want %v", name, got, want)
				}
			}
			name[at] = was
		}
	}
}
