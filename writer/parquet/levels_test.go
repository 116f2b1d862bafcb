package parquet

import (
	"bytes"
	"encoding/binary"
	"math/rand/v2"
	"slices"
	"testing"
)

// hybrid is appendHybrid as it reads in the format's description, run after run
// and bit after bit.
func hybrid(dst []byte, values []uint32, width int) []byte {
	packed := func(values []uint32) {
		if len(values) == 0 {
			return
		}
		groups := (len(values) + 7) / 8
		dst = binary.AppendUvarint(dst, uint64(groups)<<1|1)
		bits := make([]byte, groups*width)
		for i, v := range values {
			for b := range width {
				at := i*width + b
				bits[at/8] |= byte(v>>b&1) << (at % 8)
			}
		}
		dst = append(dst, bits...)
	}
	literal, i := 0, 0
	for i < len(values) {
		run := 1
		for i+run < len(values) && values[i+run] == values[i] {
			run++
		}
		fill := (8 - (i-literal)%8) % 8
		if run-fill >= 8 {
			packed(values[literal : i+fill])
			dst = binary.AppendUvarint(dst, uint64(run-fill)<<1)
			dst = append(dst, binary.LittleEndian.AppendUint32(nil, values[i])[:(width+7)/8]...)
			literal = i + run
		}
		i += run
	}
	packed(values[literal:])
	return dst
}

// patterns are n values of width bits in runs of all lengths.
func patterns(r *rand.Rand, n, width int) map[string][]uint32 {
	most := uint32(1)<<width - 1
	lists := map[string][]uint32{}
	for name, next := range map[string]func(last uint32) uint32{
		"noise":       func(uint32) uint32 { return r.Uint32() & most },
		"all equal":   func(uint32) uint32 { return most },
		"alternating": func(last uint32) uint32 { return last ^ most },
		"two values":  func(uint32) uint32 { return r.Uint32() % 2 },
		"runs": func(last uint32) uint32 {
			if r.IntN(9) > 0 {
				return last
			}
			return r.Uint32() & most
		},
		"long runs": func(last uint32) uint32 {
			if r.IntN(100) > 0 {
				return last
			}
			return r.Uint32() & most
		},
	} {
		last := most
		for range n {
			last = next(last)
			lists[name] = append(lists[name], last)
		}
	}
	return lists
}

func TestHybrid(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for width := 1; width <= 32; width++ {
		lengths := []int{1000, 4099}
		for n := range 70 {
			lengths = append(lengths, n)
		}
		for _, n := range lengths {
			for name, values := range patterns(r, n, width) {
				before := []byte("before")
				got := appendHybrid(slices.Clone(before), values, width)
				if want := hybrid(before, values, width); !bytes.Equal(got, want) {
					t.Fatalf("%s, %d values of %d bits:\n% x, want\n% x", name, n, width, got, want)
				}
			}
		}
	}
}

func TestLevels(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for round := range 3000 {
		var p presence
		if round%2 == 1 { // words of the page before are not looked at
			for i := range p.words {
				p.words[i] = ^uint64(0)
			}
		}
		var levels []uint32
		for range r.IntN(8) {
			n := 1 + r.IntN(200)
			switch r.IntN(4) {
			case 0:
				p.addValues(n)
				levels = append(levels, slices.Repeat([]uint32{1}, n)...)
			case 1:
				p.addNulls(n)
				levels = append(levels, slices.Repeat([]uint32{0}, n)...)
			default:
				n = 1 + n%64
				mask := r.Uint64()
				if n%3 == 0 {
					mask |= r.Uint64() | r.Uint64()<<7 | r.Uint64()>>5
				}
				mask &= ^uint64(0) >> (64 - n)
				p.add(mask, n)
				for i := range n {
					levels = append(levels, uint32(mask>>i&1))
				}
			}
		}
		checkLevels(t, &p, levels)
	}
	var p presence
	var levels []uint32
	for range pageRows / 64 { // a full page
		mask := r.Uint64()
		p.add(mask, 64)
		for i := range 64 {
			levels = append(levels, uint32(mask>>i&1))
		}
	}
	checkLevels(t, &p, levels)
}

func checkLevels(t *testing.T, p *presence, levels []uint32) {
	t.Helper()
	want := hybrid([]byte{0, 0, 0, 0}, levels, 1)
	binary.LittleEndian.PutUint32(want, uint32(len(want)-4))
	nulls := 0
	for _, level := range levels {
		nulls += 1 - int(level)
	}
	if p.rows != len(levels) || p.nulls != nulls {
		t.Fatalf("%d rows, %d nulls; want %d and %d", p.rows, p.nulls, len(levels), nulls)
	}
	// A page of one level alone is one run, however short.
	if nulls == 0 || nulls == len(levels) {
		want = appendRun(want[:4], len(levels), uint32(1-min(nulls, 1)), 1)
		binary.LittleEndian.PutUint32(want, uint32(len(want)-4))
	}
	if got := p.appendLevels(nil); !bytes.Equal(got, want) {
		t.Fatalf("levels %v:\n% x, want\n% x", levels, got, want)
	}
}

func TestBits(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for n := range 100 {
		flags, want := make([]byte, n), make([]byte, (n+7)/8)
		for i := range flags {
			flags[i] = byte(r.IntN(2))
			want[i/8] |= flags[i] << (i % 8)
		}
		if got := appendBits(nil, flags); !bytes.Equal(got, want) {
			t.Errorf("%v: % x, want % x", flags, got, want)
		}
	}
}
