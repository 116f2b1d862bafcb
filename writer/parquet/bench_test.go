package parquet

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"testing"

	"nightbook/schema"
	"nightbook/writer/internal/invent"
)

// benchmarkFrames are row groups' worth of lines, in batches.
func benchmarkFrames(n int) []*schema.Frame {
	dicts := schema.NewDicts()
	var frames []*schema.Frame
	for from := 0; from < n; from += schema.BatchRows {
		f := new(schema.Frame)
		invent.Lines(from, min(schema.BatchRows, n-from), dicts).Frame(dicts, f)
		frames = append(frames, f)
	}
	return frames
}

func BenchmarkWriteLines(b *testing.B) {
	const n = mostRows
	frames := benchmarkFrames(n)
	table := schema.LinesTable(invent.Extra)
	for _, codec := range []string{"zstd", "snappy", "gzip", "none"} {
		for _, workers := range []int{1, 2} {
			b.Run(fmt.Sprintf("%s/workers=%d", codec, workers), func(b *testing.B) {
				b.ReportAllocs()
				w, err := New(io.Discard, table, Options{Workers: workers, Compression: codec})
				if err != nil {
					b.Fatal(err)
				}
				for b.Loop() {
					for _, f := range frames {
						if err := w.Write(f); err != nil {
							b.Fatal(err)
						}
					}
				}
				b.ReportMetric(float64(n)*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
				var whole bytes.Buffer
				one, err := New(&whole, table, Options{Workers: workers, Compression: codec})
				if err != nil {
					b.Fatal(err)
				}
				for _, f := range frames {
					if err := one.Write(f); err != nil {
						b.Fatal(err)
					}
				}
				b.ReportMetric(float64(whole.Len())/n, "B/row")
			})
		}
	}
}

func BenchmarkRangeOf(b *testing.B) {
	for name, of := range map[string]func(int) float64{
		"numbers": noise,
		"null":    func(int) float64 { return math.NaN() },
		"mixed":   func(i int) float64 { return []float64{noise(i), math.NaN()}[int64(noise(i))%20/19] },
	} {
		values := make([]float64, checkRows)
		for i := range values {
			values[i] = of(i)
		}
		b.Run(name, func(b *testing.B) {
			b.SetBytes(8 * checkRows)
			for b.Loop() {
				rangeOf(values)
			}
		})
	}
}
