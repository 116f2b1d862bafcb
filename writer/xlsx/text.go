package xlsx

import (
	"fmt"
	"strings"
	"unicode/utf8"
)

// maxText is how many UTF-16 units the text of a cell may have.
const maxText = 32_767

// appendText appends s as the content of an XML element, in the way of sheets:
// a character that XML cannot hold is _xHHHH_ in it, and so a text that already
// looks like that has its first underscore written in this way. A text too long
// for a cell is cut and ends with a note.
func appendText(b []byte, s string) (_ []byte, cut bool) {
	if len(s) > maxText { // never fewer bytes than units
		if units := utf16Len(s); units > maxText {
			note := fmt.Sprintf(" … [cut: %d characters in all]", units)
			s, cut = utf16Prefix(s, maxText-utf16Len(note))+note, true
		}
	}
	plain := 0 // s[plain:i] can be copied
	for i := 0; i < len(s); {
		c := s[i]
		size := 1
		var as string
		switch {
		case c == '&':
			as = "&amp;"
		case c == '<':
			as = "&lt;"
		case c == '>':
			as = "&gt;"
		case c == '_' && looksEscaped(s[i:]):
			as = "_x005F_"
		case c == '\t' || c == '\n':
		case c < ' ':
			as = fmt.Sprintf("_x%04X_", c)
		case c >= utf8.RuneSelf:
			var r rune
			r, size = utf8.DecodeRuneInString(s[i:])
			if r == utf8.RuneError && size == 1 || r == 0xFFFE || r == 0xFFFF {
				as = "\uFFFD"
			}
		}
		if as != "" {
			b = append(b, s[plain:i]...)
			b = append(b, as...)
			plain = i + size
		}
		i += size
	}
	return append(b, s[plain:]...), cut
}

// looksEscaped reports whether s begins like _xHHHH_.
func looksEscaped(s string) bool {
	if len(s) < 7 || s[1] != 'x' || s[6] != '_' {
		return false
	}
	return strings.Trim(s[2:6], "0123456789ABCDEFabcdef") == ""
}

func utf16Len(s string) int {
	n := 0
	for _, r := range s {
		n++
		if r > 0xFFFF {
			n++
		}
	}
	return n
}

// utf16Prefix returns the longest prefix of at most n units.
func utf16Prefix(s string, n int) string {
	for i, r := range s {
		if n--; r > 0xFFFF {
			n--
		}
		if n < 0 {
			return s[:i]
		}
	}
	return s
}
