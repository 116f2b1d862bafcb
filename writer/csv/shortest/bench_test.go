package shortest

import (
	"math"
	"math/rand/v2"
	"strconv"
	"testing"
)

// benchNumbers are what columns hold.
func benchNumbers() map[string][]float64 {
	r := rand.New(rand.NewPCG(1, 2))
	m := map[string][]float64{}
	for range 4096 {
		m["figures"] = append(m["figures"], r.NormFloat64()*math.Pow(10, float64(r.IntN(9)-3)))
		m["money"] = append(m["money"], r.NormFloat64()*1e5)
		m["tiny"] = append(m["tiny"], r.Float64()*1e-16)
		m["cents"] = append(m["cents"], math.Round(r.Float64()*1e5)/100)
		m["whole"] = append(m["whole"], math.Round(r.NormFloat64()*1e3))
		m["bits"] = append(m["bits"], finite(r.Uint64()))
	}
	return m
}

func BenchmarkFloat(b *testing.B) {
	for name, list := range benchNumbers() {
		b.Run(name, func(b *testing.B) {
			var dst [Size]byte
			i := 0
			for b.Loop() {
				Float(&dst, list[i&4095])
				i++
			}
		})
		b.Run("strconv/"+name, func(b *testing.B) {
			var dst [Size]byte
			i := 0
			for b.Loop() {
				strconv.AppendFloat(dst[:0], list[i&4095], 'f', -1, 64)
				i++
			}
		})
	}
}

func finite(b uint64) float64 {
	x := math.Float64frombits(b)
	if x-x != 0 {
		return math.Float64frombits(b &^ (1 << 62))
	}
	return x
}
