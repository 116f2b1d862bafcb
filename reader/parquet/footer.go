package parquet

// wellFormed reports whether b begins with a struct of Thrift's compact
// protocol whose lists and texts fit into b. The library asks for the memory
// of a list before it has seen its elements, so a few bytes of a hostile file
// could claim all there is.
//
// Source of the encoding: "Thrift compact protocol encoding", in the
// specification directory of Apache Thrift.
func wellFormed(b []byte) bool {
	s := skipper{b: b}
	s.structure(0)
	return !s.bad
}

type skipper struct {
	b   []byte
	bad bool
}

const maxDepth = 32

// Types of the compact protocol.
const (
	compactTrue = 1 + iota
	compactFalse
	compactByte
	compactI16
	compactI32
	compactI64
	compactDouble
	compactBinary
	compactList
	compactSet
	compactMap
	compactStruct
)

func (s *skipper) byte() byte {
	if len(s.b) == 0 {
		s.bad = true
		return 0
	}
	c := s.b[0]
	s.b = s.b[1:]
	return c
}

func (s *skipper) varint() uint64 {
	var x uint64
	for shift := 0; shift < 70 && !s.bad; shift += 7 {
		c := s.byte()
		x |= uint64(c&0x7f) << shift
		if c < 0x80 {
			return x
		}
	}
	s.bad = true
	return 0
}

func (s *skipper) bytes(n uint64) {
	if n > uint64(len(s.b)) {
		s.bad = true
		return
	}
	s.b = s.b[n:]
}

// structure skips the fields of a struct and its end.
func (s *skipper) structure(depth int) {
	if depth > maxDepth {
		s.bad = true
	}
	for !s.bad {
		head := s.byte()
		if head == 0 {
			return
		}
		if head>>4 == 0 {
			s.varint() // the field's number, where it does not follow the last one
		}
		s.value(head&0x0f, depth, true)
	}
}

// value skips one value. A boolean field's value is in its type; that of a
// list is a byte.
func (s *skipper) value(kind byte, depth int, field bool) {
	switch kind {
	case compactTrue, compactFalse:
		if !field {
			s.byte()
		}
	case compactByte:
		s.byte()
	case compactI16, compactI32, compactI64:
		s.varint()
	case compactDouble:
		s.bytes(8)
	case compactBinary:
		s.bytes(s.varint())
	case compactList, compactSet:
		head := s.byte()
		n := uint64(head >> 4)
		if n == 15 {
			n = s.varint()
		}
		if n > uint64(len(s.b)) { // each element takes a byte at least
			s.bad = true
		}
		for ; n > 0 && !s.bad; n-- {
			s.element(head&0x0f, depth)
		}
	case compactMap:
		n := s.varint()
		if n > uint64(len(s.b)) {
			s.bad = true
		}
		var kinds byte
		if n > 0 {
			kinds = s.byte()
		}
		for ; n > 0 && !s.bad; n-- {
			s.element(kinds>>4, depth)
			s.element(kinds&0x0f, depth)
		}
	case compactStruct:
		s.structure(depth + 1)
	default:
		s.bad = true
	}
}

func (s *skipper) element(kind byte, depth int) {
	if depth > maxDepth {
		s.bad = true
		return
	}
	s.value(kind, depth+1, false)
}
