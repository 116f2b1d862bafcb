package parquet

import (
	"encoding/binary"
	"math/bits"
)

// presence says which rows of a page have a value. While all rows have one, or
// none has, it is no more than their number.
type presence struct {
	rows, nulls int

	// Bit i%64 of word i/64 is 1 where row i has a value; those of rows to come
	// are 0. They stand here only once some rows have a value and others not.
	words [pageRows/64 + 1]uint64
}

func (p *presence) reset() { p.rows, p.nulls = 0, 0 }

func (p *presence) mixed() bool { return p.nulls != 0 && p.nulls != p.rows }

// addValues appends n rows that have a value.
func (p *presence) addValues(n int) {
	if p.nulls == 0 {
		p.rows += n
		return
	}
	for ; n > 0; n -= 64 {
		p.add(^uint64(0)>>(64-min(n, 64)), min(n, 64))
	}
}

// addNulls appends n rows that have none.
func (p *presence) addNulls(n int) {
	if p.nulls == p.rows {
		p.rows += n
		p.nulls += n
		return
	}
	for ; n > 0; n -= 64 {
		p.add(0, min(n, 64))
	}
}

// add appends n rows, of 1 to 64; bit i of the mask, of which those from n on are
// 0, is 1 where row i of them has a value.
func (p *presence) add(mask uint64, n int) {
	nulls := n - bits.OnesCount64(mask)
	if !p.mixed() {
		switch {
		case nulls == 0 && p.nulls == 0:
			p.rows += n
			return
		case nulls == n && p.nulls == p.rows:
			p.rows += n
			p.nulls += n
			return
		}
		p.spell()
	}
	word, bit := p.rows/64, p.rows%64
	if bit == 0 {
		p.words[word] = mask
	} else {
		p.words[word] |= mask << bit
		p.words[word+1] = mask >> (64 - bit)
	}
	p.rows += n
	p.nulls += nulls
}

// spell writes out words for rows of which all have a value, or none.
func (p *presence) spell() {
	var fill uint64
	if p.nulls == 0 {
		fill = ^uint64(0)
	}
	for i := range (p.rows + 63) / 64 {
		p.words[i] = fill
	}
	if rest := p.rows % 64; rest > 0 {
		p.words[p.rows/64] &= 1<<rest - 1
	}
}

// appendLevels appends definition levels, with their length before them, as a
// data page of an optional column holds them.
func (p *presence) appendLevels(dst []byte) []byte {
	at := len(dst)
	dst = append(dst, 0, 0, 0, 0)
	switch p.nulls {
	case 0:
		dst = appendRun(dst, p.rows, 1, 1)
	case p.rows:
		dst = appendRun(dst, p.rows, 0, 1)
	default:
		dst = p.appendHybrid(dst)
	}
	binary.LittleEndian.PutUint32(dst[at:], uint32(len(dst)-at-4))
	return dst
}

// appendHybrid is the function of that name for the words.
func (p *presence) appendHybrid(dst []byte) []byte {
	p.words[(p.rows+63)/64] = 0
	literal, i := 0, 0
	for i < p.rows {
		level := p.words[i/64] >> (i % 64) & 1
		run := p.run(i, level)
		fill := -(i - literal) & 7
		if run-fill >= leastRun {
			dst = p.appendPacked(dst, literal, i+fill)
			dst = appendRun(dst, run-fill, uint32(level), 1)
			literal = i + run
		}
		i += run
	}
	return p.appendPacked(dst, literal, p.rows)
}

// run is how many rows from i on have the level that row i has.
func (p *presence) run(i int, level uint64) int {
	at := i
	for at < p.rows {
		if other := (p.words[at/64] ^ -level) >> (at % 64); other != 0 {
			at += bits.TrailingZeros64(other)
			break
		}
		at += 64 - at%64
	}
	return min(at, p.rows) - i
}

// appendPacked appends rows [from, to) as one bit-packed run.
func (p *presence) appendPacked(dst []byte, from, to int) []byte {
	if from == to {
		return dst
	}
	groups := (to - from + 7) / 8
	dst = binary.AppendUvarint(dst, uint64(groups)<<1|1)
	end := len(dst) + groups
	for at := from; at < to; at += 64 {
		word := p.words[at/64] >> (at % 64)
		if bit := at % 64; bit > 0 {
			word |= p.words[at/64+1] << (64 - bit)
		}
		dst = binary.LittleEndian.AppendUint64(dst, word)
	}
	return dst[:end]
}
