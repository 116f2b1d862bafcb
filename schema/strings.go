package schema

import "unsafe"

// Strings is a column of texts as spans of one byte slice: a million short
// texts are three allocations, and a CSV field need not be copied at all.
type Strings struct {
	Data       []byte
	Start, End []uint32
}

// Len returns the number of rows.
func (s *Strings) Len() int { return len(s.Start) }

// Bytes returns row i without copying.
func (s *Strings) Bytes(i int) []byte { return s.Data[s.Start[i]:s.End[i]:s.End[i]] }

// At returns row i without copying: it is valid until the next Reset or Append
// to a shared Data; strings.Clone it to keep it longer.
func (s *Strings) At(i int) string {
	b := s.Data[s.Start[i]:s.End[i]]
	return unsafe.String(unsafe.SliceData(b), len(b))
}

// Append adds a row, copying its bytes to the end of Data.
func (s *Strings) Append(b []byte) {
	at := uint32(len(s.Data))
	s.Data = append(s.Data, b...)
	s.Start = append(s.Start, at)
	s.End = append(s.End, uint32(len(s.Data)))
}

// AppendString adds a row, copying its bytes to the end of Data.
func (s *Strings) AppendString(t string) {
	at := uint32(len(s.Data))
	s.Data = append(s.Data, t...)
	s.Start = append(s.Start, at)
	s.End = append(s.End, uint32(len(s.Data)))
}

// AppendSpan adds a row that is already part of Data.
func (s *Strings) AppendSpan(start, end uint32) {
	s.Start = append(s.Start, start)
	s.End = append(s.End, end)
}

// Reset empties the column and keeps its memory.
func (s *Strings) Reset() {
	s.Data, s.Start, s.End = s.Data[:0], s.Start[:0], s.End[:0]
}
