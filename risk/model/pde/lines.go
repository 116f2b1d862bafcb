package pde

import (
	"cmp"
	"math"
	"slices"
)

// Lines are options of any kinds, row i of every slice being line i; units as in
// Chain. Dividends of several lines may share memory.
type Lines struct {
	Spot, Strike, Time, Vol, Rate, Yield, Sign []float64
	American                                   []bool
	Dividends                                  [][]Dividend
	Convention                                 Convention
}

// batch is the scratch of SolveLines.
type batch struct {
	order []int // lines, those of one chain next to one another
	place []int // of a line in its chain
	chain Chain
	part  Results
}

// SolveLines prices lines as Solve does, those that may share a sweep together,
// and lines that are equal once. What comes out for a line does not depend on the
// others.
//
// Shapes: the slices of l have one length; r is resized to it.
// Invalid, special cases, accuracy: see Solve.
func (s *Solver) SolveLines(l *Lines, r *Results) {
	n := l.count()
	r.Resize(n)
	w := s.take()
	b := &w.batch
	b.order = l.sorted(b.order)
	for from, until := 0, 0; from < n; from = until {
		first := b.order[from]
		c, strike, vol := &b.chain, b.chain.Strike[:0], b.chain.Vol[:0]
		*c = l.chain(first)
		c.Strike, c.Vol = strike, vol
		b.place = b.place[:0]
		for until = from; until < n && l.compareTerms(first, b.order[until]) == 0; until++ {
			if i := b.order[until]; until == from || compareBits(l.Strike[i], l.Strike[b.order[until-1]]) != 0 {
				c.Strike, c.Vol = append(c.Strike, l.Strike[i]), append(c.Vol, l.Vol[i])
			}
			b.place = append(b.place, len(c.Strike)-1)
		}
		w.solve(c, &b.part, s.tolerance())
		for k, i := range b.order[from:until] {
			r.copyLine(i, &b.part, b.place[k])
		}
	}
	b.chain.Dividends = nil
	s.give(w)
}

// chain is line i by itself.
func (l *Lines) chain(i int) Chain {
	return Chain{Spot: l.Spot[i], Time: l.Time[i], Rate: l.Rate[i], Yield: l.Yield[i], Sign: l.Sign[i], American: l.American[i],
		Dividends: l.Dividends[i], Convention: l.Convention, Strike: l.Strike[i : i+1], Vol: l.Vol[i : i+1]}
}

// count returns how many lines there are.
func (l *Lines) count() int {
	n := len(l.Spot)
	if len(l.American) != n || len(l.Dividends) != n {
		panic("pde: slices of different lengths")
	}
	for _, x := range l.numbers() {
		if len(x) != n {
			panic("pde: slices of different lengths")
		}
	}
	return n
}

// sorted orders the lines.
func (l *Lines) sorted(order []int) []int {
	order = resize(order, len(l.Spot))
	for i := range order {
		order[i] = i
	}
	slices.SortFunc(order, l.compare)
	return order
}

// numbers are those of a line; the strike, by which lines of a chain differ, is
// the last.
func (l *Lines) numbers() [7][]float64 {
	return [7][]float64{l.Spot, l.Time, l.Rate, l.Yield, l.Sign, l.Vol, l.Strike}
}

func (l *Lines) compare(i, k int) int {
	return cmp.Or(l.compareTerms(i, k), compareBits(l.Strike[i], l.Strike[k]))
}

// compareTerms orders lines i and k by all that lines of one sweep have in common.
func (l *Lines) compareTerms(i, k int) int {
	x := l.numbers()
	for _, x := range x[:len(x)-1] {
		if c := compareBits(x[i], x[k]); c != 0 {
			return c
		}
	}
	if l.American[i] != l.American[k] {
		if l.American[i] {
			return 1
		}
		return -1
	}
	return slices.CompareFunc(l.Dividends[i], l.Dividends[k], func(a, b Dividend) int {
		return cmp.Or(compareBits(a.Time, b.Time), compareBits(a.Amount, b.Amount))
	})
}

// compareBits is an order of all numbers, NaN among them.
func compareBits(a, b float64) int { return cmp.Compare(math.Float64bits(a), math.Float64bits(b)) }

// copyLine writes line i from line k of another.
func (r *Results) copyLine(i int, from *Results, k int) {
	to, source := r.columns(), from.columns()
	for c := range to {
		(*to[c])[i] = (*source[c])[k]
	}
	r.Status[i] = from.Status[k]
}
