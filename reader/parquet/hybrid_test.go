package parquet

import (
	"encoding/binary"
	"math/rand/v2"
	"testing"
)

// Values of every width come out of groups and runs, however many are asked for
// at a time, and whether or not one asks first if they are alike.
func TestHybrid(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 3))
	for width := range 33 {
		var b []byte
		var want []uint32
		for range 12 {
			mask := uint32(1<<width - 1)
			if n := 1 + rng.IntN(200); rng.IntN(2) == 0 {
				x := rng.Uint32() & mask
				b = binary.AppendUvarint(b, uint64(n)<<1)
				b = append(b, binary.LittleEndian.AppendUint32(nil, x)[:(width+7)/8]...)
				for range n {
					want = append(want, x)
				}
				continue
			}
			groups := 1 + rng.IntN(20)
			b = binary.AppendUvarint(b, uint64(groups)<<1|1)
			bits := make([]byte, groups*width)
			for i := range 8 * groups {
				x := rng.Uint32() & mask
				want = append(want, x)
				for k := range width {
					if bit := i*width + k; x>>k&1 != 0 {
						bits[bit>>3] |= 1 << (bit & 7)
					}
				}
			}
			b = append(b, bits...)
		}
		for _, most := range []int{1, 3, 9, 64, 5000} {
			var h hybrid
			h.reset(b, width)
			for at := 0; at < len(want); {
				n := min(1+rng.IntN(most), len(want)-at)
				if x, ok, err := h.alike(n); err != nil {
					t.Fatal(err)
				} else if ok {
					for ; n > 0; n-- {
						if want[at] != x {
							t.Fatalf("width %d: value %d is %d, want %d", width, at, x, want[at])
						}
						at++
					}
					continue
				}
				got, err := h.next(n)
				if err != nil {
					t.Fatal(err)
				}
				for _, x := range got {
					if want[at] != x {
						t.Fatalf("width %d: value %d is %d, want %d", width, at, x, want[at])
					}
					at++
				}
			}
			if _, err := h.next(1); err == nil {
				t.Errorf("width %d: a value behind the last", width)
			}
		}
	}
}

// An index beyond the dictionary is found wherever it stands.
func TestIndexBeyond(t *testing.T) {
	d := dictionary{size: 5}
	for n := range 40 {
		indices := make([]uint32, n)
		for i := range indices {
			indices[i] = uint32(i % 5)
		}
		if err := d.check(indices); err != nil {
			t.Errorf("%d indices: %v", n, err)
		}
		for i := range indices {
			was := indices[i]
			indices[i] = 5 // where the null stands
			if err := d.check(indices); err == nil || err.Error() != "the Parquet file is damaged: an index of 5 into a dictionary of 5 values" {
				t.Errorf("%d indices, the one at %d too large: %v", n, i, err)
			}
			indices[i] = was
		}
	}
}
