package vec_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"nightbook/risk/vec"
)

// The same bits in every tier, and the same bits as the machine had on which the
// hashes below were written. The inputs are made with exactly specified
// operations only, so that they too are the same everywhere.

const (
	randomLines  = 1_000_000
	hostileLines = 10_000
)

func TestBitsOfBSM(t *testing.T) {
	// Written by the scalar form on amd64; to be changed only together with the formula's arithmetic.
	const wantHash = 0x1cfbecf86f02c010
	b := newBatch(randomLines + hostileLines)
	rng := rand.New(rand.NewPCG(11, 12))
	for i := range randomLines {
		wide(rng).put(b, i)
	}
	for i := range hostileLines {
		hostile(rng).put(b, randomLines+i)
	}
	restore := vec.SetTier("scalar")
	b.All()
	restore()
	want := snapshot(outputs(b))
	if h := hash(outputs(b)); h != wantHash {
		t.Errorf("hash of the scalar results %#x, want %#x", h, uint64(wantHash))
	}
	for _, name := range vec.Tiers() {
		t.Run(name, func(t *testing.T) {
			defer vec.SetTier(name)()
			for _, run := range []struct {
				name string
				do   func()
				outs int
			}{{"All", b.All, 11}, {"Core", b.Core, 6}, {"Prices", b.Prices, 1}} {
				scribble(outputs(b))
				run.do()
				compareBits(t, run.name, b, want[:run.outs])
			}
		})
	}
}

func TestBitsOfSlices(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 14))
	x, k, dst, want := make([]float64, randomLines), make([]float64, randomLines), make([]float64, randomLines), make([]float64, randomLines)
	for i := range x {
		x[i], k[i] = argument(rng), argument(rng)
	}
	for _, f := range []struct {
		name  string
		slice func(dst, x []float64)
		one   func(i int) float64
		hash  uint64 // as wantHash above
	}{
		{"Exp", vec.Exp, func(i int) float64 { return vec.Exp1(x[i]) }, 0x8c9aac6f50f593ff},
		{"Log", vec.Log, func(i int) float64 { return vec.Log1(x[i]) }, 0xf88158015c2c11bd},
		{"LogRatio", func(dst, x []float64) { vec.LogRatio(dst, x, k) }, func(i int) float64 { return vec.LogRatio1(x[i], k[i]) }, 0x252413242f6819e2},
		{"NormPDF", vec.NormPDF, func(i int) float64 { return vec.NormPDF1(x[i]) }, 0x017584b73dd19ebd},
		{"NormCDF", vec.NormCDF, func(i int) float64 { return vec.NormCDF1(x[i]) }, 0xd503515774aeb334},
	} {
		for i := range want {
			want[i] = f.one(i)
		}
		if h := hash([]*[]float64{&want}); h != f.hash {
			t.Errorf("%s: hash of the scalar results %#x, want %#x", f.name, h, f.hash)
		}
		for _, tier := range vec.Tiers() {
			restore := vec.SetTier(tier)
			scribble([]*[]float64{&dst})
			f.slice(dst, x)
			restore()
			for i := range dst {
				if !sameBits(dst[i], want[i]) {
					t.Fatalf("%s in tier %s: f(%x, %x) = %x, the scalar form gives %x", f.name, tier, x[i], k[i], dst[i], want[i])
				}
			}
		}
	}
}

// The random lines are of use only if most of them take the vector path, and
// some do not.
func TestRandomLinesMeetTheBox(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	inside := 0
	for range 10000 {
		if l := wide(rng); vec.InBox(l.s, l.k, l.t, l.v, l.r, l.q, l.w) {
			inside++
		}
	}
	if inside < 8000 || inside == 10000 {
		t.Errorf("%d of 10000 random lines are in the box", inside)
	}
	for range 10000 {
		if l := ordinary(rng); !vec.InBox(l.s, l.k, l.t, l.v, l.r, l.q, l.w) {
			t.Fatalf("ordinary line %+v is outside the box", l)
		}
	}
}

