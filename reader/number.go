package reader

import (
	"math"
	"strconv"
	"unsafe"
)

// powersOfTen are those that a double holds exactly.
var powersOfTen = [...]float64{
	1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11,
	1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22,
}

// parseNumber reads a decimal number with a point: an optional sign, digits
// with at most one point among or around them, an optional exponent. Words
// (inf, nan), hexadecimal, underscores, spaces and thousands separators are
// refused, and so are numbers too large for a double. The result is the double
// nearest to the text.
func parseNumber(text []byte) (x float64, ok bool) {
	at, negative := 0, false
	if at < len(text) && (text[at] == '-' || text[at] == '+') {
		negative = text[at] == '-'
		at++
	}
	// The digits as an integer, as long as they fit, and the power of ten they
	// are to be scaled by.
	var digits uint64
	kept, seen, exponent, point := 0, 0, 0, false
	for ; at < len(text); at++ {
		c := text[at]
		if c == '.' && !point {
			point = true
			continue
		}
		if c < '0' || c > '9' {
			break
		}
		seen++
		if kept > 0 || c != '0' {
			kept++
		}
		if kept <= 19 {
			digits = digits*10 + uint64(c-'0')
		}
		if point {
			exponent--
		}
	}
	if seen == 0 {
		return 0, false
	}
	if at < len(text) {
		e, ok := parseExponent(text[at:])
		if !ok {
			return 0, false
		}
		exponent += e
	}
	// An integer below 2⁵³ and a power of ten up to 10²² are exact, so their
	// one product or quotient is the nearest double.
	if kept <= 19 && digits <= 1<<53 && -22 <= exponent && exponent <= 22 {
		x = float64(digits)
		if exponent < 0 {
			x /= powersOfTen[-exponent]
		} else {
			x *= powersOfTen[exponent]
		}
		if negative {
			x = -x
		}
		return x, true
	}
	// Its form is known to be good: all that can fail is the size.
	x, err := strconv.ParseFloat(unsafe.String(unsafe.SliceData(text), len(text)), 64)
	return x, err == nil
}

// parseExponent reads the e and what follows. Exponents beyond every double
// are cut to one that still is.
func parseExponent(text []byte) (e int, ok bool) {
	if text[0] != 'e' && text[0] != 'E' {
		return 0, false
	}
	text = text[1:]
	negative := false
	if len(text) > 0 && (text[0] == '-' || text[0] == '+') {
		negative = text[0] == '-'
		text = text[1:]
	}
	if len(text) == 0 {
		return 0, false
	}
	for _, c := range text {
		if c < '0' || c > '9' {
			return 0, false
		}
		if e < math.MaxInt16 {
			e = e*10 + int(c-'0')
		}
	}
	if negative {
		e = -e
	}
	return e, true
}

// parseCommaNumber reads a number with a decimal comma. Points may part its
// thousands; then they must part all of them: 1.234.567,8. scratch is memory
// for the number in the other form.
func parseCommaNumber(text []byte, scratch *[]byte) (x float64, ok bool) {
	b := (*scratch)[:0]
	digits, group := 0, -1 // digits since the start or the last point; -1: no point yet
	for at, c := range text {
		switch {
		case '0' <= c && c <= '9':
			digits++
			b = append(b, c)
		case c == '.':
			if group < 0 && (digits < 1 || digits > 3) || group >= 0 && digits != 3 {
				return 0, false
			}
			group, digits = 0, 0
		case c == ',', c == 'e', c == 'E':
			if group >= 0 && digits != 3 {
				return 0, false
			}
			if c == ',' {
				b = append(b, '.')
				at++
			}
			for _, c := range text[at:] { // no point parts what follows
				if c == '.' || c == ',' {
					return 0, false
				}
			}
			b = append(b, text[at:]...)
			*scratch = b
			return parseNumber(b)
		default:
			b = append(b, c)
		}
	}
	*scratch = b
	if group >= 0 && digits != 3 {
		return 0, false
	}
	return parseNumber(b)
}
