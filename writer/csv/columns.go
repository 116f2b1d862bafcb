package csv

import (
	"nightbook/schema"
	"nightbook/writer/csv/shortest"
)

func (p *part) ints(c int, list []int64) (bad int) {
	for i, n := range list {
		s := &p.cells[i*len(p.columns)+c]
		if n != schema.NoInt {
			s.end(shortest.Int((*[shortest.Size]byte)(s), n))
		} else if s.null(); p.columns[c].Required {
			return i
		}
	}
	return -1
}

func (p *part) dates(c int, list []schema.Date) (bad int) {
	for i, d := range list {
		s := &p.cells[i*len(p.columns)+c]
		if d != schema.NoDate {
			s.end(putDate(s, d))
		} else if s.null(); p.columns[c].Required {
			return i
		}
	}
	return -1
}

func (p *part) bools(c int, list []bool) (bad int) {
	var texts [2]slot
	texts[0].end(copy(texts[0][:], "false"))
	texts[1].end(copy(texts[1][:], "true"))
	for i, x := range list {
		s := &p.cells[i*len(p.columns)+c]
		if x {
			s.set(&texts[1])
		} else {
			s.set(&texts[0])
		}
	}
	return -1
}

// text makes s the text t, "" a null. guard is that of appendText.
func (p *part) text(s *slot, t string, guard bool) {
	if t == "" {
		s.null()
		return
	}
	from := len(p.long)
	p.long = appendText(p.long, t, guard)
	if n := copy(s[:slotText], p.long[from:]); from+n == len(p.long) {
		p.long = p.long[:from]
		s.end(n)
		return
	}
	p.long = append(p.long, ',')
	s.setLong(from, len(p.long))
}
