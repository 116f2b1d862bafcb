package vec_test

import (
	"math/rand/v2"
	"testing"

	"nightbook/risk/vec"
)

// quoteColumns are the arguments of ImpliedVol.
type quoteColumns struct{ forward, strike, time, price, sign []float64 }

// randomQuotes draws quotes from the ordinary to the absurd: at, near and far from the
// strike, prices of every size up to the bound and beyond, and lines that make no sense.
func randomQuotes(rng *rand.Rand, n int) quoteColumns {
	col := func() []float64 { return make([]float64, n) }
	q := quoteColumns{col(), col(), col(), col(), col()}
	for i := range n {
		f, w := spread(rng, 1, 1e4), float64(1-2*rng.IntN(2))
		k, t := f*spread(rng, 0.5, 2), spread(rng, 0.01, 5)
		switch rng.IntN(6) {
		case 0:
			k = f
		case 1:
			k = f * spread(rng, 1e-8, 1e8)
		case 2:
			k = f * spread(rng, 0.999, 1.001)
		}
		bound := min(f, k)
		p := float64(bound * spread(rng, 1e-12, 1))
		switch rng.IntN(10) {
		case 0:
			p = float64(bound * spread(rng, 1e-200, 1e-12))
		case 1:
			p = float64(bound * float64(1-spread(rng, 1e-15, 0.5)))
		case 2:
			p = bound * spread(rng, 0.9, 1.1)
		}
		if rng.IntN(2) == 0 { // the price of the other side of the strike
			p += max(float64(w*(f-k)), 0)
		}
		q.forward[i], q.strike[i], q.time[i], q.price[i], q.sign[i] = f, k, t, p, w
		if rng.IntN(50) == 0 {
			c := [][]float64{q.forward, q.strike, q.time, q.price, q.sign}[rng.IntN(5)]
			c[i] = hostileValues[rng.IntN(len(hostileValues))]
		}
	}
	return q
}

func (q quoteColumns) invert(tier string, vol []float64, outcome []vec.Implied) {
	defer vec.SetTier(tier)()
	vec.ImpliedVol(vol, outcome, q.forward, q.strike, q.time, q.price, q.sign)
}

// The same bits in every tier, and the same bits as the machine had on which the hash
// was written.
func TestBitsOfImpliedVol(t *testing.T) {
	const n = 300_000
	const wantHash = 0x3df5a132a2bc796 // written by the scalar form on amd64; to be changed only together with its arithmetic
	q := randomQuotes(rand.New(rand.NewPCG(61, 62)), n)
	vol, want := make([]float64, n), make([]float64, n)
	outcome, wantOutcome := make([]vec.Implied, n), make([]vec.Implied, n)
	q.invert("scalar", want, wantOutcome)
	var seen [4]int
	for _, o := range wantOutcome {
		seen[o]++
	}
	if seen[vec.ImpliedOK] < n/2 || min(seen[vec.ImpliedBelow], seen[vec.ImpliedAbove], seen[vec.ImpliedNaN]) < 1000 {
		t.Errorf("outcomes %v", seen)
	}
	if h := hash([]*[]float64{&want}); h != wantHash {
		t.Errorf("hash of the scalar results %#x, want %#x", h, uint64(wantHash))
	}
	for _, tier := range vec.Tiers() {
		scribble([]*[]float64{&vol})
		q.invert(tier, vol, outcome)
		for i := range vol {
			if !sameBits(vol[i], want[i]) || outcome[i] != wantOutcome[i] {
				t.Fatalf("tier %s: F %x K %x T %x price %x sign %v: vol %x, outcome %d; the scalar form gives %x, %d",
					tier, q.forward[i], q.strike[i], q.time[i], q.price[i], q.sign[i], vol[i], outcome[i], want[i], wantOutcome[i])
			}
		}
	}
}

// Every length, every misalignment, with lines between that no vector code covers:
// the right values, and nothing else written.
func TestLengthsAndGuardsOfImpliedVol(t *testing.T) {
	const most = 400
	q := randomQuotes(rand.New(rand.NewPCG(63, 64)), most)
	want, wantOutcome := make([]float64, most), make([]vec.Implied, most)
	q.invert("scalar", want, wantOutcome)
	for _, tier := range vec.Tiers() {
		for _, n := range lengths() {
			vol, intact := guarded(n, n%widest)
			room := make([]vec.Implied, n+1)
			room[n] = 99
			part := quoteColumns{q.forward[:n], q.strike[:n], q.time[:n], q.price[:n], q.sign[:n]}
			part.invert(tier, vol, room[:n])
			for i := range vol {
				if !sameBits(vol[i], want[i]) || room[i] != wantOutcome[i] {
					t.Fatalf("tier %s, length %d, line %d: vol %x, outcome %d, want %x, %d", tier, n, i, vol[i], room[i], want[i], wantOutcome[i])
				}
			}
			if !intact() || room[n] != 99 {
				t.Fatalf("tier %s, length %d: wrote outside its slice", tier, n)
			}
		}
	}
}
