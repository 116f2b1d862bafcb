package reader

import (
	"encoding/binary"
	"fmt"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"
)

// LineIDs says what a map says, for ids of every form.
func TestLineIDsLikeMap(t *testing.T) {
	rng := rand.New(rand.NewPCG(34, 55))
	var ids LineIDs
	seen := map[string]bool{}
	prefixes := []string{"", "A", "DESK7-", "ä", "0", "x0", strings.Repeat("p", 60)}
	for n := range 400_000 {
		var id string
		switch rng.IntN(6) {
		case 0: // numbers close together, with and without zeros before them
			id = fmt.Sprintf("%s%0*d", prefixes[rng.IntN(len(prefixes))], rng.IntN(8), rng.IntN(20_000))
		case 1: // numbers of up to 25 digits
			for range 1 + rng.IntN(25) {
				id += string(rune('0' + rng.IntN(3)))
			}
		case 2: // texts without a number
			for range 1 + rng.IntN(4) {
				id += string(rune('a' + rng.IntN(8)))
			}
		case 3: // prefixes without end
			id = fmt.Sprintf("%x-%d", rng.IntN(200_000), rng.IntN(3))
		case 4: // long ids
			id = strings.Repeat("q", 50+rng.IntN(40)) + fmt.Sprint(rng.IntN(10))
		default: // in sequence
			id = fmt.Sprintf("L%07d", n)
		}
		if got := ids.Seen([]byte(id)); got != seen[id] {
			t.Fatalf("id %q: %v, want %v", id, got, seen[id])
		}
		seen[id] = true
	}
	if len(ids.prefixes) != maxPrefixes {
		t.Errorf("%d prefixes: the case of too many was not met", len(ids.prefixes))
	}
}

// Digits tell ids apart exactly as they are written.
func TestLineIDsForms(t *testing.T) {
	var ids LineIDs
	for _, id := range []string{"1", "01", "001", "A1", "A01", "A", "A1 ", "1A", "999999999999999", "1999999999999999", "9999999999999999", "0", "00", "63", "64", "a1", strings.Repeat("1", 300), strings.Repeat("1", 301)} {
		if ids.Seen([]byte(id)) {
			t.Errorf("%q is taken for another", id)
		}
		if !ids.Seen([]byte(id)) {
			t.Errorf("%q is forgotten", id)
		}
	}
	for range 2 {
		if ids.Seen(nil) {
			t.Error("the empty id was met before")
		}
	}
}

// strconv of the standard library is the reference.
func TestEightDigits(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for range 100_000 {
		text := []byte(fmt.Sprintf("%08d", rng.IntN(1e8)))
		for rng.IntN(3) == 0 {
			text[rng.IntN(8)] = byte(rng.IntN(256))
		}
		want, err := strconv.ParseUint(string(text), 10, 64)
		got, ok := eightDigits(binary.LittleEndian.Uint64(text))
		if ok != (err == nil) || ok && got != want {
			t.Fatalf("%q is %d, %v; want %d, %v", text, got, ok, want, err)
		}
	}
	for at := range 8 {
		for c := range 256 {
			text := []byte("00000000")
			text[at] = byte(c)
			if _, ok := eightDigits(binary.LittleEndian.Uint64(text)); ok != ('0' <= c && c <= '9') {
				t.Fatalf("%q: %v", text, ok)
			}
		}
	}
}

// Ten million ids in sequence take a few megabytes.
func TestLineIDsMemory(t *testing.T) {
	var ids LineIDs
	id := []byte("L00000000")
	for n := range 10_000_000 {
		for at, x := len(id)-1, n; at > 0; at-- {
			id[at] = byte('0' + x%10)
			x /= 10
		}
		if ids.Seen(id) {
			t.Fatalf("%s was met before", id)
		}
	}
	if size := 16 * len(ids.words.words); size > 5<<20 || ids.prints.n > 0 {
		t.Errorf("%d bytes, %d prints", size, ids.prints.n)
	}
}

func BenchmarkLineIDs(b *testing.B) {
	b.Run("sequence", func(b *testing.B) {
		var ids LineIDs
		id := []byte("L0000000000")
		b.ReportAllocs()
		for n := 0; b.Loop(); n++ {
			for at, x := len(id)-1, n; at > 0; at-- {
				id[at] = byte('0' + x%10)
				x /= 10
			}
			if ids.Seen(id) {
				b.Fatal("met before")
			}
		}
	})
	b.Run("random", func(b *testing.B) {
		var ids LineIDs
		rng := rand.New(rand.NewPCG(1, 2))
		id := []byte("xxxxxxxxxxxxxxxxz")
		b.ReportAllocs()
		for b.Loop() {
			for at, x := 0, rng.Uint64(); at < 16; at++ {
				id[at] = byte('a' + x%16)
				x /= 16
			}
			if ids.Seen(id) {
				b.Fatal("met before")
			}
		}
	})
}
