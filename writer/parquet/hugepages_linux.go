package parquet

import (
	"unsafe"

	"golang.org/x/sys/unix"
)

// newSlab allocates memory that is whole huge pages, and asks the system to back
// it with such: to get it in small ones takes more time than to fill it. What lies
// before and behind is never touched. A system that cannot is none the worse.
func newSlab() []byte {
	const huge = 2 << 20
	b := make([]byte, slabBytes+huge)
	skip := -int(uintptr(unsafe.Pointer(unsafe.SliceData(b)))) & (huge - 1)
	slab := b[skip:][:slabBytes]
	_ = unix.Madvise(slab, unix.MADV_HUGEPAGE)
	return slab
}
