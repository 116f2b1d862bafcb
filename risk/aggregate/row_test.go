package aggregate

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"strings"
	"testing"

	"nightbook/schema"
)

// hostile draws the numbers that fronts might get wrong: at and beyond their ends,
// full mantissas, subnormals, zeros of both signs, and those that cancel.
func hostile(rng *rand.Rand) func() float64 {
	var before []float64
	return func() float64 {
		x := rng.NormFloat64() * 1e4
		switch rng.IntN(10) {
		case 0:
			x = anyFinite(rng)
		case 1:
			x = math.Ldexp(math.Nextafter(2, 0), -128+rng.IntN(3)) // the low end
		case 2:
			x = math.Ldexp(math.Nextafter(2, 0), 95+rng.IntN(3)) // the high end
		case 3:
			x = math.Copysign(0, rng.Float64()-0.5)
		case 4:
			x = math.Float64frombits(rng.Uint64() & (1<<63 | 1<<53 - 1))
		case 5:
			x = 1e308
		case 6, 7:
			if n := len(before); n > 0 {
				k := rng.IntN(n)
				x, before[k], before = -before[k], before[n-1], before[:n-1]
				return x
			}
		}
		if rng.IntN(2) == 0 {
			x = -x
		}
		before = append(before, x)
		return x
	}
}

// The sums of lines are those of arbitrary-precision arithmetic of the standard
// library, whatever the numbers, the lines of a book at a time, and the merges.
func TestTotalsAreExactlyRounded(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	for round := range 6 {
		d := schema.NewDicts()
		totals, err := NewTotals(tree3, d)
		if err != nil {
			t.Fatal(err)
		}
		books := []string{"N1", "North", "South", "Lone"}[:1+round%4]
		draw := hostile(rng)
		byBook, byCurrency := map[string][]float64{}, map[string][]float64{}
		for range 5 {
			var lots []lot
			for range rng.IntN(3000) {
				l := lot{books[rng.IntN(len(books))], fmt.Sprint("U", rng.IntN(3)), []string{"EUR", "USD"}[rng.IntN(2)], rng.IntN(9) == 0, schema.Priced, draw(), draw(), draw()}
				lots = append(lots, l)
				for _, above := range map[string][]string{"N1": {"N1", "North", "House"}, "North": {"North", "House"}, "South": {"South", "House"}, "Lone": {"Lone"}}[l.book] {
					byBook[above] = append(byBook[above], l.base)
				}
				byCurrency[l.currency] = append(byCurrency[l.currency], l.value)
			}
			totals.AddLines(batchOf(d, lots), kindOf)
		}
		s := new(schema.Summary)
		// Some are beyond the range of doubles, which is told, and infinite in s.
		if err := totals.Summary(t.Context(), s); err != nil && !strings.Contains(err.Error(), "beyond the range") {
			t.Fatal(err)
		}
		for _, b := range s.Books {
			for m, got := range b.Measures {
				if m > 0 { // value times m+1 has been rounded line by line
					continue
				}
				if want := exact(byBook[b.Book]); got != want {
					t.Errorf("round %d: book %s: %v, want %v", round, b.Book, got, want)
				}
			}
		}
		for _, c := range s.Currencies {
			if got, want := c.Local[schema.Value], exact(byCurrency[c.Currency]); got != want {
				t.Errorf("round %d: currency %s: %v, want %v", round, c.Currency, got, want)
			}
		}
	}
}

// One book takes more lines than a front has room for, each the largest that it takes.
func TestFrontsAreEmptiedInTime(t *testing.T) {
	largest := math.Ldexp(math.Nextafter(2, 0), 96)
	for _, x := range []float64{largest, -largest, math.Ldexp(largest, -31), -math.Nextafter(0x1p-127, 1)} {
		var lots []lot
		var xs []float64
		for range 3*headroom + 7 {
			lots = append(lots, lot{"Lone", "U", "EUR", false, schema.Priced, x, x, x})
			xs = append(xs, x)
		}
		s := summaryOf(t, lots, nil)
		if got, want := s.Total.Measures[schema.Value], exact(xs); got != want {
			t.Errorf("%d times %v are %v, want %v", len(xs), x, got, want)
		}
		if got, want := s.Currencies[0].Local[schema.Value], exact(xs); got != want {
			t.Errorf("%d times %v are %v in its currency, want %v", len(xs), x, got, want)
		}
	}
}

// Sums made apart and merged have the bits of sums made together.
func TestMergedRows(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 14))
	for range 20 {
		draw := hostile(rng)
		parts := make([]row, 1+rng.IntN(30))
		var xs []float64
		for range rng.IntN(6000) {
			x := draw()
			xs = append(xs, x)
			r := &parts[rng.IntN(len(parts))]
			r.reserve()
			addOnce(3, []*row{r}, []float64{x})
		}
		var all row
		for i := range parts {
			all.merge(&parts[i])
		}
		if got, want := all.round(3), exact(xs); got != want {
			t.Fatalf("%d numbers in %d parts: %v, want %v", len(xs), len(parts), got, want)
		}
	}
}

func TestSummaryEndsWithItsContext(t *testing.T) {
	d := schema.NewDicts()
	totals, err := NewTotals(nil, d)
	if err != nil {
		t.Fatal(err)
	}
	totals.AddLines(batchOf(d, []lot{{"A", "U", "EUR", false, schema.Priced, 1, 1, 1}}), kindOf)
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	if err := totals.Summary(ctx, new(schema.Summary)); !errors.Is(err, context.Canceled) {
		t.Errorf("error %v", err)
	}
}

// BenchmarkManyBooks adds up 20,000 books that have a line each.
func BenchmarkManyBooks(b *testing.B) {
	rng := rand.New(rand.NewPCG(15, 16))
	const n = 20_000
	lots := make([]lot, n)
	for i := range lots {
		x := rng.NormFloat64() * 1e4
		lots[i] = lot{fmt.Sprint("B", i), "U", "EUR", false, schema.Priced, 1, x, x}
	}
	d := schema.NewDicts()
	batch := batchOf(d, lots)
	var before, after runtime.MemStats
	for b.Loop() {
		totals, err := NewTotals(nil, d)
		if err != nil {
			b.Fatal(err)
		}
		runtime.GC()
		runtime.ReadMemStats(&before)
		totals.AddLines(batch, kindOf)
		runtime.ReadMemStats(&after)
		if err := totals.Summary(context.Background(), new(schema.Summary)); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/book")
	b.ReportMetric(float64(after.TotalAlloc-before.TotalAlloc)/n, "B/book")
}
