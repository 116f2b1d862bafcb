package reader

import (
	"math"
	"math/rand/v2"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

func TestParseNumberForms(t *testing.T) {
	for _, text := range []string{
		"0", "-0", "+0", "1", "-1", "+1", "12.5", ".5", "5.", "-.5", "1e3", "1E3", "1e+3", "1e-3", "1.5e10", "007", "0000000000000000000000000001",
		"9007199254740993", "0.1", "123456789012345678", "1234567890123456789", "12345678901234567890", "0.000000000000000000000000001",
		"1e22", "1e23", "1e-22", "1e-23", "123456789e22", "1.7976931348623157e308", "5e-324", "2.2250738585072014e-308", "1e-400", "0e999", "0e-999",
		"4503599627370496.5", "9007199254740992e22", "9007199254740993e22", "3.14159265358979323846264338327950288",
		"100000000000000016777215", "100000000000000016777216", strings.Repeat("1", 300), "0." + strings.Repeat("0", 400) + "1",
	} {
		want, err := strconv.ParseFloat(text, 64)
		if err != nil {
			t.Fatalf("%s: %v", text, err)
		}
		got, ok := parseNumber([]byte(text))
		if !ok || math.Float64bits(got) != math.Float64bits(want) {
			t.Errorf("%s: %v %v, want %v", text, got, ok, want)
		}
	}
	for _, text := range []string{
		"", "+", "-", ".", "e5", "1e", "1e+", "--1", "+-1", "1 2", " 1", "1 ", "1_000", "1,000", "0x1p3", "0X10", "inf", "Inf", "-inf", "infinity", "nan", "NaN",
		"1.2.3", "1e5.5", "1e5e5", "1f", "1%", "$1", "1e400", "-1e400", strings.Repeat("9", 400), "١", "1\x00", "½",
	} {
		if x, ok := parseNumber([]byte(text)); ok {
			t.Errorf("%q reads as %v", text, x)
		}
	}
}

func TestParseCommaNumber(t *testing.T) {
	for text, want := range map[string]float64{
		"1,5": 1.5, "1.234,5": 1234.5, "1.234": 1234, "1.234.567": 1234567, "-1.234.567,89": -1234567.89, "+12,5": 12.5, "0,001": 0.001, ",5": 0.5,
		"1234567,5": 1234567.5, "1e3": 1000, "1,5e-3": 0.0015, "1.234e2": 123400, "12.345,": 12345, "7": 7, "-0,25": -0.25,
	} {
		var scratch []byte
		got, ok := parseCommaNumber([]byte(text), &scratch)
		if !ok || got != want {
			t.Errorf("%s: %v %v, want %v", text, got, ok, want)
		}
	}
	for _, text := range []string{
		"", "1.5", "1.23", "1234.567", ".123", "1..234", "1.234.56", "1.2345", "1,234.5", "1,2,3", "1.234,5.6", "1,5e1.0", "1.", "1.23,4", "a", "1,5x", "-.123,4", "- 1", "1.234e1,5",
	} {
		var scratch []byte
		if x, ok := parseCommaNumber([]byte(text), &scratch); ok {
			t.Errorf("%q reads as %v", text, x)
		}
	}
}

// decimal is the grammar of parseNumber, said in another way.
var decimal = regexp.MustCompile(`^[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?$`)

// agrees compares parseNumber with the grammar and the standard library.
func agrees(t *testing.T, s string) {
	t.Helper()
	got, ok := parseNumber([]byte(s))
	want, err := strconv.ParseFloat(s, 64)
	if ok != (err == nil && decimal.MatchString(s)) {
		t.Errorf("%q: %v %v, the standard library says %v %v", s, got, ok, want, err)
	} else if ok && math.Float64bits(got) != math.Float64bits(want) {
		t.Errorf("%q: %v, want %v", s, got, want)
	}
}

// Random numbers of every length and size read as the standard library reads them, bit for bit.
func TestParseNumberLikeStandardLibrary(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 3))
	for range 200_000 {
		var s string
		switch rng.IntN(4) {
		case 0: // any double, written short
			s = strconv.FormatFloat(math.Float64frombits(rng.Uint64()), 'g', -1, 64)
			if strings.ContainsAny(s, "IN") {
				continue
			}
		case 1: // a price
			s = strconv.FormatFloat(rng.NormFloat64()*1000, 'f', rng.IntN(8), 64)
		case 2: // halfway cases around 2⁵³
			s = strconv.FormatUint(1<<53+uint64(rng.IntN(1<<12)), 10) + "e" + strconv.Itoa(rng.IntN(50)-25)
		default:
			digits := 1 + rng.IntN(25)
			var b strings.Builder
			for range digits {
				b.WriteByte(byte('0' + rng.IntN(10)))
			}
			s = b.String()
			at := rng.IntN(digits + 1)
			s = s[:at] + "." + s[at:] + "e" + strconv.Itoa(rng.IntN(80)-40)
		}
		agrees(t, s)
	}
}

func FuzzNumber(f *testing.F) {
	for _, s := range []string{"1", "-12.5e3", "9007199254740993", "1e22", "0x10", "1_0", "nan", "+.5", "1.234,5"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		agrees(t, s)
		var scratch []byte
		if x, ok := parseCommaNumber([]byte(s), &scratch); ok {
			// What reads with a decimal comma reads the same once it is written with a point.
			plain := strings.Replace(strings.ReplaceAll(s, ".", ""), ",", ".", 1)
			if want, ok := parseNumber([]byte(plain)); !ok || want != x {
				t.Errorf("%q reads as %v, %q as %v", s, x, plain, want)
			}
		}
	})
}

func BenchmarkParseNumber(b *testing.B) {
	text := []byte("123.4567")
	for b.Loop() {
		if _, ok := parseNumber(text); !ok {
			b.Fatal("refused")
		}
	}
}
