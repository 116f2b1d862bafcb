package reader

import (
	"encoding/binary"
	"hash/maphash"
	"math/bits"
)

// LineIDs remembers which line ids have been met. It is for one goroutine, in
// the order of the file, so that the first row with an id is the one that
// counts.
//
// An id of up to 64 bytes that ends in digits is kept exactly: what stands before the
// last 15 of them, with their count, gets a small code, and the number is a bit in a
// word of 64 neighbours. Ids numbered in sequence so take two bits or so each:
// ten million of them some 3 MB. Other ids, and those of the prefixes that come
// after the first 65,535, are kept as 128 bits of two keyed hashes: of ten
// million such ids the chance that any two are taken for one is below 1e-24.
//
// The zero value is ready to use.
type LineIDs struct {
	prefixes map[string]uint64 // prefix and digit count → code, from 1
	last     []byte            // the prefix met last, and its code: rows of a file are alike
	code     uint64

	words  wordTable
	prints printTable
}

// maxPrefixes bounds the prefixes kept: a code has 16 bits beside the 44 of the
// word's number. Files of ids without a common form do not profit from more.
const maxPrefixes = 1<<16 - 1

const maxDigits = 15

// maxPrefix bounds the ids whose prefixes are kept, in bytes.
const maxPrefix = 64

// Seen reports whether id has been met before, and remembers it. The empty id
// is never met before.
func (s *LineIDs) Seen(id []byte) bool {
	if len(id) == 0 {
		return false
	}
	digits := 0
	var number, scale uint64 = 0, 1
	if n := len(id); n >= 8 {
		if last, ok := eightDigits(binary.LittleEndian.Uint64(id[n-8:])); ok {
			number, scale, digits = last, 1e8, 8
		}
	}
	for digits < maxDigits && digits < len(id) {
		d := id[len(id)-1-digits] - '0'
		if d > 9 {
			break
		}
		number += uint64(d) * scale
		scale *= 10
		digits++
	}
	if digits > 0 && len(id) <= maxPrefix {
		if code := s.prefix(id[:len(id)-digits], digits); code != 0 {
			return s.words.add(code<<44|number>>6, 1<<(number&63))
		}
	}
	return s.prints.add(id)
}

// eightDigits returns the number that eight digits are, the first of them in the
// lowest byte. ok is false where not all are digits.
// Source: the usual addition of neighbours, in bytes, in pairs and in fours.
func eightDigits(text uint64) (number uint64, ok bool) {
	const high, zeros, sixes = 0xf0f0f0f0f0f0f0f0, 0x3030303030303030, 0x0606060606060606
	if text&high|(text+sixes)&high>>4 != zeros|zeros>>4 {
		return 0, false
	}
	x := text - zeros
	x = (x*10 + x>>8) & 0x00ff00ff00ff00ff
	x = (x*100 + x>>16) & 0x0000ffff0000ffff
	return (x*10_000 + x>>32) & 0xffffffff, true
}

// prefix returns the code of a prefix with that many digits behind it; 0 is
// that there is none left to give.
func (s *LineIDs) prefix(prefix []byte, digits int) uint64 {
	if s.code != 0 && len(s.last) == len(prefix)+1 && int(s.last[0]) == digits && string(s.last[1:]) == string(prefix) {
		return s.code
	}
	s.last = append(append(s.last[:0], byte(digits)), prefix...)
	s.code = s.prefixes[string(s.last)]
	if s.code == 0 && len(s.prefixes) < maxPrefixes {
		if s.prefixes == nil {
			s.prefixes = map[string]uint64{}
		}
		s.code = uint64(len(s.prefixes)) + 1
		s.prefixes[string(s.last)] = s.code
	}
	return s.code
}

// wordTable is a hash table with open addressing from keys other than 0 to
// words of bits.
type wordTable struct {
	words []keyedWord
	n     int
	last  int // where the key met last stands: ids in sequence share words
}

type keyedWord struct{ key, bits uint64 }

// add sets a bit in the word of the key and reports whether it was set before.
func (t *wordTable) add(key, bit uint64) bool {
	if t.last >= len(t.words) || t.words[t.last].key != key {
		if 8*t.n >= 7*len(t.words) {
			t.grow()
		}
		t.last = t.find(key)
	}
	w := &t.words[t.last]
	if w.key == 0 {
		w.key = key
		t.n++
	}
	had := w.bits&bit != 0
	w.bits |= bit
	return had
}

// find returns the place of the key, or the free place where it would stand.
func (t *wordTable) find(key uint64) int {
	i := place(key, len(t.words))
	for t.words[i].key != 0 && t.words[i].key != key {
		if i++; i == len(t.words) {
			i = 0
		}
	}
	return i
}

func (t *wordTable) grow() {
	old := t.words
	t.words = make([]keyedWord, max(64, len(old)*3/2))
	for _, w := range old {
		if w.key != 0 {
			t.words[t.find(w.key)] = w
		}
	}
}

// place spreads keys over n places. The multiplier is 2⁶⁴ over the golden
// ratio, made odd; its product's high bits depend on all bits of the key below.
func place(key uint64, n int) int {
	key *= 0x9e3779b97f4a7c15
	key ^= key >> 32
	key *= 0x9e3779b97f4a7c15
	high, _ := bits.Mul64(key, uint64(n))
	return int(high)
}

// printTable is a set of 128-bit fingerprints with open addressing; the print
// of two zeros stands for a free place.
type printTable struct {
	prints [][2]uint64
	n      int
	seeds  [2]maphash.Seed
}

// add remembers the fingerprint of id and reports whether it was there before.
func (t *printTable) add(id []byte) bool {
	if t.prints == nil {
		t.seeds = [2]maphash.Seed{maphash.MakeSeed(), maphash.MakeSeed()}
	}
	if 8*t.n >= 7*len(t.prints) {
		t.grow()
	}
	p := [2]uint64{maphash.Bytes(t.seeds[0], id), maphash.Bytes(t.seeds[1], id)}
	if p == ([2]uint64{}) {
		p[1] = 1
	}
	i := t.find(p)
	if t.prints[i] == p {
		return true
	}
	t.prints[i] = p
	t.n++
	return false
}

func (t *printTable) find(p [2]uint64) int {
	high, _ := bits.Mul64(p[0], uint64(len(t.prints)))
	i := int(high)
	for t.prints[i] != [2]uint64{} && t.prints[i] != p {
		if i++; i == len(t.prints) {
			i = 0
		}
	}
	return i
}

func (t *printTable) grow() {
	old := t.prints
	t.prints = make([][2]uint64, max(64, len(old)*3/2))
	for _, p := range old {
		if p != ([2]uint64{}) {
			t.prints[t.find(p)] = p
		}
	}
}
