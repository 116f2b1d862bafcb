package vec_test

import (
	"math"
	"math/rand/v2"
	"sync"
	"testing"

	"nightbook/risk/vec"
)

const (
	widest = 8           // lanes of the widest vector
	guard  = -987654.125 // fills what must not be touched
)

// guarded returns a slice of n elements that starts off elements after a 64-byte
// boundary, and a function that reports whether its surroundings are intact.
func guarded(n, off int) (s []float64, intact func() bool) {
	room := make([]float64, n+off+4*widest)
	for i := range room {
		room[i] = guard
	}
	lo := 2*widest + off
	return room[lo : lo+n : lo+n], func() bool {
		for i, x := range room {
			if (i < lo || i >= lo+n) && x != guard {
				return false
			}
		}
		return true
	}
}

// lengths are 0 to three vectors and a bit, and those around the ends of a block.
func lengths() []int {
	var l []int
	for n := range 3*widest + 2 {
		l = append(l, n)
	}
	for _, block := range []int{128, 256} {
		for d := -widest - 1; d <= widest+1; d++ {
			l = append(l, block+d)
		}
	}
	return l
}

// Every length, every misalignment: the right values, and nothing else written.
func TestLengthsAndGuardsOfBSM(t *testing.T) {
	const most = 256 + 2*widest
	all := newBatch(most)
	rng := rand.New(rand.NewPCG(41, 1))
	for i := range most {
		l := ordinary(rng)
		if i%37 == 5 {
			l = hostile(rng) // so that some vectors are mended lane by lane
		}
		l.put(all, i)
	}
	restore := vec.SetTier("scalar")
	all.All()
	restore()
	for _, tier := range vec.Tiers() {
		t.Run(tier, func(t *testing.T) {
			defer vec.SetTier(tier)()
			for _, n := range lengths() {
				for _, run := range []struct {
					name string
					do   func(b *vec.BSM)
					outs int
				}{{"All", (*vec.BSM).All, 11}, {"Core", (*vec.BSM).Core, 6}, {"Prices", (*vec.BSM).Prices, 1}} {
					off := (n + run.outs) % widest
					b := new(vec.BSM)
					var checks []func() bool
					for j, p := range inputs(b) {
						s, ok := guarded(n, (off+j)%widest)
						copy(s, *inputs(all)[j])
						*p, checks = s, append(checks, ok)
					}
					for j, p := range outputs(b) {
						s, ok := guarded(n, (off+3*j)%widest)
						*p, checks = s, append(checks, ok)
					}
					scribble(outputs(b))
					run.do(b)
					for j, ok := range checks {
						if !ok() {
							t.Fatalf("%s of %d lines wrote outside slice %d", run.name, n, j)
						}
					}
					for j, p := range inputs(b) {
						for i, x := range *p {
							if !sameBits(x, (*inputs(all)[j])[i]) {
								t.Fatalf("%s of %d lines changed input %d of line %d", run.name, n, j, i)
							}
						}
					}
					for j, p := range outputs(b) {
						for i, x := range *p {
							want := (*outputs(all)[j])[i]
							if j >= run.outs {
								want = -12345 // as scribble left it
							}
							if !sameBits(x, want) {
								t.Fatalf("%s of %d lines: %s of line %d is %v, want %v", run.name, n, outputNames[j], i, x, want)
							}
						}
					}
				}
			}
		})
	}
}

var slicesOfOne = []struct {
	name  string
	slice func(dst, x []float64)
	one   func(x float64) float64
}{
	{"Exp", vec.Exp, vec.Exp1},
	{"Log", vec.Log, vec.Log1},
	{"LogRatio", func(dst, x []float64) { vec.LogRatio(dst, x, x) }, func(x float64) float64 { return vec.LogRatio1(x, x) }},
	{"NormPDF", vec.NormPDF, vec.NormPDF1},
	{"NormCDF", vec.NormCDF, vec.NormCDF1},
}

