package csv

import (
	"math"

	"nightbook/schema"
	"nightbook/writer/csv/shortest"
)

const (
	notedNumbers = 256 // of how many numbers of a column the texts are kept
	trialRows    = 512 // by so many rows it is decided whether to keep any,
	trialFrames  = 16  // once in so many frames
)

// numberNotes are the texts of numbers that a part has met in a column, each
// where its bits hash to. They are kept where numbers repeat from row to row: a
// spot, a rate, a time.
type numberNotes struct {
	on    bool
	bits  *[notedNumbers]uint64
	texts *[notedNumbers]slot
}

func hashed(bits uint64) uint64 { return bits * 0x9e3779b97f4a7c15 >> 56 }

// try decides which columns are worth notes: those where half of the numbers that
// are no whole ones, which take little time, would be found.
func (p *part) try(f *schema.Frame, from, to int) {
	to = min(to, from+trialRows)
	for c := range p.columns {
		v := &f.Cols[c]
		if v.Kind != schema.KindFloats {
			continue
		}
		var seen [notedNumbers]uint64
		rest, found := 0, 0
		for _, x := range v.Floats[from:to] {
			if x-x != 0 || x == math.Trunc(x) {
				continue
			}
			bits := math.Float64bits(x)
			rest++
			if at := hashed(bits); seen[at] == bits {
				found++
			} else {
				seen[at] = bits
			}
		}
		n := &p.notes[c].numbers
		if n.on = found > rest/2; n.on && n.bits == nil {
			n.bits, n.texts = new([notedNumbers]uint64), new([notedNumbers]slot)
			n.texts[0].end(copy(n.texts[0][:], "0")) // the entries that are not filled are those of 0
		}
	}
}

// floats formats a column of numbers; see column.
func (p *part) floats(c int, list []float64) (bad int) {
	required, notes := p.columns[c].Required, &p.notes[c].numbers
	cells, columns, at := p.cells, len(p.columns), c
	for i, x := range list {
		s := &cells[at]
		at += columns
		if x-x != 0 { // not finite
			if x == x || required {
				return i
			}
			s.null()
			continue
		}
		if !notes.on {
			s.end(shortest.Float((*[shortest.Size]byte)(s), x))
			continue
		}
		bits := math.Float64bits(x)
		h := hashed(bits)
		if notes.bits[h] == bits {
			s.set(&notes.texts[h])
			continue
		}
		s.end(shortest.Float((*[shortest.Size]byte)(s), x))
		notes.bits[h] = bits
		notes.texts[h].set(s)
	}
	return -1
}
