package parquet

import (
	"testing"
	"unsafe"
)

// A slab is huge pages of its own: the advice touches no other memory.
func TestSlab(t *testing.T) {
	for range 4 {
		slab := newSlab()
		if at := uintptr(unsafe.Pointer(&slab[0])); len(slab) != slabBytes || at%(2<<20) != 0 || len(slab)%(2<<20) != 0 {
			t.Errorf("%d bytes at %x", len(slab), at)
		}
	}
}
