package parquet

import (
	"encoding/binary"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"nightbook/schema"
)

// Slices of doubles of every length and mixture: the smallest and the largest,
// the nulls, and the values that are not null.
func TestFloats(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	special := []float64{0, math.Copysign(0, -1), math.MaxFloat64, -math.MaxFloat64, math.SmallestNonzeroFloat64, 1}
	for round := range 4000 {
		values := make([]float64, r.IntN(150))
		for i := range values {
			switch x := r.NormFloat64(); (r.IntN(8) + round) % 8 {
			case 0, 1:
				values[i] = special[r.IntN(len(special))]
			case 2:
				values[i] = math.NaN()
				if round%16 == 2 { // a NaN with its sign and lowest bit set
					values[i] = math.Float64frombits(0xfff0_0000_0000_0001)
				}
			case 3:
				values[i] = float64(i)
			case 4:
				values[i] = -float64(i)
			default:
				values[i] = x
			}
		}
		low, high, nulls := math.Inf(1), math.Inf(-1), 0
		var numbers, present []uint64
		for _, x := range values {
			if math.IsNaN(x) {
				nulls++
				present = append(present, 0)
				continue
			}
			low, high = math.Min(low, x), math.Max(high, x)
			numbers, present = append(numbers, math.Float64bits(x)), append(present, 1)
		}
		for name, of := range map[string]func([]float64) (float64, float64, int){"rangeOf": rangeOf, "rangeOfGeneric": rangeOfGeneric} {
			if l, h, n := of(values); l != low || h != high || n != nulls {
				t.Fatalf("%s of %v: from %v to %v, %d nulls", name, values, l, h, n)
			}
		}
		var c column
		c.present.rows = round % 64 // where a page already has rows
		dst := make([]byte, 8*len(values)+8)
		for i := range dst {
			dst[i] = 0xaa
		}
		if n := c.putPresent(dst[:8*len(values)], values); n != 8*len(numbers) {
			t.Fatalf("%v: %d bytes", values, n)
		}
		for i, want := range numbers {
			if got := binary.LittleEndian.Uint64(dst[8*i:]); got != want {
				t.Fatalf("%v: number %d is %x, want %x", values, i, got, want)
			}
		}
		if c.present.rows != round%64+len(values) || c.present.nulls != nulls {
			t.Fatalf("%v: %d rows, %d nulls", values, c.present.rows, c.present.nulls)
		}
		if c.present.mixed() {
			for i, want := range present {
				at := round%64 + i
				if c.present.words[at/64]>>(at%64)&1 != want {
					t.Fatalf("%v: row %d has the level %d", values, i, 1-want)
				}
			}
		}
		if nulls == 0 {
			putFloats(dst[:8*len(values)], values)
			for i, want := range numbers {
				if got := binary.LittleEndian.Uint64(dst[8*i:]); got != want {
					t.Fatalf("%v: number %d is %x, want %x", values, i, got, want)
				}
			}
		}
		if end := binary.LittleEndian.Uint64(dst[8*len(values):]); end != 0xaaaa_aaaa_aaaa_aaaa {
			t.Fatalf("%d values: written beyond the end", len(values))
		}
	}
}

// A value at fault is named by its row, the first one if there are more.
func TestFaults(t *testing.T) {
	const n = pageRows + 300
	for name, c := range map[string]struct {
		vector func() schema.Vector
		want   string
	}{
		"null": {func() schema.Vector {
			v := schema.Vector{Kind: schema.KindFloats, Floats: make([]float64, n)}
			v.Floats[pageRows+70], v.Floats[pageRows+71] = math.NaN(), math.NaN()
			return v
		}, errNull.Error()},
		"infinity": {func() schema.Vector {
			v := schema.Vector{Kind: schema.KindFloats, Floats: make([]float64, n)}
			v.Floats[pageRows+70], v.Floats[pageRows+71] = math.Inf(-1), math.Inf(1)
			return v
		}, errNotFinite.Error()},
		"no date": {func() schema.Vector {
			v := schema.Vector{Kind: schema.KindDates, Dates: make([]schema.Date, n)}
			v.Dates[pageRows+70] = schema.NoDate
			return v
		}, errNull.Error()},
		"no choice": {func() schema.Vector {
			v := schema.Vector{Kind: schema.KindChoices, Choices: make([]schema.Choice, n), Names: []string{"", "a"}}
			for i := range n {
				v.Choices[i] = 1
			}
			v.Choices[pageRows+70] = 0
			return v
		}, errNull.Error()},
		"no text": {func() schema.Vector {
			var v schema.Vector
			for i := range n {
				v.Strings.AppendString(strings.Repeat("x", min(1, abs(i-pageRows-70))))
			}
			return v
		}, errNull.Error()},
	} {
		v := c.vector()
		table := schema.Table{Name: "t", Columns: []schema.Column{{Name: "it", Type: v.Type(), Required: true}}}
		w, err := New(new(counting), table, Options{})
		if err != nil {
			t.Fatal(err)
		}
		err = w.Write(&schema.Frame{N: n, Cols: []schema.Vector{v}})
		if want := fmt.Sprintf("row %d: %s", pageRows+71, c.want); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v, want %q", name, err, want)
		}
	}
}

func abs(n int) int { return max(n, -n) }
