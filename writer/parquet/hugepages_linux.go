package parquet

import (
	"unsafe"

	"golang.org/x/sys/unix"
)

// hugePages asks the system to back memory with large pages: to get it in small
// ones takes more time than to fill it. A system that cannot is none the worse.
func hugePages(b []byte) {
	const huge = 2 << 20
	start := uintptr(unsafe.Pointer(unsafe.SliceData(b)))
	end := (start + uintptr(len(b)) + huge - 1) &^ (huge - 1)
	start &^= huge - 1
	_, _, _ = unix.Syscall(unix.SYS_MADVISE, start, end-start, unix.MADV_HUGEPAGE)
}
