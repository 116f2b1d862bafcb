package csv

import (
	"fmt"
	"testing"

	"nightbook/schema"
	"nightbook/writer/internal/invent"
)

func BenchmarkWriteLines(b *testing.B) {
	dicts := schema.NewDicts()
	var f schema.Frame
	invent.Lines(0, schema.BatchRows, dicts).Frame(dicts, &f)
	for _, workers := range []int{1, 2} {
		b.Run(fmt.Sprintf("workers=%d", workers), func(b *testing.B) {
			b.ReportAllocs()
			var size counting
			w, err := New(&size, schema.LinesTable(invent.Extra), Options{Workers: workers})
			if err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				if err := w.Write(&f); err != nil {
					b.Fatal(err)
				}
			}
			rows := float64(f.N) * float64(b.N)
			b.ReportMetric(rows/b.Elapsed().Seconds(), "rows/s")
			b.ReportMetric(float64(size)/rows, "B/row")
		})
	}
}

type counting int64

func (c *counting) Write(p []byte) (int, error) {
	*c += counting(len(p))
	return len(p), nil
}
