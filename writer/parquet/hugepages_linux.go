package parquet

import "golang.org/x/sys/unix"

// hugePages asks the system to back memory with large pages: to get it in small
// ones takes more time than to fill it. A system that cannot is none the worse.
func hugePages(b []byte) { _ = unix.Madvise(b, unix.MADV_HUGEPAGE) }
