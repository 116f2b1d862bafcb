package parquet

import (
	"encoding/binary"
	"fmt"
	"math/rand/v2"
	"testing"

	"nightbook/schema"
)

func BenchmarkUnpack(b *testing.B) {
	rng := rand.New(rand.NewPCG(4, 4))
	for _, width := range []int{1, 3, 7, 10, 14, 17} {
		b.Run(fmt.Sprint(width, " bits"), func(b *testing.B) {
			data := binary.AppendUvarint(nil, schema.BatchRows/8<<1|1)
			for range schema.BatchRows / 8 * width {
				data = append(data, byte(rng.Uint32()))
			}
			var h hybrid
			for b.Loop() {
				h.reset(data, width)
				if _, err := h.next(schema.BatchRows); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/schema.BatchRows, "ns/value")
		})
	}
}
