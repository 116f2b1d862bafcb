package parquet

import (
	"bytes"
	"encoding/hex"
	"strings"
	"testing"
)

// Blocks taken apart by hand, from the rules of the format's description.
var lz4Blocks = map[string]string{
	"00":                                   "",
	"50 68656c6c6f":                        "hello",
	"1a 61 0100 50 7a7a7a7a7a":             "a" + strings.Repeat("a", 14) + "zzzzz", // one byte repeated
	"2f 6162 0200 05 10 63":                "ab" + strings.Repeat("ab", 12) + "c",   // 15 + 5 + 4 bytes
	"f0 00 6162636465666768696a6b6c6d6e6f": "abcdefghijklmno",                       // fifteen literals: the length is carried on by 0
	"41 61626364 0400 30 78797a":           "abcdabcda" + "xyz",                     // five bytes, of which the last is one of the copy
}

func block(t testing.TB, digits string) []byte {
	t.Helper()
	b, err := hex.DecodeString(strings.ReplaceAll(digits, " ", ""))
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func TestLZ4(t *testing.T) {
	for digits, want := range lz4Blocks {
		got, err := unlz4(block(t, digits), len(want), nil)
		if err != nil || string(got) != want {
			t.Errorf("%s: %q %v, want %q", digits, got, err, want)
		}
	}
}

// What is cut short, points before its beginning, or has another size than it
// claims is refused.
func TestLZ4Refused(t *testing.T) {
	for digits, want := range lz4Blocks {
		b := block(t, digits)
		for n := range b {
			if out, err := unlz4(b[:n], len(want), nil); err == nil && len(out) == len(want) {
				t.Errorf("%s cut to %d bytes unpacks", digits, n)
			}
		}
		if len(want) > 0 {
			if _, err := unlz4(b, len(want)-1, nil); err == nil {
				t.Errorf("%s unpacks to more than it may", digits)
			}
		}
	}
	for _, digits := range []string{"", "10 61 0200 00", "10 61 0000 00", "1f 61 0100 ffffff", "f0 ffffff", "11 61"} {
		if out, err := unlz4(block(t, digits), 1000, nil); err == nil {
			t.Errorf("%s unpacks to %q", digits, out)
		}
	}
	if _, err := unlz4(make([]byte, 100), maxPage, nil); err == nil {
		t.Error("a hundred bytes claim 256 MiB")
	}
}

func FuzzLZ4(f *testing.F) {
	for digits, want := range lz4Blocks {
		f.Add(block(f, digits), len(want))
	}
	f.Fuzz(func(t *testing.T, packed []byte, size int) {
		if size < 0 || size > 1<<20 {
			return
		}
		out, err := unlz4(packed, size, nil)
		if err == nil && len(out) > size {
			t.Fatalf("%d bytes, the limit is %d", len(out), size)
		}
		again, err2 := unlz4(bytes.Clone(packed), size, make([]byte, 7))
		if (err == nil) != (err2 == nil) || !bytes.Equal(out, again) {
			t.Fatalf("the memory given changes what is unpacked: %v, %v", err, err2)
		}
	})
}
