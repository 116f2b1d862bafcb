package market

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/interp"

	"nightbook/schema"
)

// smile returns points of a plausible smile about the forward 100.
func smile(rng *rand.Rand, n int) []point {
	var p []point
	strike := 60.0
	for range n {
		strike += 1 + 12*rng.Float64()
		k := math.Log(strike / 100)
		p = append(p, point{strike, 0.2 - 0.1*k + 0.3*k*k + 0.01*rng.Float64()})
	}
	return p
}

// The reference is gonum's interp.FritschButland, a general numerical library.
func TestSliceAgreesWithGeneralLibrary(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	for range 200 {
		s, err := newSlice(0.7, 100, smile(rng, 2+rng.IntN(12)), false)
		if err != nil {
			t.Fatal(err)
		}
		var ref interp.FritschButland
		if err := ref.Fit(s.k, s.w); err != nil {
			t.Fatal(err)
		}
		lo, hi := s.k[0]-0.2, s.k[len(s.k)-1]+0.2
		for i := range 101 {
			k := lo + (hi-lo)*float64(i)/100
			if got, want := s.variance(k), ref.Predict(k); math.Abs(got-want) > 1e-15 {
				t.Fatalf("w(%v) = %v, gonum %v (k %v, w %v)", k, got, want, s.k, s.w)
			}
		}
	}
}

func TestSliceIsMonotoneAndMeetsItsPoints(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 1))
	for range 200 {
		p := smile(rng, 2+rng.IntN(10))
		s, err := newSlice(0.5, 100, p, false)
		if err != nil {
			t.Fatal(err)
		}
		for i := range s.k {
			if got := s.variance(s.k[i]); math.Abs(got-s.w[i]) > 1e-16 {
				t.Fatalf("point %d: %v, want %v", i, got, s.w[i])
			}
			if i == 0 {
				continue
			}
			lo, hi := min(s.w[i-1], s.w[i]), max(s.w[i-1], s.w[i])
			for u := 0.0; u <= 1; u += 0.05 {
				if w := s.variance(s.k[i-1] + u*(s.k[i]-s.k[i-1])); w < lo-1e-16 || w > hi+1e-16 {
					t.Fatalf("between points %d and %d: %v outside [%v, %v]", i-1, i, w, lo, hi)
				}
			}
		}
	}
}

func TestSurfaceInTime(t *testing.T) {
	as := asOf(t)
	at := func(days int, strike, vol float64) schema.VolRow {
		return schema.VolRow{Underlying: "U", Day: as.Day + schema.Date(days), Minute: schema.NoMinute, Strike: strike, Vol: vol}
	}
	// forward 100·e^(0.1·T): the same k is another strike at each expiry
	forward := func(T float64, _ schema.Date) float64 { return 100 * math.Exp(0.1*T) }
	s, past, err := newSurface([]schema.VolRow{
		at(365, 90, 0.25), at(365, 110, 0.21), at(730, 90, 0.24), at(730, 150, 0.20), at(-3, 100, 0.5),
	}, as, false, forward)
	if err != nil || len(past) != 1 || len(s.slices) != 2 {
		t.Fatalf("surface %v, past %v, error %v", s, past, err)
	}
	w1, w2 := s.slices[0].variance(0.05), s.slices[1].variance(0.05)
	for _, x := range []struct {
		T, vol float64
		inside bool
	}{
		{1, math.Sqrt(w1), true}, {2, math.Sqrt(w2 / 2), true},
		{1.25, math.Sqrt((0.75*w1 + 0.25*w2) / 1.25), true},
		{0.3, math.Sqrt(w1), false}, {4, math.Sqrt(w2 / 2), false},
	} {
		smile := s.Smile(x.T)
		vol, inside := smile.Vol(0.05), smile.Inside
		if math.Abs(vol-x.vol) > 1e-15 || inside != x.inside {
			t.Errorf("Vol(0.05, %v) = %v, %v; want %v, %v", x.T, vol, inside, x.vol, x.inside)
		}
	}
	// flat ends in strike
	year := s.Smile(1)
	if v := year.Vol(-9); math.Abs(v-0.25) > 1e-15 {
		t.Errorf("far below the strikes %v, want 0.25", v)
	}
	if v := year.Vol(9); math.Abs(v-0.21) > 1e-15 {
		t.Errorf("far above the strikes %v, want 0.21", v)
	}
}

// The piece that a moneyness falls into is the one that looking at all of them finds.
func TestPieceOfAMoneyness(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 1))
	for n := 2; n < 40; n++ {
		s, err := newSlice(0.5, 100, smile(rng, n), false)
		if err != nil {
			t.Fatal(err)
		}
		for i := 1; i < n; i++ {
			for i0 := range s.pieces { // each piece of its own value
				x := float64(i0 + 1)
				s.pieces[i0].b0, s.pieces[i0].b1, s.pieces[i0].b2, s.pieces[i0].b3 = x, x, x, x
			}
			inner := (s.k[i-1] + s.k[i]) / 2
			if got := s.variance(inner); math.Abs(got-float64(i)) > 1e-12 {
				t.Fatalf("%d strikes: between %d and %d the piece of value %v", n, i-1, i, got)
			}
			if i == n-1 {
				break
			}
			if got := s.variance(s.k[i]); math.Abs(got-float64(i)) > 1e-12 {
				t.Fatalf("%d strikes: at %d the piece of value %v", n, i, got)
			}
			if got := s.variance(math.Nextafter(s.k[i], 9)); math.Abs(got-float64(i+1)) > 1e-12 {
				t.Fatalf("%d strikes: above %d the piece of value %v", n, i, got)
			}
		}
	}
}

func TestOnePointIsAFlatSlice(t *testing.T) {
	s, err := newSlice(0.25, 100, []point{{120, 0.3}}, false)
	if err != nil {
		t.Fatal(err)
	}
	for _, k := range []float64{-1, 0, 0.18, 2} {
		if w := s.variance(k); w != 0.3*0.3*0.25 {
			t.Errorf("w(%v) = %v", k, w)
		}
	}
}

func TestStrikesThatCannotBeToldApart(t *testing.T) {
	if _, err := newSlice(1, 1, []point{{1, 0.2}, {1, 0.3}}, false); err == nil {
		t.Error("two volatilities at one strike were taken")
	}
}
