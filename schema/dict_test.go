package schema

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

// An interner must give the codes of its dictionary, whatever it remembers.
func TestInterner(t *testing.T) {
	d := NewDict()
	n := NewInterner(d)
	r := rand.New(rand.NewPCG(1, 2))
	for range 200_000 {
		text := make([]byte, r.IntN(20))
		for i := range text {
			text[i] = byte(r.IntN(2)) // zero bytes, too
		}
		c := n.Code(text)
		if got := d.Name(c); got != string(text) {
			t.Fatalf("the code of %q is that of %q", text, got)
		}
		if want := d.Code(string(text)); c != want {
			t.Fatalf("%q has codes %d and %d", text, c, want)
		}
	}
}

func BenchmarkInterner(b *testing.B) {
	n := NewInterner(NewDict())
	var names [][]byte
	for i := range 60 {
		names = append(names, fmt.Appendf(nil, "UNDERLYING%d", i*i))
	}
	i := 0
	for b.Loop() {
		n.Code(names[i%60])
		i += 7
	}
}
