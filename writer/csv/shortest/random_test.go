package shortest

import (
	"flag"
	"math"
	"math/big"
	"math/rand/v2"
	"strconv"
	"testing"
)

var long = flag.Int("long", 1, "try so many million random numbers of each kind")

func TestRandom(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 25))
	for range *long * 1_000_000 {
		check(t, finite(r.Uint64()))
		check(t, r.NormFloat64()*math.Exp(r.Float64()*60-30)) // as columns hold them
		// Decimals of few digits, and a neighbour of each.
		x := float64(r.Int64N(1e15)>>r.IntN(50)) / []float64{1, 10, 100, 1e3, 1e4, 1e6, 1e9, 1e12, 1e15, 1e18, 1e22}[r.IntN(11)]
		check(t, x)
		check(t, math.Nextafter(x, -1))
	}
}

// scaled must be as exact as it says, for every exponent.
func TestScaled(t *testing.T) {
	r := rand.New(rand.NewPCG(6, 26))
	for q := 1 - 1075; q <= 2046-1075; q++ {
		var two big.Rat // 2^q
		two.SetInt(new(big.Int).Lsh(big.NewInt(1), uint(max(q, -q))))
		if q < 0 {
			two.Inv(&two)
		}
		for try := range 40 {
			c := 1<<52 | r.Uint64N(1<<52)>>(try%20)
			switch try {
			case 0:
				c = 1 << 52
			case 1:
				c = 1<<53 - 1
			}
			k, whole, fraction, half := scaled(c, q)
			ten := powerOfTen(k)
			interval := new(big.Rat).Quo(&two, ten)
			if interval.Cmp(big.NewRat(1, 1)) < 0 || interval.Cmp(big.NewRat(10, 1)) >= 0 {
				t.Fatalf("2^%d/10^%d is not from 1 to below 10", q, k)
			}
			if whole < 1<<52 || whole >= 10<<53 {
				t.Fatalf("c %d, q %d: whole part %d", c, q, whole)
			}
			// The true value, in units of 2^-64, less what scaled returned.
			exact := new(big.Rat).Mul(interval, big.NewRat(int64(c), 1))
			exact.Mul(exact, unit(64))
			got := new(big.Int).Lsh(new(big.Int).SetUint64(whole), 64)
			got.Add(got, new(big.Int).SetUint64(fraction))
			below(t, "c·2^q/10^k", c, q, exact.Sub(exact, new(big.Rat).SetInt(got)))
			width := new(big.Rat).Mul(interval, unit(59)) // half of it in units of 2^-60
			below(t, "2^q/10^k/2", c, q, width.Sub(width, new(big.Rat).SetInt(new(big.Int).SetUint64(half))))
		}
	}
}

func below(t *testing.T, what string, c uint64, q int, e *big.Rat) {
	if e.Sign() < 0 || e.Cmp(big.NewRat(2, 1)) >= 0 {
		t.Fatalf("%s for c %d, q %d is off by %s units", what, c, q, e.FloatString(3))
	}
}

func unit(n uint) *big.Rat { return new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), n)) }

func powerOfTen(k int) *big.Rat {
	x := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(k, -k))), nil))
	if k < 0 {
		x.Inv(x)
	}
	return x
}

// What strconv decides must stay rare among what columns hold. From 1e12 on it is
// not: a double has few bits after the point then, and ties are frequent.
func TestRarelySlow(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 27))
	hard := 0
	for range 1_000_000 {
		x := r.NormFloat64() * math.Exp(r.Float64()*60-30)
		if math.Abs(x) >= 1e6 {
			continue
		}
		b := math.Float64bits(x)
		_, whole, fraction, half := scaled(b&(1<<52-1)|1<<52, int(b>>52)&0x7ff-1075)
		last := whole % 10
		if above := last<<60 | fraction>>4; closeTo(above, half) || closeTo(10<<60-above, half) || closeTo(fraction, 1<<63) {
			hard++
		}
	}
	if hard > 0 {
		t.Errorf("%d of a million random numbers are left to strconv", hard)
	}
}

func closeTo(a, b uint64) bool { return a-b+4 <= 8 }

func TestInt(t *testing.T) {
	one := func(n int64) {
		var dst [Size]byte
		if got, want := string(dst[:Int(&dst, n)]), strconv.FormatInt(n, 10); got != want {
			t.Fatalf("%s is written %q", want, got)
		}
	}
	r := rand.New(rand.NewPCG(8, 28))
	for n := int64(1); n > 0; n *= 10 {
		for d := int64(-2000); d < 2000; d++ {
			one(n + d)
			one(d - n)
		}
	}
	for range 1_000_000 {
		one(int64(r.Uint64()) >> r.IntN(64))
	}
	for d := range int64(1000) {
		one(math.MaxInt64 - d)
		one(math.MinInt64 + d)
	}
}

// Every word of eight digits, by its two halves.
func TestEight(t *testing.T) {
	for i := range uint64(1e4) {
		for _, x := range []uint64{i, i * 1e4, i*1e4 + 9999, 9999e4 + i, i*1e4 + i} {
			w, got := eight(x), uint64(0)
			for range 8 {
				got, w = got*10+w&0xff, w>>8
			}
			if got != x {
				t.Fatalf("%d has the digits of %d", x, got)
			}
		}
	}
}

func FuzzFloat(f *testing.F) {
	for _, c := range hard {
		f.Add(math.Float64bits(c.x))
	}
	f.Fuzz(func(t *testing.T, b uint64) { around(t, math.Float64frombits(b), 1) })
}
