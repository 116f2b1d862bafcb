package american

import "math"

// groups are the boundaries of a batch and the lines on each.
type groups struct {
	a, b, v []float64
	count   []int32
	head    []int32 // first line of a group, −1 for none
	next    []int32 // the line after, by line
	order   []int32 // of solution: groups of a block have about as many lines
	table   []int32 // by hash of (a, b, v): a group, −1 for none
}

// mostLines is how many lines share the solution of a boundary. A longer group
// becomes several, so that the other lanes of its block do not idle for long.
const mostLines = 32

// collect forms groups of the lines.
func (g *groups) collect(lines []int32, z *scaled) {
	g.a, g.b, g.v, g.count, g.head = g.a[:0], g.b[:0], g.v[:0], g.count[:0], g.head[:0]
	g.next = resize(g.next, len(z.a))
	slots := 16
	for slots < 2*len(lines) {
		slots *= 2
	}
	g.table = resize(g.table, slots)
	for i := range g.table {
		g.table[i] = -1
	}
	for i := len(lines) - 1; i >= 0; i-- { // backwards, so that heads end up first
		line := lines[i]
		a, b, v := z.a[line], z.b[line], z.v[line]
		slot := g.find(a, b, v)
		k := g.table[slot]
		if k < 0 || g.count[k] == mostLines {
			k = int32(len(g.a))
			g.table[slot] = k
			g.a, g.b, g.v = append(g.a, a), append(g.b, b), append(g.v, v)
			g.count, g.head = append(g.count, 0), append(g.head, -1)
		}
		g.count[k]++
		g.next[line], g.head[k] = g.head[k], line
	}
	g.sort()
}

// find returns the slot of a boundary: its own, or the free one it would take.
func (g *groups) find(a, b, v float64) uint64 {
	const odd = 0x9E3779B97F4A7C15
	h := math.Float64bits(a)*odd ^ math.Float64bits(b)
	h = (h^h>>29)*odd ^ math.Float64bits(v)
	h = (h ^ h>>32) * odd
	mask := uint64(len(g.table) - 1)
	for slot := h >> 20 & mask; ; slot = (slot + 1) & mask {
		if k := g.table[slot]; k < 0 || g.a[k] == a && g.b[k] == b && g.v[k] == v {
			return slot
		}
	}
}

// sort orders the groups by falling number of lines.
func (g *groups) sort() {
	var from [mostLines + 2]int32 // from[mostLines−c] becomes where the groups of c lines begin
	for _, c := range g.count {
		from[mostLines-c+1]++
	}
	for c := range mostLines + 1 {
		from[c+1] += from[c]
	}
	g.order = resize(g.order, len(g.count))
	for k, c := range g.count {
		g.order[from[mostLines-c]] = int32(k)
		from[mostLines-c]++
	}
}
