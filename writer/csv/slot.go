package csv

import (
	"encoding/binary"

	"nightbook/writer/csv/shortest"
)

// slot holds the text of a cell, and the comma after it. All of it is copied,
// whatever the length: that is quicker than to copy so many bytes.
type slot [shortest.Size]byte

const (
	slotText = len(slot{}) - 2 // bytes of text that fit a slot, with the comma
	sizeAt   = len(slot{}) - 1 // where the number of bytes stands, the comma's included
	longText = 0xff            // in its place where the text does not fit
	empty    = 1               // that of a null
)

// end puts the comma behind a text of n bytes.
func (s *slot) end(n int) {
	s[n%len(slot{})] = ','
	s[sizeAt] = byte(n + 1)
}

// set makes s the slot t: of two of them the compiler makes a call.
func (s *slot) set(t *slot) {
	*(*[16]byte)(s[:16]) = *(*[16]byte)(t[:16])
	*(*[16]byte)(s[16:]) = *(*[16]byte)(t[16:])
}

func (s *slot) null() { s[0], s[sizeAt] = ',', empty }

func (s *slot) isNull() bool { return s[sizeAt] == empty }
func (s *slot) isLong() bool { return s[sizeAt] == longText }

// setLong notes that the text is long[from:to], with the comma.
func (s *slot) setLong(from, to int) {
	s[sizeAt] = longText
	binary.LittleEndian.PutUint64(s[0:], uint64(from))
	binary.LittleEndian.PutUint64(s[8:], uint64(to))
}

func (s *slot) long() (from, to int) {
	return int(binary.LittleEndian.Uint64(s[0:])), int(binary.LittleEndian.Uint64(s[8:]))
}
