package parquet

import (
	"os"
	"testing"

	"nightbook/schema"
	"nightbook/writer/csv"
	"nightbook/writer/internal/invent"
)

func TestZZDump(t *testing.T) {
	const n = 2*groupRows + 5000
	dict := schema.NewDict()
	for _, codec := range []string{"zstd", "snappy", "gzip", "none"} {
		var frames []*schema.Frame
		for from := 0; from < n; from += 4096 {
			frames = append(frames, invent.Rows(from, min(4096, n-from), dict))
		}
		os.WriteFile("/tmp/duck/every_"+codec+".parquet", write(t, invent.Table, Options{Workers: 2, Version: "0.1", Compression: codec, Metadata: map[string]string{"as_of": "2026-01-30"}}, frames...), 0o644)
		if codec == "zstd" {
			f, _ := os.Create("/tmp/duck/every.csv")
			w, _ := csv.New(f, invent.Table, csv.Options{BareText: true})
			for _, fr := range frames {
				if err := w.Write(fr); err != nil {
					t.Fatal(err)
				}
			}
			f.Close()
		}
	}
	os.WriteFile("/tmp/duck/empty.parquet", write(t, invent.Table, Options{}), 0o644)
}
