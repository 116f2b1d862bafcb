package american

import (
	"math"
	"math/rand/v2"
	"testing"
)

// exact returns a number of few digits from lo to hi thousandths: inputs whose own
// bits cannot depend on the machine.
func exact(rng *rand.Rand, lo, hi int) float64 { return float64(lo+rng.IntN(hi-lo)) / 1000 }

func bitLines() []line {
	rng := rand.New(rand.NewPCG(31, 32))
	all := make([]line, 3000)
	for i := range all {
		o := line{s: 100 * exact(rng, 500, 2000), k: 100, t: exact(rng, 1, 5000), v: exact(rng, 10, 900), r: exact(rng, -20, 120), q: exact(rng, -30, 120), w: float64(1 - 2*rng.IntN(2))}
		switch rng.IntN(12) {
		case 0:
			o.q = o.r
		case 1:
			o.r = 0
		case 2:
			o.q = 0
		case 3:
			o.t = 0
		case 4:
			o.v = 0
		case 5:
			o.s = math.NaN()
		case 6, 7, 8: // on a boundary with others
			o.t, o.v, o.r, o.q = 1, 0.25, 0.0625, 0.03125
		}
		all[i] = o
	}
	return all
}

func hash(r *Results) uint64 {
	h := uint64(14695981039346656037)
	for i, s := range r.Status {
		for _, x := range row(r, i) {
			u := math.Float64bits(x)
			if x != x {
				u = math.Float64bits(math.NaN())
			}
			h = (h ^ u) * 1099511628211
			h ^= h >> 32
		}
		h = (h ^ uint64(s)) * 1099511628211
	}
	return h
}

// The results have these bits in every tier and on every machine; to be changed
// only together with the arithmetic.
func TestBits(t *testing.T) {
	all := bitLines()
	for _, c := range []struct {
		setting Setting
		lines   int
		want    uint64
	}{{Fast, 3000, 0xc0bb038da4ac74b}, {Default, 3000, 0x7e7126405e83058e}, {Exact, 150, 0xfc0535fc439db053}} {
		var first *Results
		for _, width := range widths() {
			s := NewSolver(c.setting)
			s.width = width
			r := new(Results)
			r.Resize(c.lines)
			s.Solve(r, linesOf(all[:c.lines]...))
			if first == nil {
				first = r
			}
			if h := hash(r); h != c.want {
				t.Errorf("setting %d, %d lanes: hash %#x, want %#x", c.setting, width, h, c.want)
			}
			for i := range r.Status {
				a, b := row(r, i), row(first, i)
				for k := range a {
					if math.Float64bits(a[k]) != math.Float64bits(b[k]) && (a[k] == a[k] || b[k] == b[k]) {
						t.Fatalf("setting %d, %d lanes: %s of %+v is %v, with one lane %v", c.setting, width, names[k], all[i], a[k], b[k])
					}
				}
			}
		}
	}
}

// The results of a line depend on nothing but the line: not on its neighbours, nor
// on what the solver did before.
func TestLinesAreIndependent(t *testing.T) {
	all := bitLines()[:600]
	s := NewSolver(Fast)
	whole, shuffled, alone := new(Results), new(Results), new(Results)
	whole.Resize(len(all))
	s.Solve(whole, linesOf(all...))
	rng := rand.New(rand.NewPCG(33, 34))
	order := rng.Perm(len(all))
	mixed := make([]line, len(all))
	for i, k := range order {
		mixed[i] = all[k]
	}
	shuffled.Resize(len(all))
	s.Solve(shuffled, linesOf(mixed...))
	alone.Resize(1)
	for i, k := range order {
		s.Solve(alone, linesOf(all[k]))
		want := row(whole, k)
		for c, got := range row(shuffled, i) {
			single := row(alone, 0)[c]
			same := func(x, y float64) bool { return math.Float64bits(x) == math.Float64bits(y) || x != x && y != y }
			if !same(got, want[c]) || !same(single, want[c]) {
				t.Fatalf("%s of %+v: %v in order, %v shuffled, %v alone", names[c], all[k], want[c], got, single)
			}
		}
	}
}
