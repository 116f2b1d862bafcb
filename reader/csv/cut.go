package csv

import "bytes"

// A section is what cut found at the start of its bytes: one record, or a
// blank line with end 0.
type section struct {
	end    int // of the record, its line end not included
	next   int // where the next record starts
	lines  int // line ends passed over
	quoted bool
	fault  Fault
	open   bool // a quotation mark is not closed before the data ends
	opens  int  // line ends before that mark
}

// cut finds the record at the start of data. ok is false if data ends before
// the record does and is not all there is.
//
// Only a quotation mark at the start of a field opens a quoted field, so it is
// not enough to count quotation marks; but most lines hold none, and the end of
// such a line is the end of its record.
func cut(data []byte, delimiter byte, last bool) (s section, ok bool) {
	nl := bytes.IndexByte(data, '\n')
	line := data
	if nl >= 0 {
		line = data[:nl]
	}
	if bytes.IndexByte(line, '"') >= 0 {
		return cutQuoted(data, delimiter, last)
	}
	if nl < 0 {
		if !last {
			return s, false
		}
		return section{end: withoutCR(data, len(data)), next: len(data), lines: 1}, true
	}
	return section{end: withoutCR(data, nl), next: nl + 1, lines: 1}, true
}

// withoutCR returns end, or the place before it if a carriage return stands there.
func withoutCR(data []byte, end int) int {
	if end > 0 && data[end-1] == '\r' {
		return end - 1
	}
	return end
}

// cutQuoted is cut for a record that may hold quotation marks. A record whose
// quoting is broken ends with the line on which it breaks.
func cutQuoted(data []byte, delimiter byte, last bool) (s section, ok bool) {
	s.quoted = true
	at := 0
	for {
		if at < len(data) && data[at] == '"' {
			mark, closed := at, false
			if at, closed = closing(data, at+1); !closed {
				s.open, s.opens = true, bytes.Count(data[:mark], []byte{'\n'})
				return s.to(data, len(data)), last
			}
			if at == len(data) && !last || at == len(data)-1 && data[at] == '\r' && !last {
				return s, false
			}
			switch {
			case at == len(data), data[at] == '\n':
				return s.to(data, at), true
			case data[at] == '\r' && (at+1 == len(data) || data[at+1] == '\n'):
				return s.to(data, at+1), true
			case data[at] == delimiter:
				at++
				continue
			}
			s.fault = TextAfterQuote
		} else {
			for at < len(data) && data[at] != delimiter && data[at] != '\n' && data[at] != '"' {
				at++
			}
			if at < len(data) && data[at] == delimiter {
				at++
				continue
			}
			if at < len(data) && data[at] == '"' {
				s.fault = StrayQuote
			}
		}
		nl := bytes.IndexByte(data[at:], '\n')
		if nl >= 0 {
			return s.to(data, at+nl), true
		}
		return s.to(data, len(data)), last
	}
}

// to ends the section at data[end], a line end or the end of the file.
func (s section) to(data []byte, end int) section {
	s.end, s.next = withoutCR(data, end), min(end+1, len(data))
	s.lines = bytes.Count(data[:end], []byte{'\n'}) + 1
	return s
}

// closing returns the place behind the quotation mark that closes the field
// whose text starts at data[at].
func closing(data []byte, at int) (after int, closed bool) {
	for {
		q := bytes.IndexByte(data[at:], '"')
		if q < 0 {
			return len(data), false
		}
		at += q + 1
		if at == len(data) || data[at] != '"' {
			return at, true
		}
		at++
	}
}
