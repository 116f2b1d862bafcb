package csv

import (
	"bytes"
	"errors"
	"io"
	"unicode/utf16"
	"unicode/utf8"
)

// Encoding is how the characters of a file are written as bytes.
type Encoding uint8

// The encodings read.
const (
	UTF8 Encoding = iota
	Windows1252
	UTF16 // in the byte order of its mark; without one, the low byte first
)

// EncodingNames are the names of the encodings, in their order.
var EncodingNames = [...]string{"utf-8", "windows-1252", "utf-16"}

// decoded returns r as UTF-8 without its byte order mark. A byte order mark
// wins over the encoding declared: detected then names what it showed.
func decoded(r io.Reader, declared Encoding) (utf8 io.Reader, detected string, err error) {
	var head [4]byte
	n, err := io.ReadFull(r, head[:])
	if err != nil && err != io.EOF && !errors.Is(err, io.ErrUnexpectedEOF) {
		return nil, "", err
	}
	if errors.Is(err, io.ErrUnexpectedEOF) && n == 0 {
		return nil, "", err // the reader's own: ReadFull gives EOF for nothing at all
	}
	rest := func(from int) io.Reader {
		return io.MultiReader(bytes.NewReader(head[min(from, n):n]), r)
	}
	found, low, mark := declared, 0, 0
	switch {
	case n == 4 && head == [4]byte{0xFF, 0xFE, 0, 0}, n == 4 && head == [4]byte{0, 0, 0xFE, 0xFF}:
		return nil, "", fault(0, "the byte order mark shows the file to be UTF-32, which is not read: save it as UTF-8")
	case bytes.HasPrefix(head[:n], []byte{0xEF, 0xBB, 0xBF}):
		found, mark = UTF8, 3
	case bytes.HasPrefix(head[:n], []byte{0xFF, 0xFE}):
		found, mark = UTF16, 2
	case bytes.HasPrefix(head[:n], []byte{0xFE, 0xFF}):
		found, mark, low = UTF16, 2, 1
	}
	if found != declared {
		detected = EncodingNames[found]
	}
	switch found {
	case Windows1252:
		return &transcoder{r: rest(0), step: fromWindows1252}, detected, nil
	case UTF16:
		step := fromUTF16Low
		if low == 1 {
			step = fromUTF16High
		}
		return &transcoder{r: rest(mark), step: step}, detected, nil
	}
	return rest(mark), detected, nil
}

// transcoder turns the bytes of r into UTF-8. What stands for no character
// becomes the byte 0xFF, which no UTF-8 text holds, so that the cell it is in
// is refused and not silently altered.
type transcoder struct {
	r    io.Reader
	step func(out, in []byte, last bool) (grown []byte, used int)
	in   []byte
	out  []byte
	at   int // of out, not yet handed on
	err  error
}

func (t *transcoder) Read(p []byte) (int, error) {
	if len(p) == 0 {
		return 0, nil
	}
	for t.at == len(t.out) {
		if t.err != nil {
			return 0, t.err
		}
		have := len(t.in)
		if cap(t.in) < have+32<<10 {
			t.in = append(make([]byte, 0, have+64<<10), t.in...)
		}
		n, err := t.r.Read(t.in[have : have+32<<10])
		t.in, t.err = t.in[:have+n], err
		used := 0
		t.out, used = t.step(t.out[:0], t.in, err == io.EOF)
		t.in, t.at = t.in[:copy(t.in, t.in[used:])], 0
	}
	n := copy(p, t.out[t.at:])
	t.at += n
	return n, nil
}

const notACharacter = 0xFF

// windows1252 holds the characters of bytes 0x80 to 0x9F; the rest are Latin-1.
// Source: the mapping table CP1252.TXT of the Unicode Consortium; 0 marks the
// five bytes it leaves undefined.
var windows1252 = [32]rune{
	0x20AC, 0, 0x201A, 0x0192, 0x201E, 0x2026, 0x2020, 0x2021, 0x02C6, 0x2030, 0x0160, 0x2039, 0x0152, 0, 0x017D, 0,
	0, 0x2018, 0x2019, 0x201C, 0x201D, 0x2022, 0x2013, 0x2014, 0x02DC, 0x2122, 0x0161, 0x203A, 0x0153, 0, 0x017E, 0x0178,
}

func fromWindows1252(out, in []byte, _ bool) ([]byte, int) {
	for _, c := range in {
		r := rune(c)
		if 0x80 <= c && c < 0xA0 {
			if r = windows1252[c-0x80]; r == 0 {
				out = append(out, notACharacter)
				continue
			}
		}
		out = utf8.AppendRune(out, r)
	}
	return out, len(in)
}

func fromUTF16Low(out, in []byte, last bool) ([]byte, int)  { return fromUTF16(out, in, last, 0) }
func fromUTF16High(out, in []byte, last bool) ([]byte, int) { return fromUTF16(out, in, last, 1) }

func fromUTF16(out, in []byte, last bool, low int) ([]byte, int) {
	unit := func(at int) rune { return rune(in[at+low]) | rune(in[at+1-low])<<8 }
	at := 0
	for at+2 <= len(in) {
		r := unit(at)
		if utf16.IsSurrogate(r) {
			if at+4 > len(in) && !last {
				return out, at
			}
			r = utf8.RuneError
			if at+4 <= len(in) {
				r = utf16.DecodeRune(unit(at), unit(at+2))
			}
			if r == utf8.RuneError { // half a character
				out = append(out, notACharacter)
				at += 2
				continue
			}
			at += 2
		}
		out = utf8.AppendRune(out, r)
		at += 2
	}
	if last && at < len(in) {
		return append(out, notACharacter), len(in)
	}
	return out, at
}
