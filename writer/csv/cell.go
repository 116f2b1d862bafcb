package csv

import (
	"fmt"
	"strings"
	"unicode/utf8"
)

// appendText appends s, with an apostrophe before it where guard is set and a
// spreadsheet would take it for a formula, in quotes where it needs them.
func appendText(b []byte, s string, guard bool) []byte {
	if !isClean(s) {
		s = string(appendClean(nil, s))
	}
	guard = guard && looksLikeFormula(s)
	if !needsQuotes(s) {
		if guard {
			b = append(b, '\'')
		}
		return append(b, s...)
	}
	b = append(b, '"')
	if guard {
		b = append(b, '\'')
	}
	for {
		quote := strings.IndexByte(s, '"')
		if quote < 0 {
			break
		}
		b = append(b, s[:quote+1]...)
		b = append(b, '"')
		s = s[quote+1:]
	}
	b = append(b, s...)
	return append(b, '"')
}

// isClean reports whether s is UTF-8 without NUL.
func isClean(s string) bool { return utf8.ValidString(s) && strings.IndexByte(s, 0) < 0 }

// appendClean appends s with each NUL, and each byte that is not UTF-8, as \xHH.
func appendClean(b []byte, s string) []byte {
	for s != "" {
		r, n := utf8.DecodeRuneInString(s)
		if r == 0 || r == utf8.RuneError && n == 1 {
			b = fmt.Appendf(b, `\x%02X`, s[0])
		} else {
			b = append(b, s[:n]...)
		}
		s = s[n:]
	}
	return b
}

func needsQuotes(s string) bool {
	for i := range len(s) {
		switch s[i] {
		case '"', ',', '\r', '\n':
			return true
		}
	}
	return false
}

// looksLikeFormula reports whether s begins, after any apostrophes, with a
// character that makes a spreadsheet read a cell as a formula, and is no number.
func looksLikeFormula(s string) bool {
	s = strings.TrimLeft(s, "'")
	if s == "" {
		return false
	}
	switch s[0] {
	case '+', '-':
		return !isNumber(s)
	case '=', '@', '\t', '\r', '\n':
		return true
	}
	return false
}

// isNumber reports whether s as a whole is a decimal number: digits, and at most
// a sign before them, decimals after a point or a comma, and an exponent.
func isNumber(s string) bool {
	s, ok := cutDigits(cutSign(s))
	if ok && s != "" && (s[0] == '.' || s[0] == ',') {
		s, ok = cutDigits(s[1:])
	}
	if ok && s != "" && (s[0] == 'e' || s[0] == 'E') {
		s, ok = cutDigits(cutSign(s[1:]))
	}
	return ok && s == ""
}

func cutSign(s string) string {
	if s != "" && (s[0] == '+' || s[0] == '-') {
		return s[1:]
	}
	return s
}

// cutDigits returns s without the digits it begins with; ok is false if it
// begins with none.
func cutDigits(s string) (rest string, ok bool) {
	rest = strings.TrimLeft(s, "0123456789")
	return rest, len(rest) < len(s)
}
