package csv

import (
	"bytes"
	"io"
	"strings"
	"testing"
	"testing/iotest"
	"unicode/utf16"
)

// inUTF16 returns text in UTF-16, with a byte order mark.
func inUTF16(text string, high bool) string {
	var b strings.Builder
	for _, u := range utf16.Encode([]rune("\uFEFF" + text)) {
		if high {
			b.WriteByte(byte(u >> 8))
			b.WriteByte(byte(u))
		} else {
			b.WriteByte(byte(u))
			b.WriteByte(byte(u >> 8))
		}
	}
	return b.String()
}

func TestEncodings(t *testing.T) {
	const text = "name,b\nZürich €,𝄞\nsecond,row\n"
	for _, c := range []struct {
		name, text string
		declared   Encoding
		detected   string
		want       string
	}{
		{"utf-8", text, UTF8, "", "Zürich €,𝄞"},
		{"utf-8 with mark", "\uFEFF" + text, UTF8, "", "Zürich €,𝄞"},
		{"utf-8 with mark, declared otherwise", "\uFEFF" + text, Windows1252, "utf-8", "Zürich €,𝄞"},
		{"utf-16 low first", inUTF16(text, false), UTF8, "utf-16", "Zürich €,𝄞"},
		{"utf-16 high first", inUTF16(text, true), UTF8, "utf-16", "Zürich €,𝄞"},
		{"utf-16 declared", inUTF16(text, true), UTF16, "", "Zürich €,𝄞"},
		{"utf-16 without mark", inUTF16(text, false)[2:], UTF16, "", "Zürich €,𝄞"},
		{"windows-1252", "name,b\nZ\xFCrich \x80,\x9F\n", Windows1252, "", "Zürich €,Ÿ"},
		{"windows-1252, undefined", "name,b\nx\x81,y\n", Windows1252, "", "x\xFF,y"},
		{"half a pair", inUTF16("a,b\nx", false) + "\x00\xD8" + ",\x00y\x00", UTF8, "utf-16", "x\xFF,y"},
		{"half a pair at the end", inUTF16("a,b\nx,y", false) + "\x00\xD8", UTF8, "utf-16", "x,y\xFF"},
		{"odd byte", inUTF16("a,b\nx,y", false) + "z", UTF8, "utf-16", "x,y\xFF"},
	} {
		for _, size := range []int{0, 1, 3} {
			s, err := NewScanner(strings.NewReader(c.text), Options{Encoding: c.declared, ReadSize: size})
			if err != nil {
				t.Fatalf("%s: %v", c.name, err)
			}
			if got := s.Detected(); got != c.detected {
				t.Errorf("%s: detected %q, want %q", c.name, got, c.detected)
			}
			var b Block
			if err := s.Next(&b); err != nil {
				t.Fatalf("%s: %v", c.name, err)
			}
			if got := string(b.Data[b.Records[0].Start:b.Records[0].End]); got != c.want {
				t.Errorf("%s, %d bytes at a time: %q, want %q", c.name, size, got, c.want)
			}
		}
	}
}

// Every character of Windows-1252 comes out as the standard's own table says;
// the expected text is typed out rather than taken from the code.
func TestWindows1252Table(t *testing.T) {
	const want = "€‚ƒ„…†‡ˆ‰Š‹ŒŽ‘’“”•–—˜™š›œžŸ"
	var in []byte
	for c := 0x80; c < 0xA0; c++ {
		if windows1252[c-0x80] != 0 {
			in = append(in, byte(c))
		}
	}
	out, used := fromWindows1252(nil, in, true)
	if string(out) != want || used != len(in) {
		t.Errorf("%s, want %s", out, want)
	}
	out, _ = fromWindows1252(nil, []byte{'A', 0xA0, 0xE9, 0xFF}, true)
	if string(out) != "A\u00A0éÿ" {
		t.Errorf("Latin-1: %q", out)
	}
}

// FuzzEncoding turns any bytes into UTF-8, read however they come.
func FuzzEncoding(f *testing.F) {
	for _, s := range []string{"", "a,b", "\xEF\xBB\xBFa", "\xFF\xFEa\x00\x3d\xd8\x00\xde", "\xFE\xFF\x00a\xd8", "\x80\x81\xe4"} {
		for e := range EncodingNames {
			f.Add([]byte(s), byte(e))
		}
	}
	f.Fuzz(func(t *testing.T, b []byte, e byte) {
		all := func(r io.Reader) string {
			u, _, err := decoded(r, Encoding(int(e)%len(EncodingNames)))
			if wide := bytes.HasPrefix(b, []byte("\xFF\xFE\x00\x00")) || bytes.HasPrefix(b, []byte("\x00\x00\xFE\xFF")); (err != nil) != wide {
				t.Fatalf("UTF-32 %v: %v", wide, err)
			}
			if err != nil {
				return err.Error()
			}
			text, err := io.ReadAll(u)
			if err != nil {
				t.Fatal(err)
			}
			return string(text)
		}
		whole := all(bytes.NewReader(b))
		if got := all(iotest.OneByteReader(bytes.NewReader(b))); got != whole {
			t.Fatalf("byte by byte %q, at once %q", got, whole)
		}
	})
}
