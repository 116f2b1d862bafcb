package shortest

import (
	"math"
	"testing"
)

// hard are published cases, all of them recalled from memory: strconv has to
// agree with each.
var hard = []struct {
	x    float64
	want string
}{
	// Steele and White (1990), Gay (1990), and the bugs of runtimes that
	// R. Giulietti's paper (2021) opens with.
	{1.3, "1.3"},
	{4.0 / 3, "1.3333333333333333"},
	{2e23, "2e+23"},
	{9.5e-87, "9.5e-87"},
	{8.41e21, "8.41e+21"},
	{2.0e-3, "0.002"},
	{2.2250738585072014e-308, "2.2250738585072014e-308"}, // the smallest normal double
	{2.2250738585072011e-308, "2.225073858507201e-308"},  // the largest subnormal one
	{5e-324, "5e-324"},
	{9.109e-31, "9.109e-31"},
	{5.0e-324 * 3, "1.5e-323"},
	// U. Adams, "Ryū: fast float-to-string conversion" (2018), its tests.
	{2.98023223876953125e-8, "2.9802322387695312e-08"},
	{-2.109808898695963e16, "-21098088986959630"},
	{4.940656e-318, "4.940656e-318"},
	{1.18575755e-316, "1.18575755e-316"},
	{2.989102097996e-312, "2.989102097996e-312"},
	{9.0608011534336e15, "9060801153433600"},
	{4.708356024711512e18, "4708356024711512000"},
	{9.409340012568248e18, "9409340012568248000"},
	{1.2345678, "1.2345678"},
	{math.Float64frombits(0x4830f0cf064dd592), "5.764607523034235e+39"},
	{math.Float64frombits(0x4840f0cf064dd592), "1.152921504606847e+40"},
	{math.Float64frombits(0x4850f0cf064dd592), "2.305843009213694e+40"},
	{9007199254740991, "9007199254740991"},
	// V. Paxson, "A program for testing IEEE decimal–binary conversion" (1991):
	// closest to halfway between decimals of some digits. Of four of his decimals
	// of 17 digits there is a shorter one, which stands here.
	{math.Ldexp(8511030020275656, -342), "9.5e-88"},
	{math.Ldexp(5201988407066741, -824), "4.65e-233"},
	{math.Ldexp(6406892948269899, 237), "1.415e+87"},
	{math.Ldexp(8431154198732492, 72), "3.9815e+37"},
	{math.Ldexp(6475049196144587, 99), "4.10405e+45"},
	{math.Ldexp(8274307542972842, 726), "2.920845e+234"},
	{math.Ldexp(5381065484265332, -456), "2.8919465e-122"},
	{math.Ldexp(6761728585499734, -1057), "4.37877185e-303"},
	{math.Ldexp(7976538478610756, 376), "1.227701635e+129"},
	{math.Ldexp(5982403858958067, 377), "1.8415524525e+129"},
	{math.Ldexp(5536995190630837, 93), "5.48357443505e+43"},
	{math.Ldexp(7225450889282194, 710), "3.891901811465e+229"},
	{math.Ldexp(7225450889282194, 709), "1.9459509057325e+229"},
	{math.Ldexp(8703372741147379, 117), "1.44609583816055e+51"},
	{math.Ldexp(8944262675275217, -1001), "4.173677474585315e-286"},
	{math.Ldexp(7459803696087692, -707), "1.1079507728788885e-197"},
	{math.Ldexp(6080469016670379, -381), "1.234550136632744e-99"},
	{math.Ldexp(8385515147034757, 721), "9.25031711960365e+232"},
	{math.Ldexp(7514216811389786, -828), "4.19804715028489e-234"},
	{math.Ldexp(8397297803260511, -345), "1.1716315319786511e-88"},
	{math.Ldexp(6733459239310543, 202), "4.328100728446125e+76"},
	{math.Ldexp(8091450587292794, -473), "3.317710118160031e-127"},
}

func TestHardCases(t *testing.T) {
	for _, c := range hard {
		var dst [Size]byte
		if got := string(dst[:Float(&dst, c.x)]); got != c.want {
			t.Errorf("%x is written %s, want %s", c.x, got, c.want)
		}
		around(t, c.x, 100)
	}
}
