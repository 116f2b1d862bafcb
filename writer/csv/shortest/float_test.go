package shortest

import (
	"math"
	"strconv"
	"testing"
)

// reference writes x with strconv, in the text format of this package.
func reference(b []byte, x float64) []byte {
	a := math.Abs(x)
	switch {
	case a < 1e15 && x == math.Trunc(x) && (x != 0 || !math.Signbit(x)):
		return strconv.AppendInt(b, int64(x), 10)
	case x != 0 && (a < 1e-6 || a >= 1e21):
		return strconv.AppendFloat(b, x, 'e', -1, 64)
	}
	return strconv.AppendFloat(b, x, 'f', -1, 64)
}

func check(t testing.TB, x float64) {
	var dst, want [Size]byte
	n := Float(&dst, x)
	if w := reference(want[:0], x); string(dst[:n]) != string(w) {
		t.Fatalf("%x is written %q, strconv says %q", math.Float64bits(x), dst[:n], w)
	}
}

// around checks both signs of x and of its neighbours.
func around(t testing.TB, x float64, ulps int) {
	b := int64(math.Float64bits(x))
	for i := -ulps; i <= ulps; i++ {
		if x := math.Float64frombits(uint64(b + int64(i))); x-x == 0 {
			check(t, x)
			check(t, -x)
		}
	}
}

func TestPowersOfTwoAndTen(t *testing.T) {
	for e := -1074; e < 1024; e++ {
		around(t, math.Ldexp(1, e), 40)
	}
	for e := -324; e <= 308; e++ {
		for digit := 1; digit < 10; digit++ {
			x, err := strconv.ParseFloat(strconv.Itoa(digit)+"e"+strconv.Itoa(e), 64)
			if err != nil && e < 308 {
				t.Fatal(err)
			}
			around(t, x, 40)
		}
	}
}

func TestSmallestAndLargest(t *testing.T) {
	around(t, 0, 5000)                            // subnormal numbers
	around(t, 0x1p-1022, 5000)                    // where they end
	around(t, math.MaxFloat64, 5000)              //
	around(t, 1e15, 5000)                         // where integers end
	around(t, 1e-6, 5000)                         // where exponents begin
	around(t, 1e21, 5000)                         //
	for x := 0x1p50; x < 0x1p56; x *= 1.0000137 { // quarters, halves, odd and even numbers: ties
		around(t, x, 8)
	}
}
