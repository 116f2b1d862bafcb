package reader

import (
	"errors"
	"flag"
	"math/rand/v2"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"testing"
	"time"

	"nightbook/schema"
)

var corruptions = flag.Int("corruptions", 80, "how many times TestCorrupted damages each form of file")

// corrupted returns a file damaged as disks, transfers and half-made copies damage
// files, and what was done to it.
func corrupted(rng *rand.Rand, whole string) (damaged []byte, how string) {
	b := []byte(whole)
	at := rng.IntN(len(b))
	n := min(1+rng.IntN(1<<(1+rng.IntN(12))), len(b)-at)
	switch rng.IntN(7) {
	case 0:
		for range 1 + rng.IntN(8) {
			b[rng.IntN(len(b))] ^= 1 << rng.IntN(8)
		}
		return b, "bits flipped"
	case 1:
		return b[:at], "cut short"
	case 2:
		return slices.Insert(b, at, slices.Clone(b[at:at+n])...), "a block twice"
	case 3:
		clear(b[at : at+n])
		return b, "a block of zeros"
	case 4:
		return slices.Delete(b, at, at+n), "a block missing"
	case 5:
		for i := at; i < at+n; i++ {
			b[i] = byte(rng.Uint32())
		}
		return b, "a block of noise"
	}
	from := rng.IntN(len(b) - n + 1)
	copy(b[at:at+n], slices.Clone(b[from:from+n]))
	return b, "a block of another place"
}

// However a file is damaged, reading it ends soon and in little memory, under a
// ceiling or without, with an error that names it or with rows that are all
// accounted for.
func TestCorrupted(t *testing.T) {
	text := desk(700, 5)
	undamaged := content(mustRead(t, map[string]string{"positions.csv": text}))
	for name, whole := range map[string]string{
		"positions.csv": text, "positions.csv.gz": gzipped(t, text), "positions.csv.zst": zstandard(t, text),
		"positions.parquet": parquetOf(t, text), "positions.xlsx": sheetOf(t, text),
	} {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			rng := rand.New(rand.NewPCG(7, uint64(len(name))))
			dir := folderOf(t, map[string]string{"positions.csv": "", name: whole})
			path := filepath.Join(dir, name)
			refused, read := 0, 0
			for k := range *corruptions {
				b, how := corrupted(rng, whole)
				if err := os.WriteFile(path, b, 0o666); err != nil {
					t.Fatal(err)
				}
				begun := time.Now()
				s, err := readUnder(dir, int64(k%2)<<28)
				if took := time.Since(begun); took > 10*time.Second {
					t.Errorf("damage %d, %s: %v", k, how, took)
				}
				if err != nil {
					refused++
					if !strings.Contains(err.Error(), path) || errors.Is(err, errChanged) {
						t.Errorf("damage %d, %s: %v", k, how, err)
					}
					continue
				}
				read++
				// Checksums stand around all that these hold.
				if name != "positions.csv" && name != "positions.parquet" && content(s) != undamaged {
					t.Errorf("damage %d, %s: reads otherwise, and no error", k, how)
				}
				var rows int64
				rejects := 0
				for _, x := range s.batches {
					rows += int64(x.N)
					for _, status := range x.Status[:x.N] {
						if status == schema.Rejected {
							rejects++
						}
					}
				}
				if rows != s.positions.Rows() || rejects != len(s.rejects()) {
					t.Errorf("damage %d, %s: %d rows in batches of %d read, %d refused with %d rejects", k, how, rows, s.positions.Rows(), rejects, len(s.rejects()))
				}
			}
			var m runtime.MemStats
			runtime.ReadMemStats(&m)
			if m.HeapSys > 1<<30 {
				t.Errorf("the heap has grown to %d MiB", m.HeapSys>>20)
			}
			t.Logf("%d refused, %d read", refused, read)
			if refused == 0 && name != "positions.csv" {
				t.Error("no damage was told")
			}
		})
	}
}
