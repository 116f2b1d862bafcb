package aggregate

import (
	"math"

	"nightbook/schema"
)

// row is the exact sums of eight columns over the same lines: a quantity and the
// position measures.
//
// Most numbers of a desk lie within a few powers of ten of one another. Each column so has
// a front, one line of the cache wide, which takes the numbers from 2⁻¹²⁷ to 2⁹⁷
// as a Sum does; the others, and from time to time what is in the fronts, go to
// Sums. The result is theirs.
type row struct {
	front [rowColumns][frontChunks]int64
	used  int              // additions since the fronts were empty, or more
	full  *[rowColumns]Sum // nil until it is needed
}

const (
	rowColumns  = 1 + int(schema.NumMeasures)
	frontChunks = 8
	frontFrom   = 28 // the chunk of a Sum where the fronts begin
)

// reserve makes room for one addition to each column, which may be made later:
// after at most blockRows others were reserved.
func (r *row) reserve() {
	if r.used++; r.used > headroom {
		r.empty()
		r.used = blockRows // those reserved, and not made yet
	}
}

// blockRows is how many lines are added together, column by column.
const blockRows = headroom / 2

// behind returns the Sums behind the fronts.
func (r *row) behind() *[rowColumns]Sum {
	if r.full == nil {
		r.full = new([rowColumns]Sum)
	}
	return r.full
}

// empty moves what is in the fronts to the Sums.
func (r *row) empty() {
	full := r.behind()
	for c := range r.front {
		full[c].addFront(&r.front[c])
	}
	clear(r.front[:])
	r.used = 0
}

// beyond adds a number that the fronts do not take.
func (r *row) beyond(c int, x float64) {
	if x != 0 { // NaN included
		r.behind()[c].Add(x)
	}
}

// merge adds the sums of t.
func (r *row) merge(t *row) {
	if r.used += t.used; r.used > headroom {
		r.used -= t.used
		r.empty()
		r.used = t.used
	}
	for c := range r.front {
		for k, v := range t.front[c] {
			r.front[c][k] += v
		}
	}
	if t.full != nil {
		full := r.behind()
		for c := range full {
			full[c].Merge(&t.full[c])
		}
	}
}

// round returns the sum of a column, rounded once.
func (r *row) round(c int) float64 {
	var s Sum
	if r.full != nil {
		s = r.full[c]
	}
	s.addFront(&r.front[c])
	return s.Round()
}

// addFront adds what a front holds.
func (s *Sum) addFront(f *[frontChunks]int64) {
	if s.left == 0 {
		s.carry()
	}
	s.left-- // below 2^32 to each chunk
	var over int64
	for k, v := range f {
		v += over
		s.chunk[frontFrom+k] += v & (1<<chunkBits - 1)
		over = v >> chunkBits
	}
	s.chunk[frontFrom+frontChunks] += over
}

// split returns where x goes in a front, and the two addends of chunk at and the
// next; in is false for the numbers that no front takes.
func split(x float64) (at uint64, low, high int64, in bool) {
	u := math.Float64bits(x)
	at = u<<1>>58 - frontFrom // the exponent, by chunks
	sign := int64(u) >> 63
	m := (int64(u&(1<<52-1)|1<<52) ^ sign) - sign
	shift := u >> 52 & (chunkBits - 1)
	low = m << (shift & 63) & (1<<chunkBits - 1)
	high = m >> ((chunkBits - shift) & 63) // floor
	return at, low, high, at < frontChunks-1
}

// addOnce adds a column of lines, xs[i] to rows[i], for which room was reserved.
func addOnce(c int, rows []*row, xs []float64) {
	xs = xs[:len(rows)]
	for i, r := range rows {
		at, low, high, in := split(xs[i])
		if !in {
			r.beyond(c, xs[i])
			continue
		}
		f := &r.front[c]
		f[at%frontChunks] += low
		f[(at+1)%frontChunks] += high
	}
}

// addTwice adds a column of lines to two rows each.
func addTwice(c int, rows, others []*row, xs []float64) {
	xs, others = xs[:len(rows)], others[:len(rows)]
	for i, r := range rows {
		at, low, high, in := split(xs[i])
		if !in {
			r.beyond(c, xs[i])
			others[i].beyond(c, xs[i])
			continue
		}
		f, g := &r.front[c], &others[i].front[c]
		f[at%frontChunks] += low
		f[(at+1)%frontChunks] += high
		g[at%frontChunks] += low
		g[(at+1)%frontChunks] += high
	}
}