// wide draws lines from the ordinary to the absurd.
func wide(rng *rand.Rand) line {
	l := line{
		k: spread(rng, 1, 1e4), r: float64(rng.Float64()*0.2) - 0.05, q: float64(rng.Float64()*0.1) - 0.02,
		w: float64(1 - 2*rng.IntN(2)),
	}
	switch rng.IntN(10) {
	case 0: // far from the strike
		l.s, l.t, l.v = l.k*spread(rng, 1e-6, 1e6), spread(rng, 0.01, 10), spread(rng, 0.05, 2)
	case 1: // about to expire, sometimes within seconds
		l.s, l.t, l.v = l.k*spread(rng, 0.9, 1.1), spread(rng, 1e-9, 1e-3), spread(rng, 0.05, 1)
	case 2: // hardly any volatility
		l.s, l.t, l.v = l.k*spread(rng, 0.99, 1.01), spread(rng, 0.01, 10), spread(rng, 1e-8, 1e-2)
	case 3: // too much volatility
		l.s, l.t, l.v = l.k*spread(rng, 0.1, 10), spread(rng, 0.1, 50), spread(rng, 1, 500)
	case 4: // at the strike
		l.s, l.t, l.v = l.k, spread(rng, 1e-4, 5), spread(rng, 0.01, 1)
	case 5: // decades away, at high rates
		l.s, l.t, l.v = l.k*spread(rng, 0.1, 10), spread(rng, 20, 300), spread(rng, 0.05, 1)
		l.r, l.q = float64(l.r*10), float64(l.q*10)
	default:
		l.s, l.t, l.v = l.k*spread(rng, 0.5, 2), spread(rng, 0.01, 5), spread(rng, 0.05, 1)
	}
	return l
}

// spread draws from [lo, hi], uniformly in the logarithm.
func spread(rng *rand.Rand, lo, hi float64) float64 {
	return float64(lo * vec.Exp1(rng.Float64()*vec.LogRatio1(hi, lo)))
}

var hostileValues = []float64{
	0, math.Copysign(0, -1), math.SmallestNonzeroFloat64, -math.SmallestNonzeroFloat64, 1e-310, 0x1p-1022, 0x1p-1023,
	1e-300, 1e-160, 0x1p-512, 0x1p-129, 0x1p-128, 0x1p-24, 0x1.fffffffffffffp-25, 1e-8, 0.5, 1, -1, 1.5, 0x1.fffffffffffffp0, 2, -2, 100,
	0x1.fffffffffffffp7, 256, 709, -709, 746, 1e8, 0x1.fffffffffffffp127, 0x1p128, 0x1p512, 1e160, 1e300, -1e300,
	math.MaxFloat64, -math.MaxFloat64, math.Inf(1), math.Inf(-1), math.NaN(),
}

// hostile draws lines with one to seven values that no market quotes.
func hostile(rng *rand.Rand) line {
	l := wide(rng)
	f := []*float64{&l.s, &l.k, &l.t, &l.v, &l.r, &l.q, &l.w}
	for range 1 + rng.IntN(7) {
		*f[rng.IntN(len(f))] = hostileValues[rng.IntN(len(hostileValues))]
	}
	return l
}

// argument draws arguments for the functions of one number.
func argument(rng *rand.Rand) float64 {
	switch rng.IntN(20) {
	case 0:
		return hostileValues[rng.IntN(len(hostileValues))]
	case 1:
		return math.Float64frombits(rng.Uint64())
	case 2:
		return r2(rng) * 800
	case 3:
		return r2(rng) * 40
	}
	return spread(rng, 1e-3, 30) * float64(1-2*(rng.IntN(4)/3))
}

func sameBits(x, y float64) bool {
	return math.Float64bits(x) == math.Float64bits(y) || x != x && y != y
}

func compareBits(t *testing.T, what string, b *vec.BSM, want [][]float64) {
	t.Helper()
	for j, w := range want {
		got := *outputs(b)[j]
		for i := range w {
			if !sameBits(got[i], w[i]) {
				t.Fatalf("%s: %s of line %d, %v, is %x, the scalar form gives %x", what, outputNames[j], i, lineAt(b, i), got[i], w[i])
			}
		}
	}
}

// hash is FNV-1a over 64-bit words, with a shift so that sign bits are mixed too;
// all NaN are taken as one.
func hash(columns []*[]float64) uint64 {
	h := uint64(14695981039346656037)
	for _, c := range columns {
		for _, x := range *c {
			u := math.Float64bits(x)
			if x != x {
				u = 0x7FF8000000000000
			}
			h = (h ^ u) * 1099511628211
			h ^= h >> 32
		}
	}
	return h
}

func snapshot(columns []*[]float64) [][]float64 {
	var s [][]float64
	for _, c := range columns {
		s = append(s, append([]float64(nil), *c...))
	}
	return s
}

// scribble overwrites slices, so that no earlier result can pass for a new one.
func scribble(columns []*[]float64) {
	for _, c := range columns {
		for i := range *c {
			(*c)[i] = -12345
		}
	}
}

func (l line) String() string {
	return fmt.Sprintf("{s %x k %x t %x v %x r %x q %x w %x}", l.s, l.k, l.t, l.v, l.r, l.q, l.w)
}