// As above for the slice functions, into another slice and in place.
func TestLengthsAndGuardsOfSlices(t *testing.T) {
	rng := rand.New(rand.NewPCG(42, 1))
	for _, tier := range vec.Tiers() {
		defer vec.SetTier(tier)()
		for _, f := range slicesOfOne {
			for n := range 3*widest + 2 {
				for off := range widest {
					x, xOK := guarded(n, off)
					dst, dstOK := guarded(n, (3*off+n)%widest)
					want := make([]float64, n)
					for i := range x {
						x[i] = argument(rng)
						want[i] = f.one(x[i])
					}
					f.slice(dst, x)
					f.slice(x, x)
					if !xOK() || !dstOK() {
						t.Fatalf("%s of %d in tier %s wrote outside its slice", f.name, n, tier)
					}
					for i := range want {
						if !sameBits(dst[i], want[i]) || !sameBits(x[i], want[i]) {
							t.Fatalf("%s of %d in tier %s: element %d is %v, in place %v, want %v", f.name, n, tier, i, dst[i], x[i], want[i])
						}
					}
				}
			}
		}
	}
}

func TestLengthsMustAgree(t *testing.T) {
	refuses := func(name string, f func()) {
		t.Helper()
		defer func() {
			if r := recover(); r != "vec: slices of different lengths" {
				t.Errorf("%s: recovered %v", name, r)
			}
		}()
		f()
	}
	three, four := make([]float64, 3), make([]float64, 4)
	for _, f := range slicesOfOne {
		refuses(f.name, func() { f.slice(three, four) })
	}
	refuses("LogRatio, k", func() { vec.LogRatio(three, three, four) })
	for j := range 18 {
		b := newBatch(4)
		*append(inputs(b), outputs(b)...)[j] = three
		refuses("All", b.All)
		if j < 13 {
			refuses("Core", b.Core)
		}
		if j < 8 {
			refuses("Prices", b.Prices)
		}
	}
	b := newBatch(4) // outputs that are not asked for need not be there
	for _, p := range outputs(b)[1:] {
		*p = nil
	}
	b.Prices()
}

// A batch made on the caller's stack stays there.
func TestNothingIsAllocated(t *testing.T) {
	src := ordinaryBatch(43, 300)
	x, outcome := make([]float64, 300), make([]vec.Implied, 300)
	for _, tier := range vec.Tiers() {
		defer vec.SetTier(tier)()
		for name, f := range map[string]func(){
			"All":    func() { b := *src; b.All() },
			"Core":   func() { b := *src; b.Core() },
			"Prices": func() { b := *src; b.Prices() },
			"Exp":    func() { vec.Exp(x, src.Vol) }, "Log": func() { vec.Log(x, src.Vol) }, "LogRatio": func() { vec.LogRatio(x, src.Spot, src.Strike) },
			"ImpliedVol": func() { vec.ImpliedVol(x, outcome, src.Spot, src.Strike, src.Time, src.Price, src.Sign) },
			"NormPDF":    func() { vec.NormPDF(x, src.Vol) }, "NormCDF": func() { vec.NormCDF(x, src.Vol) },
		} {
			if n := testing.AllocsPerRun(20, f); n != 0 {
				t.Errorf("%s in tier %s allocates %v times", name, tier, n)
			}
		}
	}
}

// Goroutines on parts of one batch do what one call does on the whole.
func TestConcurrentUse(t *testing.T) {
	const n, parts = 10_000, 7
	whole, split := ordinaryBatch(44, n), ordinaryBatch(44, n)
	whole.All()
	var wg sync.WaitGroup
	for p := range parts {
		lo, hi := p*n/parts, (p+1)*n/parts
		part := new(vec.BSM)
		for j, s := range inputs(part) {
			*s = (*inputs(split)[j])[lo:hi]
		}
		for j, s := range outputs(part) {
			*s = (*outputs(split)[j])[lo:hi]
		}
		wg.Go(part.All)
	}
	wg.Wait()
	compareBits(t, "in parts", split, snapshot(outputs(whole)))
	if math.IsNaN(whole.Price[0]) {
		t.Error("no price")
	}
}
