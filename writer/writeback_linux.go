package writer

import (
	"os"

	"golang.org/x/sys/unix"
)

// startWriteback lets the system begin to write n bytes of the file to the disk,
// and does not wait for it. A system that does not care is none the worse: Close
// asks for all of it again.
func startWriteback(f *os.File, at, n int64) {
	_ = unix.SyncFileRange(int(f.Fd()), at, n, unix.SYNC_FILE_RANGE_WRITE)
}
